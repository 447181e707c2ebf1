"""``python -m app`` is the same program as ``bobline``."""

import sys

from app.command_line import main

if __name__ == "__main__":
    sys.exit(main())
