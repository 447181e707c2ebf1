"""Named sample front ends, degenerate ones included, over which tests run.

All are invented cars of the Harrow Lane shop. ``SAMPLES`` are also written to
``sample_layouts/`` by ``python -m tests.write_sample_layouts``.
"""

from __future__ import annotations

from dataclasses import replace
from math import radians

from geometry.layout import (
    IDLER_END,
    IDLER_PIVOT,
    LOWER_BALL,
    LOWER_INNER,
    LOWER_INNER_FRONT,
    LOWER_INNER_REAR,
    PITMAN_END,
    PITMAN_PIVOT,
    SPRING_LOWER,
    SPRING_TOP,
    STRUT_LOWER,
    STRUT_TOP,
    TIE_INNER,
    TIE_OUTER,
    UPPER_BALL,
    UPPER_INNER,
    UPPER_INNER_FRONT,
    UPPER_INNER_REAR,
    WHEEL_CENTER,
    Job,
    Layout,
    Loads,
    NoGo,
    Point,
    RelayRod,
    Side,
    Spring,
    Tire,
)
from geometry.lengths import parse_length
from geometry.stance import by_spring

SHOP = "Harrow Lane"
CUT = 63.5
"""How far the cut springs lower the roadster, mm: 2 1/2 in."""


def tape(text: str) -> float:
    """A length in inches as a tape reads it, mm."""
    return parse_length(text, "in")


def at(text: str) -> Point:
    """A point from tape readings: ``over, up[, fore]`` in inches."""
    return Point(*(tape(part) for part in text.split(",")))


def moved(side: Side, **places: str) -> Side:
    """A side with points at other tape readings; spaces in names are written ``_``."""
    points = {**side.points, **{name.replace("_", " "): at(p) for name, p in places.items()}}
    return replace(side, points=points)


TIRE = Tire(
    radius=tape("12 1/2"), width=tape("8"), rim_diameter=tape("15"), rim_width=tape("6 1/2")
)

ROADSTER_SIDE = Side(
    {
        LOWER_INNER: at("9 1/4, 6 9/16"),
        LOWER_BALL: at("24 7/16, 6 3/4, 1/4"),
        UPPER_INNER: at("13 1/2, 15 3/8"),
        UPPER_BALL: at("23, 17, -1/2"),
        TIE_INNER: at("10 11/16, 9 5/16, -5 1/8"),
        TIE_OUTER: at("23, 10 1/8, -5 1/8"),
        WHEEL_CENTER: at("28, 12 1/2"),
        SPRING_TOP: at("15 1/2, 17 3/4"),
        SPRING_LOWER: at("18 1/4, 7 1/8"),
    },
    TIRE,
    static_camber=radians(-0.5),
    static_toe=radians(0.1),
    spring=Spring(rate=70.0, lower_mount_on="lower arm", shortest=203.2, longest=342.9),
)
"""Near no bump steer: the inner tie-rod pivot stands within a sixteenth of its best spot."""

LOADS = Loads(
    sprung_mass=1040.0,
    front_share=0.52,
    unsprung_front=82.0,
    unsprung_rear=118.0,
    unsprung_front_height=tape("12 1/2"),
    unsprung_rear_height=tape("12 3/4"),
    rear_wheel_rate=22.0,
    front_bar_rate=12.0,
    rear_roll_center_height=tape("9 1/2"),
    rear_track=tape("56 1/2"),
)

FRAME_RAIL = NoGo(
    "frame rail",
    tuple(
        (point.over, point.up)
        for point in map(at, ("9 1/2, 10 1/2", "12, 10 1/2", "12, 14 1/2", "9 1/2, 14 1/2"))
    ),
    clearance=tape("1/2"),
)

ROADSTER = Layout(
    ROADSTER_SIDE,
    title="Healthy roadster",
    wheelbase=tape("112"),
    cg_height=tape("20 1/2"),
    loads=LOADS,
)


def _roadster(title: str, side: Side) -> Layout:
    return replace(ROADSTER, title=title, left=side)


RACK_LOW = replace(
    _roadster("Rack set low", moved(ROADSTER_SIDE, tie_rod_inner="10 11/16, 8 13/16, -5 1/8")),
    no_go=(FRAME_RAIL,),
)

CUT_SPRINGS = replace(by_spring(ROADSTER, CUT), title="Cut springs")

KNUCKLE_SWAP = _roadster(
    "Knuckle swap", moved(ROADSTER_SIDE, tie_rod_outer="23, 12 1/8, -5 1/8")
)

WRONG_SLOPE = _roadster(
    "Arms sloping the wrong way",
    moved(
        ROADSTER_SIDE,
        lower_inner_pivot="9 1/4, 7 1/2",
        upper_inner_pivot="13 1/2, 18 1/2",
        tie_rod_inner="10 5/16, 11 3/16, -5 1/8",
        spring_top_mount="15 1/2, 18 3/4",
        spring_lower_mount="18 1/4, 7 1/2",
    ),
)

PARALLEL_SIDE = moved(
    ROADSTER_SIDE,
    lower_inner_pivot="10 1/2, 7",
    lower_ball_joint="24, 7, 1/4",
    upper_inner_pivot="9 1/4, 16 1/2",
    upper_ball_joint="22 3/4, 16 1/2, -1/2",
    tie_rod_inner="9 1/4, 10, -5 1/8",
    tie_rod_outer="22 3/4, 10, -5 1/8",
    wheel_center="27 3/4, 12 1/2",
)

PARALLEL_EQUAL = _roadster("Parallel equal arms", PARALLEL_SIDE)

UNEQUAL_SIDES = replace(
    ROADSTER,
    title="Hit once: sides differ",
    right=moved(
        ROADSTER_SIDE,
        lower_inner_pivot="9 1/16, 6 13/16",
        upper_inner_pivot="13 5/16, 15 11/16",
        tie_rod_inner="10 11/16, 9, -5 1/8",
    ),
)

STRUT_CAR = Layout(
    Side(
        {
            LOWER_INNER: Point(330, 195),
            LOWER_BALL: Point(680, 180, 8),
            STRUT_TOP: Point(565, 810, -38),
            STRUT_LOWER: Point(630, 350, -10),
            TIE_INNER: Point(272, 273, -130),
            TIE_OUTER: Point(650, 265, -135),
            WHEEL_CENTER: Point(735, 300),
        },
        Tire(radius=300, width=195, rim_diameter=381, rim_width=152, offset=40, size="195/65R15"),
        static_camber=radians(-0.5),
        static_toe=radians(0.1),
    ),
    title="Strut hatch",
    units="mm",
    wheelbase=2500.0,
    cg_height=540.0,
)

SKEWED_ARMS = _roadster(
    "Skewed arms",
    Side(
        {
            LOWER_INNER_FRONT: at("10 1/2, 6 3/4, 4 1/2"),
            LOWER_INNER_REAR: at("9 1/4, 6 9/16, -9"),
            LOWER_BALL: ROADSTER_SIDE[LOWER_BALL],
            UPPER_INNER_FRONT: at("14 1/4, 15 3/4, 3 1/2"),
            UPPER_INNER_REAR: at("13 3/8, 15 1/4, -5"),
            UPPER_BALL: ROADSTER_SIDE[UPPER_BALL],
            TIE_INNER: at("11 1/2, 9 7/16, -5 1/8"),
            TIE_OUTER: ROADSTER_SIDE[TIE_OUTER],
            WHEEL_CENTER: ROADSTER_SIDE[WHEEL_CENTER],
        },
        TIRE,
        static_camber=radians(-0.5),
        static_toe=radians(0.1),
    ),
)

RELAY_CAR = replace(
    ROADSTER,
    title="Steering-box sedan",
    steering=RelayRod(
        **{
            name.replace(" arm ", "_"): at(place)
            for name, place in {
                PITMAN_PIVOT: "12, 10 1/4, 1/2",
                PITMAN_END: "12, 9 5/16, -5",
                IDLER_PIVOT: "12, 10 1/4, 1/2",
                IDLER_END: "12, 9 5/16, -5",
            }.items()
        }
    ),
)

FRONT_STEER = _roadster(
    "Front-steer coupe",
    moved(
        ROADSTER_SIDE,
        tie_rod_inner="10 11/16, 7 9/16, 5",
        tie_rod_outer="25 1/8, 8, 5",
    ),
)

SAMPLES: dict[str, Job] = {
    "healthy-roadster": Job(ROADSTER, shop=SHOP),
    "rack-set-low": Job(
        RACK_LOW,
        found=RACK_LOW,
        shop=SHOP,
        notes="Rack brackets welded 1/2 in low; darts over bumps.",
    ),
    "cut-springs": Job(
        CUT_SPRINGS,
        found=ROADSTER,
        shop=SHOP,
        notes="2 1/2 in cut out of the springs, toe set again at the new height.",
        stance="Down 2 1/2 in by the springs.",
    ),
    "knuckle-swap": Job(
        KNUCKLE_SWAP,
        found=ROADSTER,
        shop=SHOP,
        notes="The swapped knuckle carries the outer tie-rod end 2 in too high.",
    ),
    "arms-sloping-wrong": Job(WRONG_SLOPE, shop=SHOP),
    "parallel-equal-arms": Job(PARALLEL_EQUAL, shop=SHOP),
    "unequal-sides": Job(UNEQUAL_SIDES, shop=SHOP, notes="Right side measured on its own."),
    "strut-hatch": Job(STRUT_CAR, shop=SHOP),
    "skewed-arms": Job(SKEWED_ARMS, shop=SHOP),
    "steering-box-sedan": Job(RELAY_CAR, shop=SHOP),
    "front-steer-coupe": Job(FRONT_STEER, shop=SHOP),
}
"""What ``sample_layouts/`` holds, by file name."""

CARS: dict[str, Layout] = {name: job.planned for name, job in SAMPLES.items()}
"""Every sound sample car as planned."""


def _with(**places: str) -> Layout:
    return replace(ROADSTER, title="Degenerate", left=moved(ROADSTER_SIDE, **places))


DEGENERATE: dict[str, Layout] = {
    "lower arm of no length": _with(lower_ball_joint="9 1/4, 6 9/16"),
    "upper arm of no length": _with(upper_inner_pivot="23, 17, -1/2"),
    "ball joints in one place": _with(upper_ball_joint="24 7/16, 6 3/4, 1/4"),
    "tie rod of no length": _with(tie_rod_inner="23, 10 1/8, -5 1/8"),
    "outer tie-rod end on the kingpin axis": _with(
        lower_ball_joint="24, 7", upper_ball_joint="23, 17", tie_rod_outer="23 1/2, 12"
    ),
    "both arms on one line": _with(
        lower_inner_pivot="10, 10",
        lower_ball_joint="20, 10",
        upper_inner_pivot="8, 10",
        upper_ball_joint="18, 10",
    ),
    "upper arm in line with the ball joints": _with(
        upper_inner_pivot="22, 24", upper_ball_joint="23, 17", lower_ball_joint="24, 10"
    ),
    "lower arm straight up": _with(lower_inner_pivot="24 7/16, 1", lower_ball_joint="24 7/16, 7"),
    "tie rod at dead center": _with(
        lower_ball_joint="24, 7",
        upper_ball_joint="24, 17",
        tie_rod_outer="23, 12, -4",
        tie_rod_inner="21, 12, -12",
    ),
    "instant center on the contact point": _with(
        lower_inner_pivot="10, 10",
        lower_ball_joint="19, 5",
        upper_inner_pivot="10, 20",
        upper_ball_joint="19, 10",
        wheel_center="28, 12 1/2",
    ),
    "tire of no radius": replace(
        ROADSTER, left=replace(ROADSTER_SIDE, tire=replace(TIRE, radius=0.0))
    ),
    "everything at the origin": replace(
        ROADSTER, left=Side({name: Point(0, 0, 0) for name in ROADSTER_SIDE.points}, TIRE)
    ),
    "strut of no length": replace(
        STRUT_CAR,
        left=Side(
            {**STRUT_CAR.left.points, STRUT_LOWER: STRUT_CAR.left[STRUT_TOP]}, STRUT_CAR.left.tire
        ),
    ),
    "skewed axis of no length": replace(
        SKEWED_ARMS,
        left=moved(SKEWED_ARMS.left, lower_inner_pivot_rear="10 1/2, 6 3/4, 4 1/2"),
    ),
    "relay arms of no length": replace(
        RELAY_CAR, steering=RelayRod(*[at("12, 10, 0")] * 4)
    ),
}
"""Complete layouts that make no working front end; nothing may raise or show NaN for them."""
