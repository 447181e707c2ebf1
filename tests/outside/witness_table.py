"""The table of witnesses: every outside check with its source, as expected and as got.

    python -m tests.outside.witness_table           # prints the table
    python -m tests.outside.witness_table --write   # and puts it into DEVELOPERS.md
"""

from __future__ import annotations

import math
import sys
from pathlib import Path

import pytest

from tests.outside.witness import RECORD, Witnessed

BEGIN, END = "<!-- witnesses: begin -->", "<!-- witnesses: end -->"
HERE = Path(__file__).parent
PAGE = HERE.parents[1] / "DEVELOPERS.md"


def figure(value: float, tolerance: float) -> str:
    """A figure to one digit beyond what its tolerance tells apart, at most nine."""
    decimals = max(0, min(9, 1 - math.floor(math.log10(tolerance)))) if tolerance else 9
    text = f"{value + 0.0:.{decimals}f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def row(one: Witnessed) -> str:
    off = abs(one.difference)
    cells = (
        one.source,
        one.what,
        figure(one.expected, one.tolerance),
        figure(one.got, one.tolerance),
        # Rounding noise differs from machine to machine; the table need not.
        "below 1e-9" if off < 1e-9 else f"{one.difference:.1e}",
        f"{one.tolerance:g}",
    )
    return "| " + " | ".join(cell.replace("|", "/") for cell in cells) + " |"


def table(record: list[Witnessed]) -> str:
    """The Markdown table, sources together in the order of their first check."""
    sources = list(dict.fromkeys(one.source for one in record))
    rows = sorted(record, key=lambda one: sources.index(one.source))
    head = "| Source | What | Expected | Got | Difference | Allowed |\n|---|---|---|---|---|---|"
    return "\n".join([head, *map(row, rows)])


def main(arguments: list[str]) -> int:
    failed = pytest.main(["-q", "-p", "no:cacheprovider", str(HERE)])
    if failed:
        return int(failed)
    text = table(RECORD)
    print(text)
    if "--write" in arguments:
        page = PAGE.read_text(encoding="utf-8")
        before, rest = page.split(BEGIN)
        after = rest.split(END)[1]
        PAGE.write_text(f"{before}{BEGIN}\n{text}\n{END}{after}", encoding="utf-8")
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
