"""What a shop can move to cure bump steer, in the steps it really has, and how far it may.

A move changes the layout the way the work changes the car: a rack takes both inner ends
with it, a taller ball joint or a moved mount keeps the upper arm and sets the camber back
with shims. Steps and stock sizes are common practice, no source.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, fields, replace
from itertools import combinations
from typing import Literal

import numpy as np

from geometry import layout as names
from geometry.corner import space
from geometry.finding_checks.wording import Wording
from geometry.layout import MM_PER_INCH, SIDES, Layout, Point, RelayRod, Side, SideName, UnitName
from geometry.lengths import format_length
from geometry.linkage import Array

Kind = Literal[
    "rack_height",
    "outer_spacer",
    "inner_width",
    "arm_end",
    "upper_mount_height",
    "upper_mount_width",
    "ball_joint",
    "knuckle_height",
]

INNER_KINDS: tuple[Kind, ...] = ("rack_height", "inner_width")
OUTER_KINDS: tuple[Kind, ...] = ("outer_spacer", "arm_end", "knuckle_height")
ARM_KINDS: tuple[Kind, ...] = ("upper_mount_height", "upper_mount_width", "ball_joint")
KINDS: tuple[Kind, ...] = (*INNER_KINDS, *OUTER_KINDS, *ARM_KINDS)

SPACERS: dict[UnitName, tuple[float, ...]] = {
    "in": tuple(MM_PER_INCH * size for size in (1 / 2, 1 / 4, 1 / 8, 1 / 16)),
    "mm": (10.0, 5.0, 3.0, 2.0, 1.0),
}
"""Stock spacer thicknesses, mm, used at most once each."""

TALLER = tuple(MM_PER_INCH * size for size in (1 / 2, 3 / 4, 1.0))
"""How much taller stock ball joints are, mm."""

STEP: dict[UnitName, float] = {"in": MM_PER_INCH / 16, "mm": 1.0}
COARSE_STEP: dict[UnitName, float] = {"in": MM_PER_INCH / 8, "mm": 3.0}
SHIM: dict[UnitName, float] = {"in": MM_PER_INCH / 32, "mm": 1.0}
HOLE: dict[UnitName, float] = {"in": MM_PER_INCH / 4, "mm": 5.0}
"""Shims go up to the first step of new holes, which go on from there."""

LEAST_LEVER = 5.0
"""An outer end nearer to the kingpin axis, mm, has no steering arm to be moved along."""

STEERING_PART = (
    "Bending, heating or welding a steering part may be barred: fit another part, or have it"
    " done by people qualified for it."
)


@dataclass(frozen=True)
class Allowances:
    """How far each kind of move may go either way on this car, mm; 0 where it can't be done.

    rack_height         the rack or relay rod up and down in its brackets
    outer_spacer        the outer tie-rod end lower under the steering arm, or on top of it
    inner_width         the inner tie-rod ends farther out or in, each
    arm_end             the outer tie-rod end along the steering arm
    upper_mount_height  the upper arm's mount up and down
    upper_mount_width   the upper arm's mount in and out, with an arm to suit
    ball_joint          a taller upper ball joint
    knuckle_height      another knuckle or steering arm with its tie-rod end higher or lower
    """

    rack_height: float = 2.0 * MM_PER_INCH
    outer_spacer: float = 15.0 / 16.0 * MM_PER_INCH
    inner_width: float = MM_PER_INCH
    arm_end: float = 0.5 * MM_PER_INCH
    upper_mount_height: float = MM_PER_INCH
    upper_mount_width: float = MM_PER_INCH
    ball_joint: float = MM_PER_INCH
    knuckle_height: float = 3.0 * MM_PER_INCH

    @classmethod
    def none(cls) -> Allowances:
        """Nothing may be moved; the start for allowing single kinds."""
        return cls(**dict.fromkeys((f.name for f in fields(cls)), 0.0))

    def of(self, kind: Kind) -> float:
        value = float(getattr(self, kind))
        return value if math.isfinite(value) and value > 0.0 else 0.0


@dataclass(frozen=True)
class ShopMove:
    """One move: its kind and size, mm; up, out and away from the kingpin are positive."""

    kind: Kind
    amount: float

    def applied(self, layout: Layout, side: SideName) -> Layout | None:
        """The car with the move made; None where the parts can't be had that way.

        A rack or relay rod moves both its ends. The rest is done on ``side``, and on both
        while the sides are linked.
        """
        if self.kind == "rack_height":
            return _rack_raised(layout, self.amount)
        own = layout.side(side)
        moved = _MOVERS[self.kind](own, self.amount)
        return None if moved is None else layout.with_side(side, moved)

    def text(self, layout: Layout, side: SideName) -> str:
        """The move as a sentence without its full stop."""
        words, size = Wording(layout.units), abs(self.amount)
        said, more = words.tape(size), self.amount > 0.0
        both = layout.linked
        if self.kind == "rack_height":
            what = "relay rod" if isinstance(layout.steering, RelayRod) else "rack"
            return f"{'Raise' if more else 'Lower'} the {what} {said}"
        if self.kind == "inner_width":
            how = (
                "on the relay rod"
                if isinstance(layout.steering, RelayRod)
                else f"({'longer' if more else 'shorter'} rack or clevis)"
            )
            ends = "each inner tie-rod end" if both else f"the {side} inner tie-rod end"
            return f"Set {ends} {said} farther {'out' if more else 'in'} {how}"
        ends = "both outer tie-rod ends" if both else f"the {side} outer tie-rod end"
        if self.kind == "outer_spacer":
            stack = _stack_words(size, layout.units)
            if more:
                return f"Raise {ends} {said}, on top of the steering arm with {stack}"
            return f"Lower {ends} {said} with {stack} under the steering arm"
        if self.kind == "arm_end":
            way = "away from" if more else "toward"
            return f"Move {ends} {said} along the steering arm {way} the kingpin"
        if self.kind == "knuckle_height":
            part = "knuckles or steering arms" if both else f"a {side} knuckle or steering arm"
            return f"Fit {part} with the tie-rod end {said} {'higher' if more else 'lower'}"
        if self.kind == "ball_joint":
            what = "upper ball joints" if both else f"a {side} upper ball joint"
            return f"Fit {what} {said} taller"
        mounts = "both upper arm mounts" if both else f"the {side} upper arm mount"
        means = "shims" if size < HOLE[layout.units] - 1e-6 else "new holes"
        if self.kind == "upper_mount_height":
            return f"{'Raise' if more else 'Lower'} {mounts} {said} ({means})"
        arm = f"{'arms' if both else 'an arm'} {said} {'shorter' if more else 'longer'}"
        return f"Set {mounts} {said} farther {'out' if more else 'in'} ({means}), with {arm}"

    @property
    def note(self) -> str:
        """What has to be said with the move; empty if nothing."""
        return STEERING_PART if self.kind in ("arm_end", "knuckle_height") else ""


def amounts(kind: Kind, allowances: Allowances, units: UnitName, *, few: bool = False) -> Array:
    """The sizes (n,), mm, in which a kind of move can be made, both ways, small ones first.

    ``few`` leaves out every other step or more, for moves tried in pairs.
    """
    most = allowances.of(kind) + 1e-9
    if kind == "ball_joint":
        return np.array([size for size in TALLER if size <= most])
    if kind == "outer_spacer":
        sizes = sorted({round(sum(stack), 6) for stack in _stacks(units)})
        one_way = [size for size in sizes if size <= most]
    elif kind in ("upper_mount_height", "upper_mount_width"):
        shim, hole = (STEP if few else SHIM)[units], HOLE[units]
        shims = np.arange(1, math.ceil(hole / shim - 1e-9)) * shim
        holes = np.arange(1, int(most / hole) + 1) * hole
        one_way = [size for size in (*shims, *holes) if size <= most]
    else:
        fine = kind in INNER_KINDS and not few
        step = (STEP if fine else COARSE_STEP)[units]
        if kind == "knuckle_height":
            step = HOLE[units] if few else COARSE_STEP[units]
        one_way = [step * n for n in range(1, int(most / step) + 1)]
    return np.array([sign * size for size in one_way for sign in (1.0, -1.0)])


def allowed_kinds(layout: Layout, side: SideName, allowances: Allowances) -> tuple[Kind, ...]:
    """The kinds of moves that may be made here: given room, no locked nail, parts to move."""
    own = layout.side(side)
    out = []
    for kind in KINDS:
        if not allowances.of(kind) or (own.is_strut and kind in ARM_KINDS):
            continue
        if not moved_nails(kind, own) & layout.locked:
            out.append(kind)
    return tuple(out)


def steps_words(kind: Kind, units: UnitName) -> str:
    """In which sizes a kind of move can be made, in words."""

    def said(sizes: tuple[float, ...]) -> str:
        texts = [format_length(size, units, 32) for size in sizes]
        return f"{', '.join(texts[:-1])} and {texts[-1]} {units}" if len(texts) > 1 else (
            f"{texts[0]} {units}"
        )

    if kind == "outer_spacer":
        return f"stock spacers of {said(SPACERS[units][::-1])}, stacked"
    if kind == "ball_joint":
        return f"stock joints {said(TALLER)} taller"
    if kind in ("upper_mount_height", "upper_mount_width"):
        shim, hole = said((SHIM[units],)), said((HOLE[units],))
        return f"shims in steps of {shim}, new holes in steps of {hole}"
    step = STEP if kind in INNER_KINDS else COARSE_STEP
    return f"in steps of {said((step[units],))}"


def moved_nails(kind: Kind, side: Side) -> frozenset[str]:
    """The points that a kind of move takes from their places."""
    if kind in INNER_KINDS:
        return frozenset({names.TIE_INNER})
    if kind in OUTER_KINDS:
        return frozenset({names.TIE_OUTER})
    ball = {names.UPPER_BALL} if kind == "ball_joint" else set()
    return frozenset(ball | {name for name in _UPPER_PIVOTS if name in side.points})


_UPPER_PIVOTS = (names.UPPER_INNER, names.UPPER_INNER_FRONT, names.UPPER_INNER_REAR)


def _stacks(units: UnitName) -> Iterator[tuple[float, ...]]:
    stock = SPACERS[units]
    for count in range(1, len(stock) + 1):
        yield from combinations(stock, count)


def _stack_words(size: float, units: UnitName) -> str:
    """The fewest stock spacers that make a thickness: "spacers of 1/4 and 1/16 in"."""
    for stack in _stacks(units):
        if abs(sum(stack) - size) < 1e-5:
            said = [format_length(part, units, 16) for part in stack]
            listed = " and ".join([", ".join(said[:-1]), said[-1]] if len(said) > 1 else said)
            return f"{'spacers' if len(said) > 1 else 'a spacer'} of {listed} {units}"
    return "spacers"


# --- the moves themselves -------------------------------------------------------------------


def _rack_raised(layout: Layout, amount: float) -> Layout:
    for side in SIDES[:1] if layout.linked else SIDES:
        inner = layout.side(side)[names.TIE_INNER]
        layout = layout.with_point(side, names.TIE_INNER, inner._replace(up=inner.up + amount))
    relay = layout.steering
    if isinstance(relay, RelayRod):
        for name in names.RELAY_POINTS:
            place = relay[name]
            relay = relay.moved(name, place._replace(up=place.up + amount))
        layout = replace(layout, steering=relay)
    return layout


def _inner_wider(side: Side, amount: float) -> Side:
    inner = side[names.TIE_INNER]
    return side.moved(names.TIE_INNER, inner._replace(over=inner.over + amount))


def _outer_raised(side: Side, amount: float) -> Side:
    outer = side[names.TIE_OUTER]
    return side.moved(names.TIE_OUTER, outer._replace(up=outer.up + amount))


def _arm_end_moved(side: Side, amount: float) -> Side | None:
    """The outer end along the steering arm, seen from above, at its own height."""
    outer, lower = space(side[names.TIE_OUTER]), space(side[names.LOWER_BALL])
    top = side.points.get(names.UPPER_BALL, side.points.get(names.STRUT_TOP))
    if top is None:
        return None
    axis = space(top) - lower
    if abs(axis[2]) < 1e-6:
        return None
    lever = (outer - lower - (outer[2] - lower[2]) / axis[2] * axis)[:2]
    length = math.hypot(*lever)
    if length < LEAST_LEVER or length + amount < LEAST_LEVER:
        return None
    fore, over = outer[:2] + amount / length * lever
    return side.moved(names.TIE_OUTER, Point(float(over), float(outer[2]), float(fore)))


def _mount_raised(side: Side, amount: float) -> Side | None:
    return _upper_arm_kept(side, side, amount)


def _mount_wider(side: Side, amount: float) -> Side:
    """The mount in or out with an arm to suit, so that the knuckle stays as it is."""
    for name in _UPPER_PIVOTS:
        if name in side.points:
            place = side[name]
            side = side.moved(name, place._replace(over=place.over + amount))
    return side


def _ball_taller(side: Side, amount: float) -> Side | None:
    """A taller upper ball joint: the ball farther up the kingpin axis."""
    lower, upper = space(side[names.LOWER_BALL]), space(side[names.UPPER_BALL])
    length = float(np.linalg.norm(upper - lower))
    if length < 1e-6:
        return None
    fore, over, up = upper + amount / length * (upper - lower)
    taller = side.moved(names.UPPER_BALL, Point(float(over), float(up), float(fore)))
    return _upper_arm_kept(side, taller, 0.0)


def _upper_arm_kept(before: Side, after: Side, raised: float) -> Side | None:
    """``after`` with its upper pivots ``raised`` mm and shimmed in or out as the same arm needs.

    The camber is set back to what it was, so that the ball joint stays; the arm's length is
    the ball joint's distance from the arm's inner axis. None where the arm is too short.
    """
    pivot, rear = before.arm_pivots("upper")
    axis = np.array([1.0, 0.0, 0.0]) if rear is None else space(pivot) - space(rear)
    size = float(np.linalg.norm(axis))
    if size < 1e-6:
        return None
    axis = axis / size

    def across(vector: Array) -> Array:
        return np.asarray(vector - (vector @ axis) * axis)

    up, out = np.array([0.0, 0.0, raised]), across(np.array([0.0, 1.0, 0.0]))
    was = across(space(before[names.UPPER_BALL]) - space(pivot))
    now = across(space(after[names.UPPER_BALL]) - space(pivot) - up)
    # |now - shim * out| = |was|: a quadratic in the shim, of which the smaller one is meant.
    a, b, c = float(out @ out), float(now @ out), float(now @ now - was @ was)
    under = b * b - a * c
    if a < 1e-9 or under < 0.0 or b == 0.0:
        return None
    shim = c / (b + math.copysign(math.sqrt(under), b))
    for name in _UPPER_PIVOTS:
        if name in after.points:
            place = after[name]
            moved = place._replace(over=place.over + shim, up=place.up + raised)
            after = after.moved(name, moved)
    return after


_MOVERS = {
    "inner_width": _inner_wider,
    "outer_spacer": _outer_raised,
    "knuckle_height": _outer_raised,
    "arm_end": _arm_end_moved,
    "upper_mount_height": _mount_raised,
    "upper_mount_width": _mount_wider,
    "ball_joint": _ball_taller,
}
