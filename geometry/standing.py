"""Where every point of a car stands on a floor in the chosen pose, for drawing.

Places are (x, y) in mm: x to the car's left of its centerline, which is to the right of
someone looking at the car from ahead; y up from the floor the car stands on at ride height,
or on the floor from above rearward of the front axle line (see ``geometry.faces``). The body
stands still and the wheels move.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from geometry import layout as names
from geometry.faces import FRONT, Face
from geometry.figures import pose_points
from geometry.layout import RELAY_POINTS, SIDES, RelayRod, SideName
from geometry.linkage import Array
from geometry.solution import CornerState, Solution
from geometry.steering import relay_ends

XY = tuple[float, float]

_STILL = 1e-9
"""Nearer than this, mm, to where it was measured a point stands there."""

BODY_POINTS = frozenset({
    names.LOWER_INNER,
    names.LOWER_INNER_FRONT,
    names.LOWER_INNER_REAR,
    names.UPPER_INNER,
    names.UPPER_INNER_FRONT,
    names.UPPER_INNER_REAR,
    names.STRUT_TOP,
    names.SPRING_TOP,
    names.PITMAN_PIVOT,
    names.IDLER_PIVOT,
})
"""Points that stand still in the body whatever the wheels and the steering do."""


def sign_of(side: SideName) -> float:
    """+1 for the left side, whose over runs to the right of the floor; -1 for the right."""
    return 1.0 if side == "left" else -1.0


@dataclass(frozen=True)
class Standing:
    """One side as it stands. ``points`` by measured name, always finite.

    ``meets`` is False where the parts can't meet in the pose; the points are then those of
    ride height. ``axle`` is the unit direction outboard along the wheel's axis, ``contact``
    the middle of the tire's patch, ``shift`` how far the steering has moved the inner
    tie-rod end, (x, y) mm.
    """

    side: SideName
    state: CornerState
    meets: bool
    points: dict[str, XY]
    axle: XY
    contact: XY
    shift: XY
    face: Face = FRONT

    @property
    def sign(self) -> float:
        return sign_of(self.side)

    def at(self, over: float, second: float) -> XY:
        """A place in this side's two measures as a place on the floor."""
        return self.sign * over, self.face.way * second


def standing(solution: Solution, name: SideName, face: Face = FRONT) -> Standing:
    """One side of a solved car in its chosen pose, on the floor that ``face`` shows."""
    state = solution.sides[name]
    sign = sign_of(name)
    measured = {key: face.place(sign, p) for key, p in state.side.points.items()}
    now = pose_points(state.side, state.corner, state.now)
    moved = {
        key: _settled(face.seen(sign, place[:, 0]), measured[key])
        for key, place in now.items()
        if math.isfinite(float(place[:, 0].sum()))
    }
    meets = bool(state.now.assembles[0])
    poses = state.now if meets else state.ride
    spin, contact = poses.spin_axis[:, 0], poses.contact[:, 0]
    axle = _unit(face.seen(sign, spin))
    if axle is None:
        axle = _measured_axle(state, sign, face)
    wheel = state.side[names.WHEEL_CENTER]
    shift = state.shift[:, 0]
    moves = meets and bool(np.isfinite(shift).all())
    return Standing(
        name,
        state,
        meets,
        {**measured, **moved} if meets else measured,
        axle,
        face.seen(sign, contact)
        if np.isfinite(contact).all()
        else face.place(sign, wheel._replace(up=wheel.up - state.side.tire.radius)),
        face.seen(sign, shift) if moves else (0.0, 0.0),
        face,
    )


def _measured_axle(state: CornerState, sign: float, face: Face) -> XY:
    """The axle's direction by the static toe and camber, where no pose has one."""
    camber, toe = state.side.static_camber, state.side.static_toe
    angle = -camber if face.second == "up" else toe
    return sign * float(np.cos(angle)), face.way * float(np.sin(angle))


def relay_standing(solution: Solution, face: Face = FRONT) -> dict[str, XY]:
    """The relay-rod steering's points as they stand; empty for a rack."""
    relay = solution.layout.steering
    if not isinstance(relay, RelayRod):
        return {}
    out = {
        name: face.place(sign_of(relay.side_of(name)), relay[name]) for name in RELAY_POINTS
    }
    if solution.rack:
        pitman, idler = relay_ends(relay, solution.rack)
        for name, place in ((names.PITMAN_END, pitman), (names.IDLER_END, idler)):
            if bool(np.isfinite(place).all()):
                out[name] = face.seen(1.0, place[:, 0])
    return out


def nail_places(solution: Solution, face: Face = FRONT) -> dict[tuple[SideName, str], XY]:
    """Where each nail stands on the floor in the chosen pose, in the layout's order."""
    sides = {side: standing(solution, side, face).points for side in SIDES}
    relay = relay_standing(solution, face)
    return {
        (side, name): relay[name] if name in relay else sides[side][name]
        for side, name in solution.layout.nails()
    }


def _settled(place: XY, measured: XY) -> XY:
    """A place, or the measured one that it misses only by the last digits of a solve.

    So what stands still is known to, number for number, and is drawn once.
    """
    near = abs(place[0] - measured[0]) < _STILL and abs(place[1] - measured[1]) < _STILL
    return measured if near else place


def _unit(way: XY) -> XY | None:
    """A direction as a unit one, without a solve's last digits; None if it has none."""
    size = math.hypot(*way)
    return (round(way[0] / size, 13), round(way[1] / size, 13)) if size > 1e-9 else None


def array(*places: XY) -> Array:
    """Places as an (n, 2) array."""
    return np.array(places, dtype=float)
