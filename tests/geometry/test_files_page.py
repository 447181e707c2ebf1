"""The page on files: its examples open, and it names every item and entry there is."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from geometry import layout_file
from geometry.layout_file import job_from_text
from geometry.measure_sheet import measure_sheet_from_text
from geometry.sheet_rows import ITEMS, split_rows
from tests.sample_cars import ROADSTER

PAGE = Path(layout_file.__file__).with_name("FILES.md").read_text(encoding="utf-8")


def examples(language: str) -> list[str]:
    return re.findall(rf"```{language}\n(.*?)```", PAGE, re.DOTALL)


def test_the_examples_are_the_same_roadster() -> None:
    sheet, uneven = examples("csv")
    (layout,) = examples("json")
    car = measure_sheet_from_text(sheet).planned
    job = job_from_text(layout)
    assert car.left.points == job.planned.left.points
    assert car.assumed == ()
    assert (car.wheelbase, job.shop) == (ROADSTER.wheelbase, "Harrow Lane")
    faults: list[str] = []
    assert len(split_rows(uneven, faults)[0]) == 4 and not faults
    rest = "\n".join(f"{r}," for r in sheet.splitlines()[4:] if not r.startswith("lower"))
    both = measure_sheet_from_text(uneven + rest.replace("static toe,0.1", "static toe,0.05"))
    assert both.planned.left["lower inner pivot"] == car.left["lower inner pivot"]
    assert not both.planned.linked


@pytest.mark.parametrize("item", ITEMS)
def test_every_item_of_a_sheet_is_named(item: str) -> None:
    assert f"`{item}`" in PAGE or f"`{item.replace('upper', 'lower')}`" in PAGE


@pytest.mark.parametrize("record", [layout_file._JOB, layout_file._LAYOUT])
def test_every_entry_of_a_layout_is_named(record: layout_file.Record[object]) -> None:
    assert [f.key for f in record.fields if f"`{f.key}`" not in PAGE] == []
