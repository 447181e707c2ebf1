"""How a steered car rolls: where its turn centers, how its front tires slip, how wide it turns.

Seen from above in the car's axes, X forward and Y left, mm and rad.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from geometry.layout import SideName
from geometry.linkage import Array

TURNING_ASSUMPTIONS = (
    (
        "The car rolls at walking pace: the turn's center lies on the line of the rear axle,"
        " where both front tires run off their headings by the same angle."
    ),
    "The tread is taken as wide as the tire, and the tire's loaded radius as its radius.",
    "The body's corners are not known: wall to wall is taken by the tire's farthest point.",
)
"""What a turning circle takes for granted, in sentences for the person."""

_TIGHTEST = 100.0
"""The least distance of a turn's center from the car's centerline that is looked for, mm."""

_BISECTIONS = 60
_CIRCLE_SAMPLES = 720


@dataclass(frozen=True)
class TurningCircle:
    """The tightest turn to one side, mm and rad; TURNING_ASSUMPTIONS say what is assumed.

    ``center`` is the turn center's distance from the car's centerline, on the rear axle's
    line. Diameters: ``curb_to_curb`` by the outer front tire's outer edge on the floor,
    ``wall_to_wall`` by the tire's farthest point. ``inner_slip`` and ``outer_slip``: how
    far each front tire is turned into the turn beyond the way it rolls (what is left of
    the Ackermann condition); the two are equal and opposite.
    """

    turn: SideName
    rack: float
    center: float
    curb_to_curb: float
    wall_to_wall: float
    inner_slip: float
    outer_slip: float


def free_rolling(
    contacts: Sequence[Array], turned: Sequence[Array], wheelbase: float
) -> tuple[Array, list[Array]]:
    """The turn a car makes: curvature (n,), 1/mm, left positive, and each tire's slip (n,).

    ``contacts`` (3, n) each and the wheels' ``turned`` angles (n,), left positive. The turn's
    center lies on the rear axle's line at 1/curvature left of the centerline; it is where the
    slips add up to nothing, so that tires of one kind make no side force between them. Slip
    is positive where a wheel is turned farther to the left than it rolls; NaN where a
    contact is missing.
    """
    high = np.full(turned[0].shape, 1.0 / _TIGHTEST)
    low = -high

    def slips(curvature: Array) -> list[Array]:
        return [
            angle - np.arctan2(curvature * (place[0] + wheelbase), 1.0 - curvature * place[1])
            for place, angle in zip(contacts, turned, strict=True)
        ]

    with np.errstate(all="ignore"):
        # The rolling direction turns steadily with the curvature, so one root is bracketed.
        for _ in range(_BISECTIONS):
            middle = 0.5 * (low + high)
            more = np.add.reduce(slips(middle)) > 0.0
            low, high = np.where(more, middle, low), np.where(more, high, middle)
        curvature = 0.5 * (low + high)
        left_over = slips(curvature)
    return np.where(np.isfinite(np.add.reduce(left_over)), curvature, np.nan), left_over


def widths(
    center: Array, contact: Array, wheel_center: Array, spin: Array, radius: float, width: float
) -> tuple[float, float]:
    """Curb-to-curb and wall-to-wall diameters, mm, of the outer front tire's path.

    ``center`` (2,) is the turn's center; ``contact``, ``wheel_center`` and the unit vector
    ``spin`` outboard along the axle are (3,). The tire is a plain cylinder.
    """
    edge = contact[:2] + 0.5 * width * spin[:2] / np.hypot(*spin[:2])
    heading = np.cross(spin, [0.0, 0.0, 1.0])
    heading = heading / np.linalg.norm(heading)
    upright = np.cross(heading, spin)
    angle = np.linspace(0.0, 2.0 * np.pi, _CIRCLE_SAMPLES, endpoint=False)
    rim = heading[:, None] * np.cos(angle) + upright[:, None] * np.sin(angle)
    face = (wheel_center + 0.5 * width * spin)[:, None] + radius * rim
    farthest = np.hypot(face[0] - center[0], face[1] - center[1]).max()
    return 2.0 * float(np.hypot(*(edge - center))), 2.0 * float(farthest)
