"""Random and adversarial corners by the thousand, as arrays, and single cars cut from them.

A batch starts from one sound corner of its kind; every car in it is then spoiled by a few
recipes drawn by chance: points in one place, in one line, at the origin, on the wrong side
of the car, a meter or a light-second away, arms exactly parallel, and so on.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from geometry import layout as names
from geometry.corner import Corner
from geometry.layout import (
    Layout,
    Loads,
    NoGo,
    Point,
    Rack,
    RelayRod,
    Side,
    Spring,
    Target,
    Tire,
)
from geometry.tolerances import FIGURES, TOLERANCES

Array = NDArray[np.float64]

SOUND: dict[str, tuple[float, float, float]] = {
    names.LOWER_INNER: (0.0, 235.0, 167.0),
    names.LOWER_INNER_FRONT: (120.0, 240.0, 172.0),
    names.LOWER_INNER_REAR: (-200.0, 230.0, 165.0),
    names.LOWER_BALL: (6.0, 620.0, 171.0),
    names.UPPER_INNER: (0.0, 343.0, 390.0),
    names.UPPER_INNER_FRONT: (95.0, 350.0, 395.0),
    names.UPPER_INNER_REAR: (-110.0, 335.0, 385.0),
    names.UPPER_BALL: (-13.0, 584.0, 432.0),
    names.STRUT_TOP: (-30.0, 560.0, 800.0),
    names.STRUT_LOWER: (-10.0, 612.0, 400.0),
    names.TIE_INNER: (-130.0, 271.0, 237.0),
    names.TIE_OUTER: (-130.0, 584.0, 257.0),
    names.WHEEL_CENTER: (0.0, 711.0, 317.0),
    names.SPRING_TOP: (0.0, 394.0, 451.0),
    names.SPRING_LOWER: (0.0, 464.0, 181.0),
}
"""A sound corner's points, mm: fore, over, up."""

_LOWER = {"single": [names.LOWER_INNER], "pair": [names.LOWER_INNER_FRONT, names.LOWER_INNER_REAR]}
_UPPER = {
    "single": [names.UPPER_INNER, names.UPPER_BALL],
    "pair": [names.UPPER_INNER_FRONT, names.UPPER_INNER_REAR, names.UPPER_BALL],
    "strut": [names.STRUT_TOP, names.STRUT_LOWER],
}
KINDS = [(low, high) for low in _LOWER for high in _UPPER]


@dataclass(frozen=True)
class Batch:
    """Corners of one kind: points (3, n) mm, angles (n,) rad, loaded radius (n,) mm.

    ``recipes`` says what was done to each car.
    """

    points: dict[str, Array]
    camber: Array
    toe: Array
    radius: Array
    recipes: list[str]

    def corner(self) -> Corner:
        return Corner(self.points, self.camber, self.toe, self.radius)

    def side(self, k: int) -> Side:
        """One corner as measured data."""
        points = {
            name: Point(float(p[1, k]), float(p[2, k]), float(p[0, k]))
            for name, p in self.points.items()
        }
        return Side(points, Tire(float(self.radius[k])), float(self.camber[k]), float(self.toe[k]))


Spoil = Callable[[np.random.Generator, dict[str, Array], list[str]], None]
"""Spoils points (3, k) in place; the names are those that the corner has."""


def _pick(rng: np.random.Generator, held: list[str], count: int) -> list[str]:
    return [held[i] for i in rng.choice(len(held), count, replace=False)]


def _jitter(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    for name in held:
        points[name] += rng.normal(0.0, 15.0, points[name].shape)


def _wild(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    for name in held:
        points[name][:] = rng.uniform(-900.0, 900.0, points[name].shape)


def _wild_some(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    _wild(rng, points, _pick(rng, held, 2))


def _grid(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    for name in held:
        points[name][:] = 100.0 * rng.integers(-2, 4, points[name].shape)


def _coincide(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    a, b = _pick(rng, held, 2)
    points[a][:] = points[b]


def _line_up(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    a, b, c = _pick(rng, held, 3)
    share = rng.uniform(-1.0, 2.0, points[a].shape[1])
    points[c][:] = points[a] + share * (points[b] - points[a])


def _one_plane(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    part = int(rng.integers(3))
    for name in held:
        points[name][part] = 200.0


def _level(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    """Both arms exactly level, and so exactly parallel."""
    for name in held:
        if name.startswith("lower"):
            points[name][2] = 180.0
        elif name.startswith("upper"):
            points[name][2] = 420.0


def _equal_arms(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    """The upper parts as the lower ones, straight above: equal and parallel arms."""
    for part in ("inner pivot", "inner pivot front", "inner pivot rear", "ball joint"):
        low, high = f"lower {part}", f"upper {part}"
        if low in points and high in points:
            points[high][:] = points[low] + np.array([[0.0], [0.0], [250.0]])


def _mirror(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    """Measured from the wrong side: everything across the centerline."""
    for name in held:
        points[name][1] *= -1.0


def _turn_over(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    """Fore for aft, or upside down."""
    part = int(rng.choice([0, 2]))
    for name in held:
        points[name][part] *= -1.0


def _cross_over(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    for name in _pick(rng, held, 2):
        points[name][1] *= -1.0


def _huge(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    size = rng.choice([1e5, 1e6, 25400.0])
    for name in _pick(rng, held, int(rng.integers(1, len(held)))):
        points[name][int(rng.integers(3))] = size * rng.choice([-1.0, 1.0])


def _scaled(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    size = rng.choice([1e-9, 1e-6, 1e-3, 1 / 25.4, 25.4, 200.0, 1500.0])
    for name in held:
        points[name] *= size


def _tiny(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    """Two points a hair apart: all but one place."""
    a, b = _pick(rng, held, 2)
    points[a][:] = points[b] + rng.choice([1e-12, 1e-9, 1e-6, 1e-3]) * rng.normal(
        size=points[a].shape
    )


def _origin(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    for name in _pick(rng, held, int(rng.integers(1, len(held) + 1))):
        points[name][:] = 0.0


def _upper_end(held: list[str]) -> str:
    return names.UPPER_BALL if names.UPPER_BALL in held else names.STRUT_TOP


def _on_kingpin(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    """The wheel center, a rod end or the strut's foot on the kingpin axis."""
    low, high = points[names.LOWER_BALL], points[_upper_end(held)]
    choices = [names.WHEEL_CENTER, names.TIE_OUTER, names.TIE_INNER]
    choices += [names.STRUT_LOWER] if names.STRUT_LOWER in held else []
    share = rng.uniform(-0.5, 1.5, low.shape[1])
    points[str(rng.choice(choices))][:] = low + share * (high - low)


def _dead_center(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    """The tie rod points at the kingpin: its inner end in line with arm end and axis."""
    low, high, outer = points[names.LOWER_BALL], points[_upper_end(held)], points[names.TIE_OUTER]
    foot = low + 0.4 * (high - low)
    points[names.TIE_INNER][:] = foot + rng.choice([-1.5, 2.0]) * (outer - foot)


def _kingpin_level(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    points[_upper_end(held)][2] = points[names.LOWER_BALL][2]


def _axis_turned(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    """An arm's inner axis straight across, straight up, or of no length."""
    for arm in ("lower", "upper"):
        front, rear = f"{arm} inner pivot front", f"{arm} inner pivot rear"
        if front in held and rear in held:
            part = int(rng.integers(4))
            points[front][:] = points[rear]
            if part < 3:
                points[front][part] += 150.0


def _toggle(rng: np.random.Generator, points: dict[str, Array], held: list[str]) -> None:
    """An arm in line with the ball joints."""
    low, high = points[names.LOWER_BALL], points[_upper_end(held)]
    for arm, ball in (("lower", low), ("upper", high)):
        single = f"{arm} inner pivot"
        if single in held and rng.random() < 0.6:
            points[single][1:] = (ball + rng.choice([-1.0, 1.5]) * (high - low))[1:]


RECIPES: tuple[Spoil, ...] = (
    _jitter, _wild, _wild_some, _grid, _coincide, _line_up, _one_plane, _level, _equal_arms,
    _mirror, _turn_over, _cross_over, _huge, _scaled, _tiny, _origin, _on_kingpin, _dead_center,
    _kingpin_level, _axis_turned, _toggle,
)  # fmt: skip


def batch(rng: np.random.Generator, count: int) -> Batch:
    """``count`` strange corners of one kind, drawn by ``rng``."""
    low, high = KINDS[int(rng.integers(len(KINDS)))]
    held = [*_LOWER[low], names.LOWER_BALL, *_UPPER[high],
            names.TIE_INNER, names.TIE_OUTER, names.WHEEL_CENTER]  # fmt: skip
    points = {name: np.repeat(np.array(SOUND[name])[:, None], count, axis=1) for name in held}
    said: list[list[str]] = [[] for _ in range(count)]
    # Groups of cars share their recipes; what a recipe draws differs from car to car.
    for group in np.array_split(rng.permutation(count), max(1, count // 8)):
        if group.size == 0:
            continue
        here = {name: p[:, group].copy() for name, p in points.items()}
        steps = [_jitter] if rng.random() < 0.7 else []
        steps += [RECIPES[i] for i in rng.integers(len(RECIPES), size=int(rng.integers(0, 4)))]
        for step in steps:
            step(rng, here, held)
            for k in group:
                said[k].append(step.__name__.strip("_"))
        for name in held:
            # A file or sheet holds no length beyond a kilometer.
            points[name][:, group] = np.clip(here[name], -1e6, 1e6)
    angles = np.array([0.0, 0.0, 0.01, -0.02, 0.1, math.pi / 4, -math.pi / 4])
    return Batch(
        points,
        rng.choice(angles, count),
        rng.choice(angles, count),
        rng.choice([310.0, 310.0, 310.0, 0.0, 1e-9, 1000.0, 1e6], count),
        [" + ".join(words) for words in said],
    )


def _loads(rng: np.random.Generator) -> Loads:
    if rng.random() < 0.5:
        return Loads()
    draw = rng.choice([0.0, 1e-9, 1.0, 20.0, 1000.0, 1e6], 6)
    return Loads(
        float(draw[0]), float(rng.choice([0.0, 0.5, 1.0])), float(draw[1]), float(draw[2]),
        300.0, 300.0, float(draw[3]), float(draw[4]), float(draw[5]), 0.0, 200.0, 1500.0,
    )  # fmt: skip


def _relay(rng: np.random.Generator) -> RelayRod:
    places = [(305, 260, 13), (305, 237, -127), (305, 260, 13), (305, 237, -127)]
    points = [Point(*map(float, place)) for place in places]
    for k in range(4):
        draw = rng.random()
        if draw < 0.2:
            points[k] = points[int(rng.integers(4))]
        elif draw < 0.3:
            points[k] = Point(*(100.0 * rng.integers(-3, 4, 3)))
        elif draw < 0.35:
            points[k] = Point(*(rng.choice([1e6, -1e6, 1e-9, 0.0], 3)))
    return RelayRod(*points, box_side="left" if rng.random() < 0.5 else "right")


def _no_go(rng: np.random.Generator) -> NoGo:
    corners = rng.choice([-200.0, 0.0, 0.0, 100.0, 300.0, 300.0, 600.0, 1e6, 1e-9], (4, 2))
    return NoGo(
        "crossmember",
        tuple((float(a), float(b)) for a, b in corners),
        "front" if rng.random() < 0.5 else "above",
        (None, "left", "right")[int(rng.integers(3))],
        float(rng.choice([0.0, 12.7, 1e6])),
    )


def _dressed(rng: np.random.Generator, side: Side) -> Side:
    """A side with spring mounts, a spring and another wheel, sometimes."""
    points = dict(side.points)
    if rng.random() < 0.5:
        for name in (names.SPRING_TOP, names.SPRING_LOWER):
            fore, over, up = np.array(SOUND[name]) + rng.normal(0, rng.choice([0, 10, 500]), 3)
            points[name] = Point(over, up, fore)
        if rng.random() < 0.2:
            points[names.SPRING_LOWER] = points[names.SPRING_TOP]
    carriers = ["lower arm", "knuckle"] + ([] if side.is_strut else ["upper arm"])
    spring = Spring(
        rng.choice([None, 0.0, 70.0, 1e6]),
        str(rng.choice(carriers)),  # type: ignore[arg-type]
        rng.choice([None, 0.0, 250.0]),
        rng.choice([None, 260.0, 1e6]),
    )
    width, rim, rim_width = rng.choice([0.0, 1e-9, 200.0, 381.0, 1e6], 3)
    tire = replace(side.tire, width=width, rim_diameter=rim, rim_width=rim_width)
    return replace(side, points=points, tire=tire, spring=spring)


def car(rng: np.random.Generator) -> tuple[Layout, str]:
    """One strange car with everything a layout can hold, and what was done to it."""
    left = batch(rng, 1)
    right = batch(rng, 1) if rng.random() < 0.3 else None
    keys, limits = sorted(FIGURES), sorted(TOLERANCES)
    layout = Layout(
        _dressed(rng, left.side(0)),
        None if right is None else _dressed(rng, right.side(0)),
        Rack() if rng.random() < 0.6 else _relay(rng),
        units="in" if rng.random() < 0.5 else "mm",
        wheelbase=rng.choice([None, 1.0, 2800.0, 1e6]),
        cg_height=rng.choice([None, 0.0, 500.0, -1e6]),
        loads=_loads(rng),
        no_go=tuple(_no_go(rng) for _ in range(int(rng.integers(0, 3)))),
        targets=tuple(
            Target(str(rng.choice(keys)), rng.choice([None, -5.0, 0.0]), rng.choice([None, 5.0]))
            for _ in range(int(rng.integers(0, 3)))
        ),
        tolerances={
            str(rng.choice(limits)): float(rng.choice([0.0, 6.0, -1.0]))
            for _ in range(int(rng.integers(0, 3)))
        },
    )
    return layout, f"{left.recipes[0]} | {right.recipes[0] if right else 'linked'}"
