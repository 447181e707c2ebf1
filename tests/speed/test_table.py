"""The table of speed can be made; how fast anything is, is not judged here."""

from __future__ import annotations

from tests.speed.table import BEGIN, END, PAGE, sweep_rows, table, zone_rows


def test_the_table_has_a_row_for_each_measure() -> None:
    lines = [*sweep_rows(small=True), *zone_rows(small=True)]
    text = table(lines)
    assert len(text.splitlines()) == 2 + len(lines) == 5
    assert all(line.count("|") == 5 for line in text.splitlines())


def test_the_page_holds_the_table_with_its_date_and_machine() -> None:
    text = PAGE.read_text(encoding="utf-8").split(BEGIN)[1].split(END)[0]
    assert "Measured on 20" in text
    assert " cores, " in text
    for what in ("general solver", "rack zone", "Live update", "figures", "window shown"):
        assert what in text
