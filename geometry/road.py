"""Wheels that stand unevenly: a car posed by body roll, seen from the floor under its tires."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from geometry.layout import SIDES, Layout, SideName
from geometry.roll import on_both_tires, rolled
from geometry.solution import Solution

MOST_ROLL = float(np.radians(15.0))
"""No body rolls farther on its springs, rad (common practice, no source)."""


def roll_travel(layout: Layout, roll: float, heave: float, rack: float) -> dict[SideName, float]:
    """Where a body rolled by ``roll`` rad (left side up positive) puts each wheel, mm.

    ``heave`` is the mean of both. Where the parts can't follow, what level tires would ask for.
    """
    pose = rolled(layout, roll, heave, rack)
    found: dict[SideName, float] = {
        side: float(pose.sides[side].poses.travel[0]) for side in SIDES
    }
    if bool(pose.assembles[0]) and all(np.isfinite(value) for value in found.values()):
        return found
    half = 0.5 * sum(layout.side(side)["wheel center"].over for side in SIDES)
    lift = float(np.tan(roll)) * half
    return {"left": heave - lift, "right": heave + lift}


def on_road(solution: Solution) -> Solution:
    """A solved car with its pose taken on the one floor that touches both tires.

    The same solution where both wheels stand alike or the parts don't meet.
    """
    left, right = (solution.travel[side] for side in SIDES)
    if left == right or not solution.assembles:
        return solution
    pose = on_both_tires(
        solution.layout, {"left": np.array([left]), "right": np.array([right])}, solution.rack
    )
    if not bool(pose.assembles[0]):
        return solution
    sides = {
        side: replace(
            solution.sides[side], now=pose.sides[side].poses, now_view=pose.sides[side].view
        )
        for side in SIDES
    }
    return replace(solution, sides=sides, road=pose)
