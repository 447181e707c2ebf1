"""Findings on room: parts that enter a no-go shape or come closer than wanted, and joints."""

from __future__ import annotations

import math

import numpy as np

from geometry.clearance import Clearance, PoseSet, clearances, pose_set
from geometry.finding_checks.finding import Finding, Severity
from geometry.finding_checks.wording import Wording
from geometry.joints import joint_swings
from geometry.layout import SIDES, Layout
from geometry.spring_words import JOINT_LIMITS
from geometry.springs import spring_motion, stroke_words
from geometry.tolerances import tolerance, tolerance_source


def clearance_findings(layout: Layout, span: float, rack_reach: float) -> list[Finding]:
    """Every place where room is short, a joint swings too far or a spring bottoms or tops.

    Not for the drag path: some 15 ms and more with many shapes.
    """
    words = Wording(layout.units)
    poses = pose_set(layout, span, rack_reach)
    with np.errstate(all="ignore"):
        found = [_room(one, words) for one in clearances(poses) if not one.is_met]
        found += _joints(poses, words)
        found += _springs(poses, words)
    return _once_while_linked(found, layout)


def _once_while_linked(found: list[Finding], layout: Layout) -> list[Finding]:
    """While the right side mirrors the left, one finding speaks for both."""
    if not layout.linked:
        return found
    seen: set[tuple[str, str]] = set()
    out = []
    for one in found:
        key = (one.code, one.headline.replace("Left", "").replace("Right", "").lower())
        if key not in seen:
            seen.add(key)
            out.append(one)
    return out


def pose_words(one: Clearance, words: Wording) -> str:
    travel = "ride height"
    if abs(one.travel) > 0.5:
        travel = f"{words.tape(one.travel)} of {'bump' if one.travel > 0 else 'droop'}"
    if abs(one.rack) < 0.5:
        return f"at {travel}, steering straight"
    way = "left" if one.rack > 0 else "right"
    return f"at {travel}, steering {words.tape(one.rack)} to the {way}"


def room_words(one: Clearance, words: Wording) -> str:
    """The tightest place of a shape in one line: how much room, to what, in which pose."""
    part = one.part if one.side is None else f"{one.side} {one.part}"
    if one.room <= 0.0:
        deep = f" by {words.tape(one.room)}" if one.room < -0.05 else ""
        return f"{part} enters it{deep} {pose_words(one, words)}"
    short = "" if one.is_met else f", wanted {words.tape(one.wanted)}"
    return f"{words.tape(one.room)} of room to the {part}{short}, {pose_words(one, words)}"


def _room(one: Clearance, words: Wording) -> Finding:
    part = one.part.capitalize() if one.side is None else f"{one.side.capitalize()} {one.part}"
    severity: Severity = "wrong" if one.room <= 0.0 else "warn"
    if one.room <= 0.0:
        headline = f"{part} enters the {one.thing}"
        headline += f" by {words.tape(one.room)}." if one.room < -0.05 else "."
    else:
        headline = f"{part} passes the {one.thing} with only {words.tape(one.room)} of room."
    view = {"front": "seen from the front", "above": "seen from above", None: "in space"}[one.view]
    return Finding(
        code="no-go-entered" if one.room <= 0.0 else "room-short",
        severity=severity,
        side=None,
        headline=headline,
        detail=f"Tightest {pose_words(one, words)}, {view}. Wanted: {words.tape(one.wanted)} "
        "(set with the shape, or 1 in for tires).",
        figure=one.room,
        tolerance=one.wanted,
        tolerance_source="set in this layout",
    )


def _joints(poses: PoseSet, words: Wording) -> list[Finding]:
    out: list[Finding] = []
    for side in SIDES:
        for joint in joint_swings(poses.corners[side], poses.poses[side]):
            limit = tolerance(poses.layout, JOINT_LIMITS[joint.name])
            if not math.isfinite(joint.most) or joint.most <= limit:
                continue
            source = tolerance_source(poses.layout, JOINT_LIMITS[joint.name])
            out.append(
                Finding(
                    code="joint-swing",
                    severity="warn",
                    side=None if poses.layout.linked else side,
                    headline=f"{joint.name.capitalize()} swings {words.angle(joint.most)} from "
                    "ride height, more than such a joint has.",
                    detail=f"At {words.tape(float(poses.travel[joint.at]))} of "
                    f"{'bump' if poses.travel[joint.at] > 0 else 'droop'}. "
                    f"Tolerance: at most {words.angle(limit)} ({source}).",
                    figure=joint.most,
                    tolerance=limit,
                    tolerance_source=source,
                    kind="angle",
                    points=(joint.name,),
                )
            )
    return out


def _springs(poses: PoseSet, words: Wording) -> list[Finding]:
    out: list[Finding] = []
    straight = poses.rack == 0.0
    for side in SIDES[:1] if poses.layout.linked else SIDES:
        one = poses.layout.side(side)
        corner = poses.corners[side]
        motion = spring_motion(one, corner, corner.poses(np.unique(poses.travel[straight])))
        if motion is None:
            continue
        bottoms, tops = stroke_words(motion, one.spring.shortest, one.spring.longest)
        for travel, verb, limit in (
            (bottoms, "bottoms", one.spring.shortest), (tops, "tops out", one.spring.longest)
        ):
            if travel is None or limit is None:
                continue
            way = "bump" if travel > 0 else "droop"
            out.append(
                Finding(
                    code=f"spring-{'bottoms' if verb == 'bottoms' else 'tops'}",
                    severity="warn",
                    side=None if poses.layout.linked else side,
                    headline=f"Spring or shock {verb} at {words.tape(travel)} of {way}.",
                    detail=f"Its limit is {words.tape(limit)} between mounts (typed with it).",
                    figure=travel,
                    tolerance=limit,
                    tolerance_source="set in this layout",
                    points=("spring top mount",),
                )
            )
    return out
