"""The kingpin axis against the wheel, straight ahead: what a small drawing of it shows.

Seen from ahead (kingpin inclination and scrub radius) and from the wheel's outer side (caster
and mechanical trail). Lengths mm, angles rad, signs as in the rest of the program.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from geometry.finding_checks.wording import Wording
from geometry.layout import UnitName
from geometry.solution import CornerState

ViewName = Literal["front", "side"]


@dataclass(frozen=True)
class KingpinSketch:
    """One view of one wheel at ride height, in a frame whose origin is the tire's contact point.

    ``way`` is outboard (front view) or rearward (side view), up is up; mm.

    foot     where the kingpin axis meets the floor: its ``way`` from the contact point
    lean     the axis's lean, rad: its top inboard (front) or rearward (side) positive
    camber   the wheel's lean, rad, top outboard positive; 0 in the side view
    radius   the tire's loaded radius
    """

    view: ViewName
    foot: float
    lean: float
    camber: float
    radius: float

    def axis(self, height: float) -> tuple[float, float]:
        """Where the axis stands at a height above the floor: (way, up)."""
        rise = height * math.tan(self.lean)
        return (self.foot + (rise if self.view == "side" else -rise), height)

    def words(self, units: UnitName) -> str:
        """The two figures that the drawing shows."""
        said = Wording(units)
        size = said.tape(self.foot)
        if self.view == "front":
            way = "inboard" if self.lean >= 0.0 else "outboard"
            where = "inboard of" if self.foot <= 0.0 else "outboard of"
            return (
                f"Kingpin inclination {said.angle(abs(self.lean))}, top {way}; scrub radius {size},"
                f" axis meets the floor {where} the tire's middle."
            )
        way = "rearward" if self.lean >= 0.0 else "forward"
        where = "ahead of" if self.foot <= 0.0 else "behind"
        return (
            f"Caster {said.angle(abs(self.lean))}, top {way}; mechanical trail {size},"
            f" axis meets the floor {where} the tire's middle."
        )


def kingpin_sketches(state: CornerState) -> tuple[KingpinSketch, ...]:
    """Both views of a wheel at ride height; empty where its axis lies level or does not meet."""
    ride, radius = state.ride, state.side.tire.radius
    scrub, trail, inclination, caster, camber = (
        float(getattr(ride, name)[0])
        for name in (
            "scrub_radius", "mechanical_trail", "kingpin_inclination", "caster", "camber",
        )
    )
    figures = (scrub, trail, inclination, caster, camber)
    level = max(abs(inclination), abs(caster)) > math.radians(60.0)
    if level or not all(math.isfinite(figure) for figure in figures):
        return ()
    return (
        KingpinSketch("front", 0.0 - scrub, inclination, camber, radius),
        KingpinSketch("side", 0.0 - trail, caster, 0.0, radius),
    )
