"""Thread in hold at the tie rod's adjuster."""

from __future__ import annotations

import json
from dataclasses import replace

import pytest

from geometry.findings import findings
from geometry.layout import TIE_INNER, Job, TieRod
from geometry.layout_file import job_from_text, job_to_text
from geometry.solution import solve
from geometry.tie_rod_thread import least_thread, thread_findings, thread_left, tie_rod_length
from tests.sample_cars import DEGENERATE, ROADSTER

LENGTH = tie_rod_length(ROADSTER.left)
ROD = TieRod(25.0, 14.0, None, LENGTH)


def car(rod: TieRod, shorter: float = 0.0):
    """The roadster with a tie rod whose inner end moved outboard along the rod, mm."""
    side = replace(ROADSTER.left, tie_rod=rod)
    inner, outer = side[TIE_INNER], side["tie rod outer"]
    share = shorter / LENGTH
    moved = inner._replace(**{
        key: getattr(inner, key) + share * (getattr(outer, key) - getattr(inner, key))
        for key in ("over", "up", "fore")
    })
    return replace(ROADSTER, left=side.moved(TIE_INNER, moved))


def test_a_longer_rod_eats_thread_and_a_shorter_one_gives_it_back() -> None:
    assert thread_left(car(ROD).left) == pytest.approx(25.0)
    assert thread_left(car(ROD, -6.0).left) == pytest.approx(19.0)
    assert thread_left(car(ROD, 6.0).left) == pytest.approx(31.0)
    assert thread_left(ROADSTER.left) is None


def test_the_least_is_typed_or_from_the_diameter() -> None:
    assert least_thread(ROD) == 21.0
    assert least_thread(replace(ROD, least_engaged=18.0)) == 18.0
    assert least_thread(TieRod()) is None


def test_too_little_thread_is_wrong_and_said_once_while_linked() -> None:
    assert thread_findings(car(ROD, -3.9)) == []
    (short,) = thread_findings(car(ROD, -6.0))
    assert (short.severity, short.code, short.side) == ("wrong", "thread-short", None)
    assert short.figure == pytest.approx(19.0)
    assert short.tolerance == 21.0
    assert "common practice" in short.tolerance_source
    (apart,) = thread_findings(car(replace(ROD, thread_diameter=None), -26.0))
    assert "comes apart" in apart.headline
    both = thread_findings(car(ROD, -6.0).unlinked())
    assert [one.side for one in both] == ["left", "right"]
    assert "thread-short" in {one.code for one in findings(solve(car(ROD, -6.0)))}


def test_a_file_from_before_opens_and_a_new_one_keeps_it() -> None:
    job = Job(car(ROD))
    text = job_to_text(job)
    assert job_from_text(text) == job
    old = json.loads(job_to_text(Job(ROADSTER)))
    del old["as planned"]["left"]["tie rod"]
    assert job_from_text(json.dumps(old)) == Job(ROADSTER)


@pytest.mark.parametrize("name", DEGENERATE)
def test_any_car_is_judged_without_a_fault(name: str) -> None:
    odd = DEGENERATE[name]
    odd = replace(odd, left=replace(odd.left, tie_rod=ROD))
    for one in thread_findings(odd):
        assert "nan" not in one.headline.lower() + one.detail.lower()
