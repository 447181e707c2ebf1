"""The figures of ``tolerances.FIGURES`` for many cars at once that differ in one side.

A target names a figure; a zone needs that figure for thousands of cars. Figures at ride
height come from the construction alone, without moving anything.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from geometry import layout as names
from geometry.corner import Corner, Poses, contact_point, ground_offsets
from geometry.front_view import FrontView, front_view, roll_center
from geometry.inner_pivot import toe_range as peak_to_peak
from geometry.layout import Side
from geometry.linkage import Array
from geometry.tolerances import toe_length


def ride_poses(corner: Corner) -> Poses:
    """Corners (*cars) at ride height, one pose each, as they were measured: (*cars, 1).

    The same as ``corner.poses(0.0)`` without finding the arm's swing.
    """
    shape = (3, *corner.cars, 1)
    lower, upper, spin, wheel = (
        np.where(corner.as_built, np.broadcast_to(place, shape), np.nan)
        for place in (corner.lower_ball, corner.upper_ride, corner.spin_axis, corner.wheel_center)
    )
    axis = upper - lower
    with np.errstate(all="ignore"):
        contact = contact_point(wheel, spin, corner.tire_radius)
        scrub, trail = ground_offsets(lower, upper, spin, contact)
        strut = corner.points.get(names.STRUT_LOWER) if corner.is_strut else None
        flat = shape[1:]
        return Poses(
            travel=np.zeros(flat),
            assembles=np.broadcast_to(corner.as_built, flat),
            lower_ball=lower,
            upper_ball=upper,
            tie_inner=np.broadcast_to(corner.tie_inner, shape),
            tie_outer=np.broadcast_to(corner.tie_outer, shape),
            wheel_center=wheel,
            spin_axis=spin,
            contact=contact,
            toe=np.arctan2(spin[0], spin[1]),
            camber=-np.arcsin(np.clip(spin[2], -1.0, 1.0)),
            caster=np.arctan2(-axis[0], axis[2]),
            kingpin_inclination=np.arctan2(-axis[1], axis[2]),
            scrub_radius=scrub,
            mechanical_trail=trail,
            swing=np.zeros(flat),
            strut_lower=None if strut is None else np.broadcast_to(strut, shape),
        )


@dataclass(frozen=True)
class CarBatch:
    """Cars (k,) that differ in one side's points.

    ``corner`` holds that side's corners; ``other`` the far side's one corner, or None where
    it mirrors them. ``travel`` (n,) mm is that over which ranges are judged; ``side`` gives
    the tire.
    """

    corner: Corner
    other: Corner | None
    side: Side
    travel: Array

    @cached_property
    def ride(self) -> Poses:
        return ride_poses(self.corner)

    @cached_property
    def ride_view(self) -> FrontView:
        return front_view(self.corner, self.ride)

    def far_view(self, near: FrontView, travel: Array | None) -> FrontView:
        """The far side's construction, at ride height (``travel`` None) or through travel."""
        if self.other is None:
            return near
        poses = ride_poses(self.other) if travel is None else self.other.poses(travel)
        view = front_view(self.other, poses)
        # One car's poses beside many: (..., n) becomes (..., 1, n).
        return FrontView(**{key: part[..., None, :] for key, part in view.__dict__.items()})

    def roll_center_height(self) -> Array:
        near = self.ride_view
        return np.asarray(roll_center(near, self.far_view(near, None))[1, :, 0])

    def roll_center_curve(self) -> Array:
        """The roll center's height (k, n) through the travel, mm."""
        near = front_view(self.corner, self.corner.poses(self.travel))
        return np.asarray(roll_center(near, self.far_view(near, self.travel))[1])

    def roll_center_movement(self) -> Array:
        return peak_to_peak(self.roll_center_curve())

    def swing_arm(self) -> Array:
        arm = self.ride_view.swing_arm[:, 0]
        return np.where(np.isfinite(arm), arm, np.nan)

    def camber_gain(self) -> Array:
        arm = self.ride_view.swing_arm[:, 0]
        return np.asarray(1.0 / np.where(arm == 0.0, np.nan, arm))

    def toe_curve(self) -> Array:
        """Toe (k, n) through the travel, rad, the steering centered."""
        return self.corner.poses(self.travel).toe

    def toe_range(self) -> Array:
        return range_of("toe range", self.toe_curve(), self.side)

    def lower_arm_slope(self) -> Array:
        a, b = self.ride_view.lower_line[0, :, 0], self.ride_view.lower_line[1, :, 0]
        # Along the line (b, -a), turned so that it leads outboard.
        return np.where(b >= 0.0, np.arctan2(-a, b), np.arctan2(a, -b))


def _ride(attribute: str) -> Callable[[CarBatch], Array]:
    return lambda batch: np.asarray(getattr(batch.ride, attribute)[:, 0])


BATCH_FIGURES: dict[str, Callable[[CarBatch], Array]] = {
    "roll center height": CarBatch.roll_center_height,
    "roll center movement": CarBatch.roll_center_movement,
    "camber gain": CarBatch.camber_gain,
    "swing arm": CarBatch.swing_arm,
    "toe range": CarBatch.toe_range,
    "scrub radius": _ride("scrub_radius"),
    "mechanical trail": _ride("mechanical_trail"),
    "caster": _ride("caster"),
    "kingpin inclination": _ride("kingpin_inclination"),
    "lower arm slope": CarBatch.lower_arm_slope,
    "half track": _ride("half_track"),
}
"""Each figure's values (k,) in internal units, NaN where there is none, by its key."""

CURVES: dict[str, Callable[[CarBatch], Array]] = {
    "roll center movement": CarBatch.roll_center_curve,
    "toe range": CarBatch.toe_curve,
}
"""The curves (k, n) whose peak to peak some figures are. A curve changes smoothly from car to
car where its peak to peak has kinks."""


def range_of(figure: str, curve: Array, side: Side) -> Array:
    """A figure of CURVES (...) from its curve (..., n)."""
    return peak_to_peak(toe_length(side, curve) if figure == "toe range" else curve)


def figures_of(batch: CarBatch, figure: str) -> Array:
    """A figure (k,) of a batch; KeyError for what is no figure."""
    with np.errstate(all="ignore"):
        return BATCH_FIGURES[figure](batch)
