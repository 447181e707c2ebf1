"""What the floor from above and the steering card say, in a builder's words."""

from __future__ import annotations

from geometry.finding_checks.wording import Wording
from geometry.layout import SIDES, SideName, UnitName
from geometry.lengths import format_length
from geometry.steering_arm import ArmMove, ArmShape, StringCheck

_ON = 0.05
"""Nearer to the string than this, mm, is on it."""
_FEET = 1828.8
"""From six feet on a distance is said in feet and inches, or in meters."""

HALF_RULE = (
    "The string check is only a rule: a car that meets it exactly has little more than half of"
    " the Ackermann condition near straight ahead, so both are shown."
)
PERCENT_RULE = (
    "Percent Ackermann: 100 × (inner − outer) / (inner − ideal outer), the ideal being the outer"
    " angle that rolls without slip beside the same inner angle."
)
CAUTION = (
    "Heating, bending or welding a steering arm or knuckle is for qualified people and may be"
    " barred where you are: fit a part made so."
)


def far(mm: float, unit: UnitName) -> str:
    """A distance that may be long: inches, or feet and inches; millimeters, or meters."""
    size = abs(mm)
    if size < _FEET:
        return format_length(size, unit, mark=True)
    if unit == "mm":
        return f"{size / 1000.0:,.2f} m"
    if size > 304.8 * 1000.0:
        return f"{size / 304.8:,.0f} ft"
    inches = round(size / 25.4)
    feet, over = divmod(inches, 12)
    return f"{feet} ft {over} in" if over else f"{feet} ft"


def center_words(left: float, unit: UnitName) -> str:
    """How far off the centerline a place on the rear axle's line is."""
    return f"{far(left, unit)} {'left' if left > 0.0 else 'right'} of center"


def off_string(check: StringCheck, unit: UnitName) -> str:
    """How far the steering arm's end is off the string."""
    if abs(check.off) < _ON:
        return "the arm's end is on the string"
    way = "outboard" if check.off > 0.0 else "inboard"
    return f"the arm's end is {Wording(unit).tape(check.off)} {way} of the string"


def arm_words(arm: ArmShape, unit: UnitName) -> str:
    """A steering arm's length and lean."""
    words = Wording(unit)
    way = "outboard" if arm.lean > 0.0 else "inboard"
    return f"{words.tape(arm.length)} long, leaning {words.angle(abs(arm.lean))} {way}"


def arm_needs(check: StringCheck, unit: UnitName) -> str:
    """The steering arm as it is, and as the string check would have it."""
    where = "ahead of" if check.arm.is_ahead else "behind"
    return (
        f"steering arm {where} the axle, {arm_words(check.arm, unit)}; on the string"
        f" {arm_words(check.needed, unit)}"
    )


def percent_text(percent: float | None) -> str:
    """A percentage as it stands on the screen, "–" where there is none."""
    return "–" if percent is None else f"{round(percent)} %"


def _way(move: float, words: Wording) -> str:
    return f"{words.tape(move)} {'outboard' if move > 0.0 else 'inboard'}"


def _toe(ranges: float | None, radius: float, words: Wording) -> str:
    """A toe range, rad, as a length at the tire."""
    return "not known" if ranges is None else words.fine(2.0 * radius * ranges)


def move_words(move: ArmMove, side: SideName, radius: float, unit: UnitName) -> str:
    """What moving the outer ends does to Ackermann and, in the same breath, to bump steer."""
    words = Wording(unit)
    if abs(move.move[side]) < _ON:
        return f"{_percent_change(move)}; there is nothing to move."
    before, alone, followed = (
        _toe(part[side], radius, words)
        for part in (move.toe_before, move.toe_alone, move.toe_followed)
    )
    said = (
        f"the outer end {_way(move.move[side], words)}: {_percent_change(move)};"
        f" toe range {before} becomes {alone}"
    )
    if move.inner is not None:
        rise = move.inner[side].up - move.layout.side(side)["tie rod inner"].up
        if abs(rise) >= _ON:
            way = "raised" if rise > 0.0 else "lowered"
            said += f", or {followed} with the inner pivot {way} {words.tape(rise)}"
    return f"{said}."


def effect_words(move: ArmMove) -> str:
    """The same for the whole car: both sides in one while they are linked."""
    layout = move.layout
    said = []
    for side in SIDES[:1] if layout.linked else SIDES:
        words = move_words(move, side, layout.side(side).tire.radius, layout.units)
        said.append(words if layout.linked else f"{side}: {words}")
    return " ".join(said)


def heading_words(now: float | None, ahead: float | None, at_20: float | None) -> str:
    """Percent Ackermann as the card's heading: what doesn't exist is left out."""
    said = [
        f"{percent_text(percent)} {where}"
        for percent, where in (
            (now, "here"),
            (ahead, "near straight ahead"),
            (at_20, "with the inner wheel at 20°"),
        )
        if percent is not None
    ]
    return f"Ackermann: {', '.join(said) or 'not known'}"


def _percent_change(move: ArmMove) -> str:
    before, after = percent_text(move.percent_before), percent_text(move.percent_after)
    if before == after:
        return f"Ackermann stays {after}"
    return f"Ackermann {before} becomes {after}"


def best_fit_words(percents: dict[str, float | None]) -> str:
    """What a bump-steer cure at the inner pivot does to Ackermann."""
    now, then = percents.get("as is"), percents.get("best fit")
    if now is None or then is None:
        return ""
    change = (
        f"leave Ackermann at {percent_text(now)}"
        if percent_text(now) == percent_text(then)
        else f"turn Ackermann from {percent_text(now)} into {percent_text(then)}"
    )
    return (
        f"The other way about: the inner pivots at their best fit for bump steer would {change}."
    )
