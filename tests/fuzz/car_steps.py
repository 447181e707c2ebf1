"""What the strange cars also go through: both floors on paper, a leaning body, locks and fixes."""

from __future__ import annotations

import math
from dataclasses import fields, is_dataclass
from typing import Any

import numpy as np

from geometry.drawing import Drawing, Text
from geometry.faces import ABOVE
from geometry.fixes import fix_list
from geometry.floor_drawing import floor_drawing
from geometry.layout import SIDES, Layout
from geometry.plan_drawing import plan_drawing
from geometry.plan_figures import plan_figures
from geometry.plan_words import best_fit_words, move_words
from geometry.readouts import READOUTS, format_readout
from geometry.road import MOST_ROLL, on_road, roll_travel
from geometry.solution import Solution, solve
from geometry.standing import nail_places
from geometry.steered_now import steered_now
from geometry.steering_arm import ArmMove
from geometry.steering_rows import lock_rows, now_rows
from tests.fuzz.holding import finite, hold, plain


def numbers_of(value: Any) -> Any:
    """A drawing's item as a JSON-like tree of its parts."""
    if is_dataclass(value):
        return {field.name: numbers_of(getattr(value, field.name)) for field in fields(value)}
    if isinstance(value, list | tuple):
        return [numbers_of(inner) for inner in value]
    return value


def check_drawing(drawing: Drawing) -> None:
    """Every place in a drawing is somewhere, every word of it plain."""
    for item in drawing.items:
        finite(numbers_of(item), type(item).__name__)
        if isinstance(item, Text):
            plain(item.text)


def _check_pose(layout: Layout, solution: Solution) -> None:
    """The steering rows, readouts and both floors of one pose."""
    for row in now_rows(solution, steered_now(solution)):
        plain(f"{row.left} {row.right} {row.tip}")
    for readout in READOUTS:
        for side in SIDES:
            plain(format_readout(readout.unit, readout.read(solution, side), layout.units))
    finite([list(place) for place in nail_places(solution, ABOVE).values()], "a nail from above")
    check_drawing(floor_drawing(solution))
    for whole in (False, True):
        check_drawing(plan_drawing(solution, whole=whole))


def on_paper(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    """Both floors as drawings, and the steering as it stands."""
    if rng.random() < 0.25:
        _check_pose(layout, solution)


def leaned(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    """The body rolled over both tires, as the window poses it."""
    if rng.random() >= 0.15:
        return
    roll = float(rng.choice([-MOST_ROLL, 1e-9, 0.03, MOST_ROLL]))
    heave, rack = float(rng.choice([0.0, 40.0, -300.0])), float(rng.choice([0.0, 25.0]))
    travel = roll_travel(layout, roll, heave, rack)
    finite(dict(travel), "a wheel's travel in roll")
    _check_pose(layout, on_road(solve(layout, travel, rack, solution.span)))


def lock_to_lock(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    """The steering card and what its cures would do."""
    if rng.random() >= 0.05:
        return
    found = plan_figures(layout, solution.span, lambda: False)
    hold(found is not None, "steering figures that were stopped by nobody")
    if found is None:
        return
    for row in lock_rows(found, layout.units):
        plain(f"{row.left} {row.right} {row.tip}")
    plain(best_fit_words(dict(found.by_inner)))
    move = found.on_string
    if isinstance(move, ArmMove):
        for side in SIDES:
            plain(move_words(move, side, layout.side(side).tire.radius, layout.units))
    else:
        plain(move)


def mended(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    """The fix list of one side: each fix's own car shows what the list says of it."""
    if rng.random() >= 0.03:
        return
    side = SIDES[int(rng.integers(2))]
    found = fix_list(layout, side, span=solution.span)
    hold(found is not None, "a fix list that was stopped by nobody")
    if found is None:
        return
    plain(found.trouble)
    finite([found.present, found.tolerance], "the toe range to mend")
    for fix in found.fixes:
        plain(" ".join((fix.text, fix.remains_words(layout.units), *fix.notes)))
        finite([fix.toe_range, fix.changed, fix.other_range], fix.text)
        hold(bool(np.isfinite(fix.toe).all()), f"{fix.text} has no toe curve")
        # As every view shows it: making the moves and solving again gives what was claimed.
        shown = float(np.ptp(solve(fix.layout, span=solution.span).sides[side].centered_toe))
        hold(math.isfinite(shown), f"{fix.text} can't be built")
        off = abs(shown - fix.toe_range)
        hold(off <= 1e-9 + 1e-6 * shown, f"{fix.text} {fix.toe_range}, shown {shown}")
