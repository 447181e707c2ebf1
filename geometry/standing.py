"""Where every point of a car stands in the front view in the chosen pose, for drawing.

Places are (x, y) in mm: x to the car's left of its centerline, which is to the right of
someone looking at the car from ahead; y up from the floor the car stands on at ride height.
The body stands still and the wheels move.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry import layout as names
from geometry.figures import pose_points
from geometry.layout import RELAY_POINTS, SIDES, RelayRod, SideName
from geometry.linkage import Array
from geometry.solution import CornerState, Solution
from geometry.steering import relay_ends

XY = tuple[float, float]

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

    @property
    def sign(self) -> float:
        return sign_of(self.side)

    def at(self, over: float, up: float) -> XY:
        """A place in this side's measures as a place on the floor."""
        return self.sign * over, up


def standing(solution: Solution, name: SideName) -> Standing:
    """One side of a solved car in its chosen pose."""
    state = solution.sides[name]
    sign = sign_of(name)
    measured = {key: (sign * p.over, p.up) for key, p in state.side.points.items()}
    now = pose_points(state.side, state.corner, state.now)
    moved = {
        key: (sign * float(place[1, 0]), float(place[2, 0]))
        for key, place in now.items()
        if bool(np.isfinite(place[:, 0]).all())
    }
    meets = bool(state.now.assembles[0])
    poses = state.now if meets else state.ride
    spin, contact = poses.spin_axis[:, 0], poses.contact[:, 0]
    axle = _unit((sign * float(spin[1]), float(spin[2])))
    if axle is None:
        camber = state.side.static_camber
        axle = (sign * float(np.cos(camber)), -float(np.sin(camber)))
    wheel = state.side[names.WHEEL_CENTER]
    shift = state.shift[:, 0]
    moves = meets and bool(np.isfinite(shift).all())
    return Standing(
        name,
        state,
        meets,
        {**measured, **moved} if meets else measured,
        axle,
        (sign * float(contact[1]), float(contact[2]))
        if np.isfinite(contact).all()
        else (sign * wheel.over, wheel.up - state.side.tire.radius),
        (sign * float(shift[1]), float(shift[2])) if moves else (0.0, 0.0),
    )


def relay_standing(solution: Solution) -> dict[str, XY]:
    """The relay-rod steering's points as they stand; empty for a rack."""
    relay = solution.layout.steering
    if not isinstance(relay, RelayRod):
        return {}
    out = {
        name: (sign_of(relay.side_of(name)) * relay[name].over, relay[name].up)
        for name in RELAY_POINTS
    }
    if solution.rack:
        pitman, idler = relay_ends(relay, solution.rack)
        for name, place in ((names.PITMAN_END, pitman), (names.IDLER_END, idler)):
            if bool(np.isfinite(place).all()):
                out[name] = (float(place[1, 0]), float(place[2, 0]))
    return out


def nail_places(solution: Solution) -> dict[tuple[SideName, str], XY]:
    """Where each nail stands on the floor in the chosen pose, in the layout's order."""
    sides = {side: standing(solution, side).points for side in SIDES}
    relay = relay_standing(solution)
    return {
        (side, name): relay[name] if name in relay else sides[side][name]
        for side, name in solution.layout.nails()
    }


def _unit(way: XY) -> XY | None:
    size = float(np.hypot(*way))
    return (way[0] / size, way[1] / size) if size > 1e-9 else None


def array(*places: XY) -> Array:
    """Places as an (n, 2) array."""
    return np.array(places, dtype=float)
