"""One solve of a car: everything a view draws, in one immutable Solution.

``solve`` takes a Layout and where the wheels and the steering stand; the floor, the
readouts, the curves, the findings and ``bobline figures`` all read its answer.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

import numpy as np

from geometry.corner import Corner, Poses
from geometry.front_view import FrontView, front_view, roll_center, roll_center_place
from geometry.inner_pivot import (
    HeldMotion,
    best_fit,
    curvature_center,
    held_travel,
    string_rule,
    toe_of,
    toe_range,
)
from geometry.layout import SIDES, Layout, Side, SideName
from geometry.linkage import Array
from geometry.steering import inner_shifts

if TYPE_CHECKING:
    from geometry.roll import RolledPose

SWEEP_STEPS = 81
SPAN = 75.0
"""Half the travel over which toe ranges and best fits are judged if nothing else is said, mm."""
PIVOT_KINDS = ("as is", "string rule", "curvature center", "best fit")


@dataclass(frozen=True)
class InnerPivots:
    """The three places for one side's inner tie-rod pivot and the toe range each leaves.

    Places are (over, up) in mm, None where there is none; ranges are peak to peak in rad
    over the span, None where a pose is missing.
    """

    places: dict[str, tuple[float, float] | None]
    ranges: dict[str, float | None]
    motion: HeldMotion

    def place(self, kind: str) -> tuple[float, float] | None:
        return self.places[kind]


@dataclass(frozen=True)
class CornerState:
    """One side as it stands: the chosen pose, the whole travel, and its inner pivots.

    ``now`` and ``now_view`` hold one pose (shape (1,)), ``ride`` and ``ride_view`` the
    ride-height pose, ``sweep`` and ``sweep_view`` the travel from -span to +span with the
    chosen rack.
    """

    name: SideName
    side: Side
    corner: Corner
    now: Poses
    now_view: FrontView
    ride: Poses
    ride_view: FrontView
    sweep: Poses
    sweep_view: FrontView
    shift: Array

    @cached_property
    def stops(self) -> tuple[float, float]:
        """Travel, mm, at which the parts stop meeting in droop and bump (may be infinite)."""
        droop, bump = self.corner.travel_stops(self.shift)
        return float(droop), float(bump)

    @cached_property
    def centered_toe(self) -> Array:
        """Toe (n,), rad, through the sweep's travel with the rack centered; NaN out of reach."""
        poses = self.corner.poses(self.sweep.travel) if np.any(self.shift) else self.sweep
        return np.where(poses.assembles, poses.toe, np.nan)

    @cached_property
    def pivots(self) -> InnerPivots:
        """Where the inner tie-rod pivot belongs, over the sweep's travel, rack centered."""
        return inner_pivots(self.corner, self.ride_view, self.sweep.travel)


@dataclass(frozen=True)
class Solution:
    """A solved car. Travel and rack in mm, span the half travel of the sweep.

    ``road`` is the pose on the one floor under both tires, where that is tilted against the
    body; contacts, scrub radius and roll center in the chosen pose are then taken on it.
    """

    layout: Layout
    travel: dict[SideName, float]
    rack: float
    span: float
    sides: dict[SideName, CornerState]
    road: RolledPose | None = None

    @property
    def left(self) -> CornerState:
        return self.sides["left"]

    @property
    def right(self) -> CornerState:
        return self.sides["right"]

    @cached_property
    def roll_center(self) -> tuple[float, float] | None:
        """(left over, up above the tires' floor) in the chosen pose; None if there is none."""
        return pair_or_none(roll_center(self.left.now_view, self.right.now_view)[:, 0])

    @cached_property
    def roll_center_place(self) -> tuple[float, float] | None:
        """The same point in the body's frame, for drawing: (left over, up)."""
        place = roll_center_place(self.left.now_view, self.right.now_view)[:, 0]
        return pair_or_none(place[:2]) if place[2] == 1.0 else None

    @cached_property
    def ride_roll_center(self) -> tuple[float, float] | None:
        """The roll center at ride height, rack centered: (left over, up above the floor)."""
        return pair_or_none(roll_center(self.left.ride_view, self.right.ride_view)[:, 0])

    @cached_property
    def roll_center_sweep(self) -> Array:
        """(2, n): roll center over and up through the sweep, both wheels at the same travel."""
        return roll_center(self.left.sweep_view, self.right.sweep_view)

    @cached_property
    def assembles(self) -> bool:
        """True if both sides meet in the chosen pose."""
        return all(bool(state.now.assembles.all()) for state in self.sides.values())


def pair_or_none(values: Array) -> tuple[float, float] | None:
    """Two numbers as a pair, or None if either is missing."""
    return (float(values[0]), float(values[1])) if bool(np.all(np.isfinite(values))) else None


def pick(poses: Poses, index: slice) -> Poses:
    """A part of some poses along their last axis."""
    parts: dict[str, Any] = {
        key: None if value is None else value[..., index] for key, value in poses.__dict__.items()
    }
    return Poses(**parts)


def _pick_view(view: FrontView, index: slice) -> FrontView:
    return FrontView(**{key: value[..., index] for key, value in view.__dict__.items()})


def _corner_state(
    layout: Layout, name: SideName, travel: float, rack: float, sweep: Array
) -> CornerState:
    """One side solved for ride height, the chosen pose and the sweep, in one call."""
    side = layout.side(name)
    corner = Corner.of(side)
    shift = inner_shifts(layout, rack)[name]
    travels = np.concatenate([[0.0, travel], sweep])
    shifts = np.concatenate([np.zeros((3, 1)), np.repeat(shift, 1 + sweep.size, axis=1)], axis=1)
    poses = corner.poses(travels, shifts)
    view = front_view(corner, poses)
    ride, now, rest = slice(0, 1), slice(1, 2), slice(2, None)
    return CornerState(
        name,
        side,
        corner,
        pick(poses, now),
        _pick_view(view, now),
        pick(poses, ride),
        _pick_view(view, ride),
        pick(poses, rest),
        _pick_view(view, rest),
        shift,
    )


def solve(
    layout: Layout,
    travel: float | dict[SideName, float] = 0.0,
    rack: float = 0.0,
    span: float = SPAN,
) -> Solution:
    """Solve a car with the wheels at ``travel`` (both, or each) and the rack at ``rack``, mm.

    Curves, ranges and best fits go over ``span`` mm of travel each way. Nothing raises for
    a layout that is complete: what can't meet comes back marked.
    """
    travels: dict[SideName, float] = (
        dict(travel) if isinstance(travel, dict) else {side: float(travel) for side in SIDES}
    )
    sweep = np.linspace(-span, span, SWEEP_STEPS)
    left = _corner_state(layout, "left", travels["left"], rack, sweep)
    if layout.linked and rack == 0.0 and travels["left"] == travels["right"]:
        # The mirror image has the same numbers in its own measures.
        right = CornerState(**{**left.__dict__, "name": "right"})
    else:
        right = _corner_state(layout, "right", travels["right"], rack, sweep)
    return Solution(layout, travels, rack, span, {"left": left, "right": right})


def inner_pivots(corner: Corner, ride_view: FrontView, travel: Array) -> InnerPivots:
    """The three places and the toe range that each, and the present one, leaves over travel."""
    motion = held_travel(corner, travel)
    ruled = string_rule(corner, ride_view)
    curved = curvature_center(corner)
    present = corner.tie_inner[1:, 0]
    best = best_fit(corner, motion, curved)
    if not np.all(np.isfinite(best)):
        # Without a curvature center to start from, the present pivot has to do.
        best = best_fit(corner, motion, present)
    rows: Sequence[Array] = [present, ruled[:2] if ruled[2] == 1.0 else ruled[:2] * np.nan, curved]
    with np.errstate(all="ignore"):
        pivots = np.stack([*rows, best], axis=1)
        ranges = toe_range(toe_of(motion, corner, pivots))
    return InnerPivots(
        {kind: pair_or_none(pivots[:, k]) for k, kind in enumerate(PIVOT_KINDS)},
        {
            kind: float(ranges[k]) if np.isfinite(ranges[k]) else None
            for k, kind in enumerate(PIVOT_KINDS)
        },
        motion,
    )


