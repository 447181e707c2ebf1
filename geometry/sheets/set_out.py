"""The set-out list: nails, strings and hand checks for laying a car out on a floor or board."""

from __future__ import annotations

import csv
import io
import math
from dataclasses import dataclass

import numpy as np

from geometry import layout as names
from geometry.finding_checks.wording import FAR, Wording
from geometry.front_view import inner_pivot_of
from geometry.layout import MM_PER_INCH, SIDES, Layout, SideName
from geometry.lengths import format_length
from geometry.linkage import Array
from geometry.sheets.nails import Nail, nails_of
from geometry.solution import CornerState, Solution

NEAR = 6000.0
"""A check farther off than this, mm, is of no use on a floor."""


@dataclass(frozen=True)
class Check:
    """A place where something must meet or pass, and the sentence that says so.

    ``side`` is None for both sides; ``over`` and ``up`` mm, None where there is no place.
    """

    title: str
    side: SideName | None
    over: float | None
    up: float | None
    sentence: str


def place_words(words: Wording, over: float, up: float) -> str:
    """A place as it is walked to: over or past the centerline, up from or below the floor."""
    least = 0.4 if words.units == "mm" else MM_PER_INCH / 64
    if abs(over) < least:
        across = "on the centerline"
    elif over > 0.0:
        across = f"{words.tape(over)} over"
    else:
        across = f"{words.tape(over)} past the centerline"
    if abs(up) < least:
        return f"{across}, on the floor line"
    return f"{across}, {words.tape(up)} {'up' if up > 0.0 else 'below the floor line'}"


def sides_of(layout: Layout) -> tuple[SideName, ...]:
    """The sides to set out: one where both are alike."""
    return ("left",) if layout.linked or layout.left == layout.right else SIDES


def checks(solution: Solution) -> tuple[Check, ...]:
    """Every hand check of a car at ride height, strings in the order they are stretched."""
    words = Wording(solution.layout.units)
    sides = sides_of(solution.layout)
    out: list[Check] = []
    for side in sides:
        out += _side_checks(solution.sides[side], words, None if len(sides) == 1 else side)
    roll = solution.ride_roll_center
    if roll is None:
        text = "The two contact strings run parallel: this car has no roll center."
        out.append(Check("Roll center", None, None, None, text))
    elif len(sides) == 1:
        text = f"The contact strings of both sides cross {place_words(words, 0.0, roll[1])}."
        out.append(Check("Roll center", None, 0.0, roll[1], text))
    else:
        side = "left" if roll[0] >= 0.0 else "right"
        text = (
            f"The left and the right contact string cross {words.tape(roll[0])} to the {side} of "
            f"the centerline, {words.signed_tape(roll[1])} up."
        )
        out.append(Check("Roll center", None, roll[0], roll[1], text))
    return tuple(out)


def _side_checks(state: CornerState, words: Wording, side: SideName | None) -> list[Check]:
    view = state.ride_view
    center = view.instant_center[:, 0]
    if not bool(state.ride.assembles[0]):
        text = "The parts of this side can't meet as measured, so there is nothing to check."
        return [Check("No checks", side, None, None, text)]
    out = [
        _arm(state, "lower", words, side),
        _arm(state, "upper", words, side),
        _center(center, words, side),
        _contact(state, words, side),
        _tie_rod(state, words, side),
    ]
    out += _best_places(state, words, side)
    return [check for check in out if check is not None]


def crossing(line: Array, over: float) -> float | None:
    """How high a front-view line (3,) stands at a distance over, mm; None if it is upright."""
    a, b, c = (float(v) for v in line)
    if not math.isfinite(a + b + c) or abs(b) < 1e-6:
        return None
    return -(a * over + c) / b


def _arm(
    state: CornerState, arm: str, words: Wording, side: SideName | None
) -> Check | None:
    """An arm's string: what it passes and where it crosses the centerline."""
    line = (state.ride_view.lower_line if arm == "lower" else state.ride_view.upper_line)[:, 0]
    if not bool(np.isfinite(line).all()):
        return None
    up = crossing(line, 0.0)
    title = f"{arm.capitalize()} arm string"
    if arm == "upper" and state.side.is_strut:
        says = "From the strut's top mount, square to the strut's axis"
        title = "Strut string"
    else:
        inner, ball = _inner_words(state, arm, words), _ball_words(state, arm, words)
        says = f"From {inner} through {ball}"
    if up is None or abs(up) > NEAR:
        return Check(title, side, None, None, f"{says}; it runs too steeply to check here.")
    return Check(
        title, side, 0.0, up, f"{says}; it crosses the centerline {_height(words, up)}."
    )


def _inner_words(state: CornerState, arm: str, words: Wording) -> str:
    """The arm's inner end as it is nailed in the front view."""
    front = state.side.points.get(f"{arm} inner pivot front")
    if front is None:
        return f"the {arm} inner pivot"
    over, up = (float(v) for v in inner_pivot_of(state.corner, arm)[:2])
    return (
        f"a nail at {place_words(words, over, up)} (where the {arm} arm's bushing line passes "
        "the axle line)"
    )


def _ball_words(state: CornerState, arm: str, words: Wording) -> str:
    """The arm's outer end as its string passes it.

    The string lies in the wheel's transverse plane; a skewed arm whose ball joint stands
    well off that plane meets it beside the joint.
    """
    line = (state.ride_view.lower_line if arm == "lower" else state.ride_view.upper_line)[:, 0]
    ball = state.side[f"{arm} ball joint"]
    off = float(line[0] * ball.over + line[1] * ball.up + line[2])
    if not words.counts(off):
        return f"the {arm} ball joint"
    over, up = ball.over - off * float(line[0]), ball.up - off * float(line[1])
    return (
        f"a nail at {place_words(words, over, up)} (beside the {arm} ball joint, as the arm "
        "is skewed)"
    )


def _height(words: Wording, up: float) -> str:
    if abs(up) < 0.2:
        return "on the floor line"
    return f"{words.tape(up)} {'up' if up > 0.0 else 'below the floor line'}"


def _center(center: Array, words: Wording, side: SideName | None) -> Check:
    over, up, weight = (float(v) for v in center)
    title = "Instant center"
    if not math.isfinite(over + up):
        text = "Both arm strings lie on one line, so they cross nowhere in particular."
        return Check(title, side, None, None, text)
    if weight != 1.0:
        text = "The two arm strings run parallel: measure them the same distance apart everywhere."
        return Check(title, side, None, None, text)
    where = place_words(words, over, up)
    if math.hypot(over, up) > FAR:
        where = words.tape(math.hypot(over, up)) + " off"
    far = " (off most floors: check the centerline crossings instead)" if (
        math.hypot(over, up) > NEAR) else ""
    return Check(title, side, over, up, f"The two arm strings cross at {where}{far}.")


def _contact(state: CornerState, words: Wording, side: SideName | None) -> Check | None:
    """From the tire's contact to the instant center: where it crosses the centerline."""
    line, contact = state.ride_view.contact_line[:, 0], state.ride.contact[:, 0]
    up = crossing(line, 0.0)
    foot = place_words(words, float(contact[1]), float(contact[2]))
    says = f"From the tire's contact point ({foot}) to the instant center"
    if float(state.ride_view.instant_center[2, 0]) == 0.0:
        says = f"From the tire's contact point ({foot}), parallel to the arm strings"
    if up is None:
        return None
    return Check(
        "Contact string", side, 0.0, up, f"{says}; it crosses the centerline {_height(words, up)}."
    )


def _tie_rod(state: CornerState, words: Wording, side: SideName | None) -> Check | None:
    """The tie rod's line against the instant center."""
    inner, outer = state.side[names.TIE_INNER], state.side[names.TIE_OUTER]
    center = state.ride_view.instant_center[:, 0]
    dx, dy = outer.over - inner.over, outer.up - inner.up
    size = math.hypot(dx, dy)
    if size < 1e-6 or not bool(np.isfinite(center).all()) or center[2] != 1.0:
        return None
    over, up = float(center[0]), float(center[1])
    says = "Along the tie rod, inner pivot and outer end"
    if abs(dx) < 1e-6:
        return None
    here = inner.up + (over - inner.over) * dy / dx
    gap = here - up
    if abs(gap) > NEAR:
        return None
    if not words.counts(gap):
        passes = "it passes through the instant center"
    else:
        passes = (
            f"at the instant center's place over, it passes {words.tape(gap)} "
            f"{'above' if gap > 0.0 else 'below'} it"
        )
    return Check("Tie-rod string", side, over, here, f"{says}; {passes}.")


_BEST = (
    ("string rule", "String rule",
     "where the string to the instant center crosses the one through both inner pivots"),
    ("curvature center", "Curvature center", "exact to second order"),
    ("best fit", "Best fit", "least toe change over the chosen travel"),
)


def _best_places(
    state: CornerState, words: Wording, side: SideName | None
) -> list[Check]:
    """The three places for the inner tie-rod pivot."""
    out = []
    for kind, title, means in _BEST:
        place = state.pivots.place(kind)
        if place is None or math.hypot(*place) > NEAR:
            continue
        if kind == "string rule" and state.side.is_strut:
            means = means.replace("both inner pivots", "lower inner pivot and strut top")
        says = f"For the inner tie-rod pivot ({means}): {place_words(words, *place)}."
        out.append(Check(title, side, *place, says))
    return out


def set_out_csv(solution: Solution) -> str:
    """Nails and checks as a CSV table in the layout's units.

    ``kind`` is nail or check; over, up and fore are decimals with their tape readings beside
    them; an empty side means both.
    """
    units = solution.layout.units
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow([
        "kind", "letter", "item", "side", f"over ({units})", f"up ({units})", f"fore ({units})",
        "over on tape", "up on tape", "fore on tape", "words",
    ])
    for nail in nails_of(solution.layout):
        writer.writerow(_nail_row(nail, solution.layout))
    for check in checks(solution):
        numbers = [_number(v, solution.layout) for v in (check.over, check.up)]
        tape = [_tape(v, solution.layout) for v in (check.over, check.up)]
        writer.writerow([
            "check", "", check.title, check.side or "", *numbers, "", *tape, "", check.sentence,
        ])
    return out.getvalue()


def _nail_row(nail: Nail, layout: Layout) -> list[str]:
    numbers = [_number(v, layout) for v in nail.place]
    tape = [_tape(v, layout) for v in nail.place]
    return ["nail", nail.letter, nail.name, nail.side or "", *numbers, *tape, ""]


def _number(value: float | None, layout: Layout) -> str:
    if value is None or not math.isfinite(value):
        return ""
    size, decimals = (value / MM_PER_INCH, 4) if layout.units == "in" else (value, 2)
    text = f"{size:.{decimals}f}".rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def _tape(value: float | None, layout: Layout) -> str:
    if value is None or not math.isfinite(value):
        return ""
    return format_length(value, layout.units)
