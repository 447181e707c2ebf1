"""Findings on any complete layout: plain words, finite numbers, no exception, no warning."""

from __future__ import annotations

import math
import re
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from geometry import layout as names
from geometry.findings import SEVERITIES, findings
from geometry.layout import Layout, Point, Rack, RelayRod, Side, Target, Tire
from geometry.solution import solve
from geometry.tolerances import FIGURES, TOLERANCES
from tests.sample_cars import CARS, DEGENERATE

# A few round values again and again, so that points coincide, line up and run parallel.
coordinate = st.one_of(
    st.sampled_from([-100.0, 0.0, 100.0, 200.0, 300.0, 400.0, 600.0]),
    st.floats(-700.0, 1500.0),
    st.sampled_from([1e-9, 1e6, 25400.0]),
)
place = st.builds(Point, coordinate, coordinate, coordinate)
BUILT: dict[str, Point] = {
    names.LOWER_INNER: Point(230, 170),
    names.LOWER_INNER_FRONT: Point(225, 175, 120),
    names.LOWER_INNER_REAR: Point(235, 165, -200),
    names.LOWER_BALL: Point(630, 185, 5),
    names.UPPER_INNER: Point(330, 385),
    names.UPPER_INNER_FRONT: Point(335, 390, 100),
    names.UPPER_INNER_REAR: Point(325, 380, -100),
    names.UPPER_BALL: Point(585, 440, -10),
    names.STRUT_TOP: Point(560, 800, -30),
    names.STRUT_LOWER: Point(625, 400, -10),
    names.TIE_OUTER: Point(640, 350, -127),
    names.TIE_INNER: Point(332, 305, -127),
    names.WHEEL_CENTER: Point(700, 310),
}


@st.composite
def sides(draw: st.DrawFn) -> Side:
    """A car's side with some of its points anywhere, perhaps all of them."""
    chosen = [names.LOWER_BALL, names.TIE_OUTER, names.TIE_INNER, names.WHEEL_CENTER]
    chosen += draw(st.sampled_from([
        [names.LOWER_INNER], [names.LOWER_INNER_FRONT, names.LOWER_INNER_REAR],
    ]))
    chosen += draw(st.sampled_from([
        [names.UPPER_INNER, names.UPPER_BALL],
        [names.UPPER_INNER_FRONT, names.UPPER_INNER_REAR, names.UPPER_BALL],
        [names.STRUT_TOP, names.STRUT_LOWER],
    ]))
    moved = draw(st.one_of(
        st.sets(st.sampled_from(chosen), max_size=2), st.just(set(chosen)),
    ))
    points: dict[str, Any] = {n: draw(place) if n in moved else BUILT[n] for n in chosen}
    if draw(st.integers(0, 5)) == 0:
        first, second = draw(st.sampled_from(chosen)), draw(st.sampled_from(chosen))
        points[first] = points[second]
    angle = st.sampled_from([0.0, 0.01, -0.2, 1.5, math.pi / 2])
    radius = draw(st.sampled_from([310.0, 1e-3, 1000.0]))
    return Side(points, Tire(radius), draw(angle), draw(angle))


targets = st.builds(
    Target,
    st.sampled_from([*FIGURES, "no such figure"]),
    st.one_of(st.none(), st.floats(-1e3, 1e3)),
    st.one_of(st.none(), st.floats(-1e3, 1e3)),
)


@st.composite
def layouts(draw: st.DrawFn) -> Layout:
    steering = draw(st.one_of(st.builds(Rack), st.builds(RelayRod, place, place, place, place)))
    tight = draw(st.sets(st.sampled_from(sorted(TOLERANCES)), max_size=4))
    return Layout(
        draw(sides()),
        draw(st.one_of(st.none(), sides())),
        steering,
        units=draw(st.sampled_from(["in", "mm"])),
        targets=tuple(draw(st.lists(targets, max_size=3))),
        tolerances=dict.fromkeys(tight, draw(st.sampled_from([0.0, 1e9, -1.0]))),
    )


@settings(max_examples=150, deadline=None, suppress_health_check=list(HealthCheck))
@given(
    layouts(),
    st.sampled_from([0.0, 40.0, -900.0]),
    st.sampled_from([0.0, 15.0, -500.0]),
    st.sampled_from([75.0, 1.0, 600.0]),
)
def test_findings_survive_any_layout(
    layout: Layout, travel: float, rack: float, span: float
) -> None:
    speaks_plainly(layout, travel, rack, span)


@pytest.mark.parametrize("name", [*CARS, *DEGENERATE])
@pytest.mark.parametrize(("travel", "rack"), [(0.0, 0.0), (60.0, 20.0), (-300.0, -200.0)])
def test_findings_survive_every_sample_car(name: str, travel: float, rack: float) -> None:
    layout = {**CARS, **DEGENERATE}[name]
    for one in (layout, layout.unlinked()):
        speaks_plainly(one, travel, rack, 75.0)


def speaks_plainly(layout: Layout, travel: float, rack: float, span: float) -> None:
    """Every finding reads as words with finite numbers, and its cure can be made."""
    # Warnings are errors in this suite, so numpy's would fail it too.
    for finding in findings(solve(layout, travel, rack, span)):
        said = f"{finding.text} {finding.detail}"
        assert not re.search(r"\b(nan|inf|None)\b|–", said, re.IGNORECASE), said
        assert "  " not in said and "-0 " not in said and said[0].isupper()
        assert finding.headline.endswith(".")
        assert finding.severity in SEVERITIES
        assert re.fullmatch(r"[a-z]+(-[a-z]+)*", finding.code)
        for number in (finding.figure, finding.tolerance):
            assert number is None or math.isfinite(number)
        if finding.cure is not None:
            for move in finding.cure.moves:
                assert all(map(math.isfinite, (move.d_over, move.d_up, move.d_fore)))
            finding.cure.applied(layout)
        held = {name for _, name in layout.nails()}
        assert set(finding.points) <= held
