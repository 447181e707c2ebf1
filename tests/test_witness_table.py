"""The table of witnesses is made of checks that hold, and stands in DEVELOPERS.md."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from tests.outside import witness_table
from tests.outside.witness import Witnessed, witness
from tests.outside.witness_table import BEGIN, END, PAGE, figure, table


def test_a_figure_that_is_off_is_no_witness(monkeypatch: pytest.MonkeyPatch) -> None:
    record: list[Witnessed] = []
    monkeypatch.setattr("tests.outside.witness.RECORD", record)
    witness("a book", "a figure", 2.0, 2.04, 0.05)
    for got in (2.06, float("nan"), None):
        with pytest.raises(AssertionError, match="a figure"):
            witness("a book", "a figure", 2.0, got, 0.05)
    assert record[0] == Witnessed("a book", "a figure", 2.0, 2.04, 0.05)


def test_the_table_keeps_each_source_together() -> None:
    rows = [
        Witnessed("a book", "one", 1.0, 1.0, 0.1),
        Witnessed("a manual", "two", 2.0, 2.25, 0.5),
        Witnessed("a book", "three", 3.0, 3.0, 0.1),
    ]
    lines = table(rows).splitlines()[2:]
    assert [line.split(" | ")[1] for line in lines] == ["one", "three", "two"]
    assert "| 2 | 2.25 | 2.5e-01 | 0.5 |" in lines[2]
    assert figure(0.068478222, 0.0005) == "0.06848"


def test_the_page_holds_a_row_for_every_source_named_in_the_checks() -> None:
    page = PAGE.read_text(encoding="utf-8")
    rows = page.split(BEGIN)[1].split(END)[0].strip().splitlines()[2:]
    assert len(rows) > 80
    said = {row.split(" | ")[0].removeprefix("| ") for row in rows}
    for path in Path(witness_table.__file__).parent.glob("test_*.py"):
        text = path.read_text(encoding="utf-8")
        assert "witness(" in text, f"{path.name} goes past the table"
        for source in re.findall(r'source = "([^"]+)"', text):
            assert source in said, f"run the table again: {source}"
