"""A corner's spring through its travel as a person reads it, and the rate for a frequency."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from geometry.corner import Corner
from geometry.layout import Layout, SideName
from geometry.loads import ride_frequency, wheel_rate_for
from geometry.quantities import STANDARD_GRAVITY
from geometry.springs import SpringMotion, spring_motion

_POSES = 65


@dataclass(frozen=True)
class SpringRow:
    """The spring at one travel, mm: length between mounts, ratio, wheel rate N/mm.

    ``to_shortest`` and ``to_longest`` mm of stroke left each way. None for what is not known.
    """

    travel: float
    length: float | None
    to_shortest: float | None
    to_longest: float | None
    ratio: float | None
    wheel_rate: float | None
    frequency: float | None


def corner_mass(layout: Layout) -> float | None:
    """The sprung mass on one front corner, kg; None while the weights are not given."""
    loads = layout.loads
    if not loads.sprung_mass or not loads.front_share:
        return None
    return 0.5 * loads.sprung_mass * loads.front_share


def motion_of(layout: Layout, side: SideName, span: float) -> SpringMotion | None:
    """A side's spring from full droop to full bump; None without its two mounts."""
    one = layout.side(side)
    corner = Corner.of(one)
    return spring_motion(one, corner, corner.poses(np.linspace(-span, span, _POSES)))


def spring_rows(
    layout: Layout, side: SideName, motion: SpringMotion, count: int = 9
) -> tuple[SpringRow, ...]:
    """Rows at even travels over the whole motion, droop first."""
    spring, mass = layout.side(side).spring, corner_mass(layout)
    rows = []
    for at in np.linspace(0, motion.travel.size - 1, count).round().astype(int):
        length, ratio = (_known(float(v[at])) for v in (motion.length, motion.motion_ratio))
        rate = None if spring.rate is None or ratio is None else spring.rate * ratio**2
        rows.append(
            SpringRow(
                float(motion.travel[at]),
                length,
                _less(length, spring.shortest),
                _less(spring.longest, length),
                ratio,
                rate,
                None if not rate or mass is None else ride_frequency(rate, mass),
            )
        )
    return tuple(rows)


def _known(value: float) -> float | None:
    return value if math.isfinite(value) else None


def _less(a: float | None, b: float | None) -> float | None:
    return None if a is None or b is None else a - b


def ride_ratio(motion: SpringMotion) -> float | None:
    """The motion ratio at ride height, None where the corner can't stand there."""
    return _known(float(motion.motion_ratio[motion.travel.size // 2]))


def rate_for_frequency(layout: Layout, motion: SpringMotion, frequency: float) -> float | None:
    """The spring rate, N/mm, for a ride frequency, Hz, by its ratio at ride height.

    None while the corner's weight is not given, or where the spring has no leverage.
    """
    mass, ratio = corner_mass(layout), ride_ratio(motion)
    if mass is None or ratio is None or abs(ratio) < 1e-3:
        return None
    return wheel_rate_for(frequency, mass) / ratio**2


def changing_ratio_term(layout: Layout, motion: SpringMotion) -> float | None:
    """What the changing motion ratio adds to the wheel rate at ride height, N/mm.

    The spring carries the corner's sprung weight there: force = weight / motion ratio.
    """
    mass, ratio = corner_mass(layout), ride_ratio(motion)
    if mass is None or ratio is None or abs(ratio) < 1e-3:
        return None
    term = motion.changing_ratio_rate(mass * STANDARD_GRAVITY / ratio)
    return _known(float(term[motion.travel.size // 2]))
