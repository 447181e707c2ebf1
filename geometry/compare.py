"""As found against as planned: the figures that matter to a driver, in plain words.

Each figure has a fault size (how far it is from where it should be); better means a smaller
fault, worse a larger one. A change too small to be read as one is no change.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

import numpy as np

from geometry.finding_checks.wording import Wording
from geometry.layout import RELAY_POINTS, SIDE_POINTS, SIDES, Layout, RelayRod, SideName
from geometry.solution import CornerState, Solution
from geometry.tolerances import camber_gain, toe_length, tolerance

Verdict = Literal["better", "worse", "the same", "different", "can't be told"]


@dataclass(frozen=True)
class Compared:
    """One figure of two cars: what it is, what it was and is, and what that means.

    ``was`` and ``now`` are texts with their unit; ``sentence`` says it whole.
    """

    key: str
    heading: str
    was: str
    now: str
    verdict: Verdict
    sentence: str


@dataclass(frozen=True)
class _Figure:
    key: str
    heading: str
    read: Callable[[Solution], float | None]
    say: Callable[[Wording, float], str]
    fault: Callable[[Layout, float], float]
    means: str
    least: float


def _worst(read: Callable[[CornerState], float | None]) -> Callable[[Solution], float | None]:
    """The figure of the side where it is largest in size; None if a side has none."""

    def both(solution: Solution) -> float | None:
        values = [read(solution.sides[side]) for side in SIDES]
        known = [v for v in values if v is not None and math.isfinite(v)]
        return max(known, key=abs) if len(known) == len(values) else None

    return both


def bump_toe_change(state: CornerState) -> float | None:
    """Peak to peak of toe from ride height to full bump, mm at the tire; None if out of reach."""
    bump = state.sweep.travel >= 0.0
    toe = toe_length(state.side, state.sweep.toe[bump])
    return float(np.max(toe) - np.min(toe)) if bool(np.all(np.isfinite(toe))) else None


def _roll_center(solution: Solution) -> float | None:
    return None if solution.ride_roll_center is None else solution.ride_roll_center[1]


def _scrub(state: CornerState) -> float | None:
    return float(state.ride.scrub_radius[0])


def _outside(value: float, low: float, high: float) -> float:
    """How far a value lies outside a range."""
    return max(low - value, value - high, 0.0)


def _height(words: Wording, value: float) -> str:
    if abs(value) < 0.8:
        return "on the floor"
    return f"{words.tape(value)} {'above' if value > 0.0 else 'below'} the floor"


def _lean(words: Wording, value: float) -> str:
    per = abs(math.degrees(value)) * words.travel_step
    inch = "an inch" if words.units == "in" else "per 25 mm"
    if per < 0.005:
        return f"0° {inch}"
    return f"{per:.2f}° {inch}, leaning {'in' if value > 0.0 else 'out'}"


_FIGURES = (
    _Figure(
        "bump steer", "Bump steer", _worst(bump_toe_change), lambda words, v: words.fine(v),
        lambda layout, v: v,
        "how far each front wheel turns by itself over a bump, with the steering wheel still",
        0.13,
    ),
    _Figure(
        "camber", "Wheel lean over a bump", _worst(camber_gain), _lean,
        lambda layout, v: _outside(
            v, tolerance(layout, "camber gain low"), tolerance(layout, "camber gain high")
        ),
        "how the tire leans as the wheel rises; leaning in a little keeps it flat in a turn",
        math.radians(0.02) / 25.4,
    ),
    _Figure(
        "roll center", "Roll center", _roll_center, _height,
        lambda layout, v: _outside(
            v, tolerance(layout, "roll center low"), tolerance(layout, "roll center high")
        ),
        "the height that the front of the body rolls about",
        1.6,
    ),
    _Figure(
        "scrub", "Scrub radius", _worst(_scrub), lambda words, v: words.signed_tape(v),
        lambda layout, v: max(abs(v) - tolerance(layout, "scrub radius"), 0.0),
        "how far the tire stands beside the axis it steers about; much of it tugs at the wheel",
        1.6,
    ),
)


@dataclass(frozen=True)
class Described:
    """One figure of a single car: what it is, its value with its unit, and a sentence on it."""

    key: str
    heading: str
    value: str
    sentence: str


def described(solution: Solution) -> tuple[Described, ...]:
    """The figures that matter of one car alone, in its layout's units."""
    words = Wording(solution.layout.units)
    out = []
    for figure in _FIGURES:
        value = figure.read(solution)
        heading = _heading(figure, words, solution)
        text = "none" if value is None else figure.say(words, value)
        sentence = f"{heading}: {text}. It is {figure.means}."
        if value is None:
            sentence = f"{heading} ({figure.means}): this car has no such figure here."
        out.append(Described(figure.key, heading, text, sentence))
    return tuple(out)


def _heading(figure: _Figure, words: Wording, solution: Solution) -> str:
    """What a figure is called, with the travel it is judged over."""
    if figure.key != "bump steer":
        return figure.heading
    return f"{figure.heading} over {words.tape(solution.span)} of bump"


def compare(found: Solution, planned: Solution) -> tuple[Compared, ...]:
    """The figures that matter, as found and as planned, in the planned layout's units."""
    words = Wording(planned.layout.units)
    return tuple(_compared(figure, found, planned, words) for figure in _FIGURES)


def _compared(figure: _Figure, found: Solution, planned: Solution, words: Wording) -> Compared:
    was, now = figure.read(found), figure.read(planned)
    heading = _heading(figure, words, planned)
    if was is None or now is None:
        texts = ["none" if v is None else figure.say(words, v) for v in (was, now)]
        return Compared(
            figure.key, heading, texts[0], texts[1], "can't be told",
            f"{figure.heading} ({figure.means}) can't be compared: "
            "one of the two cars has no such figure.",
        )
    verdict = _verdict(figure, was, now, planned.layout)
    before, after = figure.say(words, was), figure.say(words, now)
    if verdict == "the same" or before == after:
        verdict = "the same"
        sentence = f"{heading}: {after}, no change. It is {figure.means}."
    else:
        sentence = f"{heading}: was {before}, now {after}. It is {figure.means}."
    return Compared(figure.key, heading, before, after, verdict, sentence)


def _verdict(figure: _Figure, was: float, now: float, layout: Layout) -> Verdict:
    if abs(now - was) < figure.least:
        return "the same"
    change = figure.fault(layout, now) - figure.fault(layout, was)
    # A quarter of a readable change decides; a move within the good range is no fault.
    if abs(change) < 0.25 * figure.least:
        return "different"
    return "better" if change < 0.0 else "worse"


def overall(rows: tuple[Compared, ...]) -> str:
    """One plain sentence on the whole: better, worse, mixed, or no change."""
    better = [row.heading.split(" over ")[0].lower() for row in rows if row.verdict == "better"]
    worse = [row.heading.split(" over ")[0].lower() for row in rows if row.verdict == "worse"]
    if better and worse:
        return f"Better in {_listed(better)}, worse in {_listed(worse)}."
    if better:
        return f"Better in {_listed(better)}, and nothing worse in these figures."
    if worse:
        return f"Worse in {_listed(worse)}, and nothing better in these figures."
    if any(row.verdict in ("different", "can't be told") for row in rows):
        return "Changed, but neither better nor worse in these figures."
    return "No change in these figures."


def _listed(names: list[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"


def differences(found: Layout, planned: Layout) -> tuple[str, ...]:
    """What was moved or changed between two layouts, a sentence each, in the planned units."""
    words = Wording(planned.units)
    out: list[str] = []
    sides: tuple[SideName, ...] = SIDES
    if found.linked and planned.linked:
        sides = ("left",)
    for side in sides:
        where = "" if len(sides) == 1 else f" ({side})"
        old, new = found.side(side), planned.side(side)
        for name in SIDE_POINTS:
            if name in old.points and name in new.points:
                moved = _moved(words, old[name], new[name])
                if moved:
                    out.append(f"{name.capitalize()}{where} {moved}.")
            elif name in old.points or name in new.points:
                out.append(f"{name.capitalize()}{where} {_gone(name in new.points)}.")
        for label, before, after in (
            ("Static camber", old.static_camber, new.static_camber),
            ("Static toe", old.static_toe, new.static_toe),
        ):
            if abs(before - after) > 1e-6:
                out.append(f"{label}{where} from {words.angle(before)} to {words.angle(after)}.")
        if abs(old.tire.radius - new.tire.radius) > 0.05:
            out.append(
                f"Tire radius{where} from {words.tape(old.tire.radius)} "
                f"to {words.tape(new.tire.radius)}."
            )
    if isinstance(found.steering, RelayRod) and isinstance(planned.steering, RelayRod):
        for name in RELAY_POINTS:
            moved = _moved(words, found.steering[name], planned.steering[name])
            if moved:
                out.append(f"{name.capitalize()} {moved}.")
    return tuple(out)


def _gone(added: bool) -> str:
    return "added" if added else "taken away"


def _moved(words: Wording, before: tuple[float, ...], after: tuple[float, ...]) -> str:
    """A move in shop words, or nothing if it is less than can be measured."""
    over, up, fore = (b - a for a, b in zip(before, after, strict=True))
    parts = [
        f"{words.tape(size)} {plus if size > 0.0 else minus}"
        for size, plus, minus in (
            (up, "up", "down"), (over, "outboard", "inboard"), (fore, "forward", "back"),
        )
        if abs(size) >= 0.05
    ]
    return "moved " + ", ".join(parts) if parts else ""
