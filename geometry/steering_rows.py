"""The steering card's rows as a person reads them: as it stands now, and at both locks."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from geometry.finding_checks.wording import Wording
from geometry.layout import SIDES, SideName, UnitName
from geometry.lengths import format_length
from geometry.plan_figures import LockRow, PlanFigures
from geometry.plan_words import far, percent_text
from geometry.solution import Solution
from geometry.steered_now import SteeredNow

NONE = "–"
_LOCK_KEYS = (
    ("rack", "Rack at the stop"),
    ("inner", "Inner wheel"),
    ("outer", "Outer wheel"),
    ("percent", "Percent Ackermann"),
    ("toe out", "Toe-out, outer at 20°"),
    ("toe out ideal", "… without any scrub"),
    ("curb", "Circle, curb to curb"),
    ("wall", "Circle, wall to wall"),
    ("scrub inner", "Scrub, inner"),
    ("scrub outer", "Scrub, outer"),
    ("camber inner", "Camber, inner"),
    ("camber outer", "Camber, outer"),
    ("caster inner", "Caster, inner"),
    ("caster outer", "Caster, outer"),
    ("toe range inner", "Toe range, inner"),
    ("toe range outer", "Toe range, outer"),
)
_TIPS = {
    "rack": "Where the rack or the pitman arm's end stands; to the car's left is positive.",
    "toe out": "How much more the inner wheel turns with the outer one at 20 degrees.",
    "toe out ideal": "The same for a car that meets the Ackermann condition.",
    **dict.fromkeys(
        ("scrub inner", "scrub outer"),
        "How far the tire is turned into the turn beyond the way it rolls.",
    ),
    **dict.fromkeys(
        ("toe range inner", "toe range outer"),
        "Bump steer at the stop: peak to peak over the chosen travel, at the tire.",
    ),
}


@dataclass(frozen=True)
class Row:
    """One line of the card: a label and a text for the left and the right column."""

    key: str
    label: str
    left: str
    right: str
    tip: str = ""


def degrees(rad: float | None) -> str:
    """An angle to a tenth of a degree with its mark."""
    if rad is None or not math.isfinite(rad):
        return NONE
    return f"{round(math.degrees(rad), 1) + 0.0:.1f}°"


def now_rows(solution: Solution, now: SteeredNow | None) -> list[Row]:
    """Both wheels in the pose that stands."""
    words = Wording(solution.layout.units)

    def both(key: str, label: str, texts: dict[SideName, str], tip: str = "") -> Row:
        return Row(key, label, texts["left"], texts["right"], tip)

    turned = {side: NONE if now is None else _turned(now.turned[side]) for side in SIDES}
    scrub = {
        side: degrees(None if now is None or now.scrub is None else now.scrub[side])
        for side in SIDES
    }
    if now is not None and now.turn is None:
        scrub = dict.fromkeys(SIDES, degrees(0.0))
    pose = {
        name: {
            side: degrees(float(getattr(state.now, name)[0]))
            for side, state in solution.sides.items()
        }
        for name in ("camber", "caster")
    }
    toe: dict[SideName, str] = {}
    for side, state in solution.sides.items():
        size = float(np.max(state.sweep.toe) - np.min(state.sweep.toe))
        known = math.isfinite(size)
        toe[side] = words.fine(2.0 * state.side.tire.radius * size) if known else NONE
    return [
        both("turned", "Wheel turned", turned, "From its own straight-ahead heading."),
        both("scrub now", "Tire scrub", scrub,
             "How far the tire is turned to the left of the way it rolls."),
        both("camber now", "Camber", pose["camber"], "Top outboard positive."),
        both("caster now", "Caster", pose["caster"], "Top rearward positive."),
        both("toe range now", "Toe range, rack here", toe,
             "Bump steer while steered: peak to peak over the chosen travel, at the tire."),
    ]


def _turned(angle: float) -> str:
    size = degrees(abs(angle))
    if size == "0.0°":
        return size
    return f"{size} {'left' if angle > 0.0 else 'right'}"


def lock_rows(figures: PlanFigures | None, units: UnitName) -> list[Row]:
    """Both turns at their stops."""
    texts: dict[SideName, dict[str, str]] = {
        turn: _lock_texts(figures, turn, units) for turn in SIDES
    }
    return [
        Row(key, label, texts["left"].get(key, NONE), texts["right"].get(key, NONE),
            _TIPS.get(key, ""))
        for key, label in _LOCK_KEYS
    ]


def _lock_texts(
    figures: PlanFigures | None, turn: SideName, units: UnitName
) -> dict[str, str]:
    lock = None if figures is None else figures.locks.get(turn)
    if figures is None or lock is None:
        return {}
    texts = _pose_texts(figures, lock, turn, units)
    toe_out = figures.plan.toe_out[turn]
    if toe_out is not None:
        texts["toe out"] = degrees(toe_out.excess)
        if toe_out.ideal_inner is not None:
            texts["toe out ideal"] = degrees(toe_out.ideal_inner - toe_out.outer)
    circle = figures.plan.turning_circle[turn]
    if circle is not None:
        texts["curb"], texts["wall"] = (
            far(circle.curb_to_curb, units), far(circle.wall_to_wall, units)
        )
        texts["scrub inner"] = degrees(circle.inner_slip)
        texts["scrub outer"] = degrees(circle.outer_slip)
    return texts


def _pose_texts(
    figures: PlanFigures, lock: LockRow, turn: SideName, units: UnitName
) -> dict[str, str]:
    words = Wording(units)
    sides: tuple[SideName, SideName] = ("left", "right") if turn == "left" else ("right", "left")
    texts = {}
    for index, (which, side) in enumerate(zip(("inner", "outer"), sides, strict=True)):
        texts[f"camber {which}"] = degrees(lock.camber[index])
        texts[f"caster {which}"] = degrees(lock.caster[index])
        size = lock.toe_range[index]
        if size is not None:
            radius = figures.layout.side(side).tire.radius
            texts[f"toe range {which}"] = words.fine(2.0 * radius * size)
    return texts | {
        "rack": format_length(lock.rack, units, mark=True),
        "inner": degrees(lock.inner),
        "outer": degrees(lock.outer),
        "percent": percent_text(lock.percent),
    }
