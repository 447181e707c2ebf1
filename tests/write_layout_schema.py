"""Write ``geometry/layout.schema.json`` anew: ``python -m tests.write_layout_schema``."""

from __future__ import annotations

from pathlib import Path

from geometry import layout_file

FILE = Path(layout_file.__file__).with_name("layout.schema.json")

if __name__ == "__main__":
    FILE.write_text(layout_file.layout_schema_text(), encoding="utf-8")
