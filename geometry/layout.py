"""The car: measured points, wheel, steering and targets, as immutable typed data.

Lengths are millimeters and angles radians throughout. A point is given the way a
builder measures it on its own side of the car: ``over`` from the centerline
(outboard positive), ``up`` from the floor, ``fore`` ahead of the front axle line.
Both sides therefore share one set of signs, and a mirrored side is the same data.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from types import MappingProxyType
from typing import Literal, NamedTuple

SideName = Literal["left", "right"]
UnitName = Literal["in", "mm"]
SIDES: tuple[SideName, SideName] = ("left", "right")

MM_PER_INCH = 25.4
"""Exact: the international inch of 1959."""


class Point(NamedTuple):
    """A place on one side of the car, mm: over (outboard +), up, fore (ahead +)."""

    over: float
    up: float
    fore: float = 0.0


# The names of points, as they stand in measure sheets, files and on the screen.
LOWER_INNER = "lower inner pivot"
LOWER_INNER_FRONT = "lower inner pivot front"
LOWER_INNER_REAR = "lower inner pivot rear"
LOWER_BALL = "lower ball joint"
UPPER_INNER = "upper inner pivot"
UPPER_INNER_FRONT = "upper inner pivot front"
UPPER_INNER_REAR = "upper inner pivot rear"
UPPER_BALL = "upper ball joint"
STRUT_TOP = "strut top mount"
STRUT_LOWER = "strut lower mount"
TIE_INNER = "tie rod inner"
TIE_OUTER = "tie rod outer"
WHEEL_CENTER = "wheel center"
SPRING_TOP = "spring top mount"
SPRING_LOWER = "spring lower mount"
PITMAN_PIVOT = "pitman arm pivot"
PITMAN_END = "pitman arm end"
IDLER_PIVOT = "idler arm pivot"
IDLER_END = "idler arm end"

SIDE_POINTS: tuple[str, ...] = (
    LOWER_INNER,
    LOWER_INNER_FRONT,
    LOWER_INNER_REAR,
    LOWER_BALL,
    UPPER_INNER,
    UPPER_INNER_FRONT,
    UPPER_INNER_REAR,
    UPPER_BALL,
    STRUT_TOP,
    STRUT_LOWER,
    TIE_INNER,
    TIE_OUTER,
    WHEEL_CENTER,
    SPRING_TOP,
    SPRING_LOWER,
)
"""Every point that a side can have, in the order a sheet lists them."""

RELAY_POINTS: tuple[str, ...] = (PITMAN_PIVOT, PITMAN_END, IDLER_PIVOT, IDLER_END)
"""Points of a relay-rod steering; the car has one of each, not one per side."""

KNUCKLE_POINTS: tuple[str, ...] = (LOWER_BALL, UPPER_BALL, STRUT_LOWER, TIE_OUTER, WHEEL_CENTER)
"""Points that are fixed in the knuckle (a strut's body is part of the knuckle)."""


class LayoutError(ValueError):
    """The points given do not make a front end; the message is a plain sentence."""


@dataclass(frozen=True)
class Tire:
    """The tire and rim of one wheel, mm.

    ``radius`` is the loaded radius. ``width``, ``rim_diameter`` and ``rim_width`` only
    draw the section and clear it of other parts. ``offset`` is the wheel's center plane
    to its mounting face, positive when the face lies outboard of the center plane.
    """

    radius: float
    width: float = 205.0
    rim_diameter: float = 381.0
    rim_width: float = 165.0
    offset: float = 0.0
    size: str = ""


@dataclass(frozen=True)
class Spring:
    """What the spring, shock and corner weights of one side are; None means not given.

    ``rate`` N/mm at the spring; ``lower_mount_on`` names the arm that carries the lower
    mount ("lower arm", "upper arm" or "knuckle"); lengths mm between mounts.
    """

    rate: float | None = None
    lower_mount_on: Literal["lower arm", "upper arm", "knuckle"] = "lower arm"
    shortest: float | None = None
    longest: float | None = None


@dataclass(frozen=True)
class TieRod:
    """The thread of a tie rod's adjuster, mm; None means not given.

    ``thread_engaged`` is what was in hold when the rod was ``measured_length`` long from
    center to center; ``least_engaged`` is wanted, by default from ``thread_diameter``.
    """

    thread_engaged: float | None = None
    thread_diameter: float | None = None
    least_engaged: float | None = None
    measured_length: float | None = None


def _points(points: Mapping[str, Point | tuple[float, ...]]) -> Mapping[str, Point]:
    return MappingProxyType({name: Point(*map(float, p)) for name, p in points.items()})


@dataclass(frozen=True)
class Side:
    """One side's measured points and wheel.

    ``points`` maps a name of SIDE_POINTS to its Point. An arm has either one front-view
    inner pivot or a front and a rear bushing; a corner has either an upper arm or a strut.
    ``static_camber`` (top outboard +) and ``static_toe`` (toe-in +) are radians.
    """

    points: Mapping[str, Point]
    tire: Tire
    static_camber: float = 0.0
    static_toe: float = 0.0
    spring: Spring = field(default_factory=Spring)
    tie_rod: TieRod = field(default_factory=TieRod)

    def __post_init__(self) -> None:
        object.__setattr__(self, "points", _points(self.points))

    def __getitem__(self, name: str) -> Point:
        return self.points[name]

    @property
    def is_strut(self) -> bool:
        return STRUT_TOP in self.points

    def arm_pivots(self, arm: Literal["lower", "upper"]) -> tuple[Point, Point | None]:
        """The inner pivot(s) of an arm: (pivot, None), or (front bushing, rear bushing)."""
        single = self.points.get(f"{arm} inner pivot")
        if single is not None:
            return single, None
        return (
            self.points[f"{arm} inner pivot front"],
            self.points[f"{arm} inner pivot rear"],
        )

    def moved(self, name: str, to: Point) -> Side:
        """This side with one point at another place."""
        if name not in self.points:
            raise LayoutError(f"This side has no point called '{name}'.")
        return replace(self, points={**self.points, name: to})


@dataclass(frozen=True)
class Rack:
    """A rack: both inner tie-rod pivots slide along the car's Y axis together."""


@dataclass(frozen=True)
class RelayRod:
    """A steering box with pitman arm, relay rod and idler arm.

    Each point is measured on its own side of the car: the pitman's on ``box_side``, the
    idler's on the other. Both arms turn about vertical axes. The tie rods' inner ends
    are fixed in the relay rod.
    """

    pitman_pivot: Point
    pitman_end: Point
    idler_pivot: Point
    idler_end: Point
    box_side: SideName = "left"

    def __post_init__(self) -> None:
        for field_name in _RELAY_FIELDS.values():
            object.__setattr__(self, field_name, Point(*map(float, getattr(self, field_name))))

    def side_of(self, name: str) -> SideName:
        """On which side of the car a relay point is measured."""
        pitman = name in (PITMAN_PIVOT, PITMAN_END)
        return self.box_side if pitman else other_side(self.box_side)

    def __getitem__(self, name: str) -> Point:
        point: Point = getattr(self, _RELAY_FIELDS[name])
        return point

    def moved(self, name: str, to: Point) -> RelayRod:
        places = {own: self[key] for key, own in _RELAY_FIELDS.items()}
        places[_RELAY_FIELDS[name]] = to
        return RelayRod(**places, box_side=self.box_side)


_RELAY_FIELDS = {
    PITMAN_PIVOT: "pitman_pivot",
    PITMAN_END: "pitman_end",
    IDLER_PIVOT: "idler_pivot",
    IDLER_END: "idler_end",
}


@dataclass(frozen=True)
class Loads:
    """Weights and rates for the whole car, SI with mm: kg, N/mm, N mm/rad; None = not given.

    ``front_share`` of the sprung mass (0 to 1). Bar rates are at the wheel, N/mm of one
    wheel's travel against the other in roll. Rear figures stand for the rear axle, which
    this program does not solve.
    """

    sprung_mass: float | None = None
    front_share: float | None = None
    unsprung_front: float = 0.0
    unsprung_rear: float = 0.0
    unsprung_front_height: float | None = None
    unsprung_rear_height: float | None = None
    front_wheel_rate: float | None = None
    rear_wheel_rate: float | None = None
    front_bar_rate: float = 0.0
    rear_bar_rate: float = 0.0
    rear_roll_center_height: float | None = None
    rear_track: float | None = None


LONGEST_NAME = 200
"""Letters in the name of a no-go shape, at most."""


@dataclass(frozen=True)
class NoGo:
    """An outline nothing may enter, mm, on one floor.

    ``outline`` holds (over, up) corners for view "front" and (over, fore) for "above";
    over is measured on ``side``, or on both when ``side`` is None (mirrored).
    """

    name: str
    outline: tuple[tuple[float, float], ...]
    view: Literal["front", "above"] = "front"
    side: SideName | None = None
    clearance: float = 12.7


@dataclass(frozen=True)
class Target:
    """A wanted range for one figure (a key of tolerances.FIGURES), in internal units."""

    figure: str
    low: float | None = None
    high: float | None = None


@dataclass(frozen=True)
class Layout:
    """One front end: two sides, steering, and what is wanted of them.

    ``right`` is None while the right side mirrors the left. ``assumed`` lists, in plain
    words, what was not measured. ``tolerances`` overrides named tolerances (see
    tolerances.py). The rear axle is only a wheelbase here.
    """

    left: Side
    right: Side | None = None
    steering: Rack | RelayRod = field(default_factory=Rack)
    title: str = "Untitled"
    units: UnitName = "in"
    wheelbase: float | None = None
    cg_height: float | None = None
    loads: Loads = field(default_factory=Loads)
    no_go: tuple[NoGo, ...] = ()
    targets: tuple[Target, ...] = ()
    tolerances: Mapping[str, float] = field(default_factory=dict)
    locked: frozenset[str] = frozenset()
    assumed: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        object.__setattr__(self, "tolerances", MappingProxyType(dict(self.tolerances)))
        object.__setattr__(self, "locked", frozenset(self.locked))

    @property
    def linked(self) -> bool:
        """True while the right side mirrors the left."""
        return self.right is None

    def side(self, name: SideName) -> Side:
        """The side as it is solved: the left one's mirror image while linked."""
        return self.left if name == "left" or self.right is None else self.right

    def nails(self) -> Iterator[tuple[SideName, str]]:
        """Every pivot of the car as (side, point name), left side first."""
        for side_name in SIDES:
            points = self.side(side_name).points
            yield from ((side_name, name) for name in SIDE_POINTS if name in points)
        if isinstance(self.steering, RelayRod):
            yield from ((self.steering.side_of(name), name) for name in RELAY_POINTS)

    def point(self, side: SideName, name: str) -> Point:
        """Where a nail is, in its own side's measures."""
        if name in RELAY_POINTS and isinstance(self.steering, RelayRod):
            return self.steering[name]
        return self.side(side)[name]

    def with_point(self, side: SideName, name: str, to: Point) -> Layout:
        """This car with one nail moved; the mirrored side follows unless unlinked."""
        if name in RELAY_POINTS and isinstance(self.steering, RelayRod):
            return replace(self, steering=self.steering.moved(name, to))
        return self.with_side(side, self.side(side).moved(name, to))

    def with_side(self, side: SideName, new: Side) -> Layout:
        """This car with one side replaced; while linked, both."""
        if self.right is not None and side == "right":
            return replace(self, right=new)
        return replace(self, left=new)

    def unlinked(self) -> Layout:
        """The same car with each side holding its own points."""
        return self if self.right is not None else replace(self, right=self.left)

    def linked_to(self, side: SideName) -> Layout:
        """The car with both sides as ``side`` has it, mirrored from now on."""
        return replace(self, left=self.side(side), right=None)


@dataclass(frozen=True)
class Job:
    """What one document holds: the car as found, and as planned, with its paperwork."""

    planned: Layout
    found: Layout | None = None
    shop: str = ""
    customer: str = ""
    notes: str = ""
    stance: str = ""

    def with_planned(self, planned: Layout) -> Job:
        return replace(self, planned=planned)


def other_side(side: SideName) -> SideName:
    """The opposite side's name."""
    return "right" if side == "left" else "left"


def needed_points(present: Mapping[str, object]) -> list[str]:
    """The names still missing from a side that has the points in ``present``."""
    missing: list[str] = []
    arms: tuple[Literal["lower", "upper"], ...] = (
        ("lower",) if STRUT_TOP in present or STRUT_LOWER in present else ("lower", "upper")
    )
    for arm in arms:
        single, front, rear = (
            f"{arm} inner pivot",
            f"{arm} inner pivot front",
            f"{arm} inner pivot rear",
        )
        if single not in present and not (front in present and rear in present):
            if front in present or rear in present:
                missing.append(rear if front in present else front)
            else:
                missing.append(single)
        ball = f"{arm} ball joint"
        if ball not in present:
            missing.append(ball)
    if len(arms) == 1:
        missing += [name for name in (STRUT_TOP, STRUT_LOWER) if name not in present]
    missing += [name for name in (TIE_INNER, TIE_OUTER, WHEEL_CENTER) if name not in present]
    return missing


def clashing_points(present: Mapping[str, object]) -> list[str]:
    """What a side has two of where it can have one, in words, from the points in ``present``."""
    clashes = []
    for arm in ("lower", "upper"):
        single = f"{arm} inner pivot"
        if single in present and (f"{single} front" in present or f"{single} rear" in present):
            clashes.append(f"both “{single}” and its front or rear bushing are given")
    strut = STRUT_TOP in present or STRUT_LOWER in present
    if strut and any(name.startswith("upper ") for name in present):
        clashes.append("both a strut and an upper arm are given")
    return clashes
