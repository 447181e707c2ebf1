"""What every test needs before anything else: a screen that is not there."""

import os

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
