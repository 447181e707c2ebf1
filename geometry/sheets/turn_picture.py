"""The car leaning in a steady turn, for a customer: a picture of each car and one sentence."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from geometry.bounds import Bounds
from geometry.drawing import Drawing, Item, Line, Text
from geometry.layout import Layout
from geometry.sheets.car_art import Look, all_parts, frame_for, part_items, scale_for
from geometry.sheets.flow import Flow
from geometry.sheets.look import BODY, CENTERLINE, GROUND, HAIR, SMALL, SOFT, ink
from geometry.solution import solve
from geometry.turn_words import CornerPicture, cornering

_HEIGHT = 33.0


@dataclass(frozen=True)
class _Turning:
    words: str
    drawing: Drawing
    sentence: str


def turn_picture(flow: Flow, cars: list[tuple[str, Layout]], lateral_g: float) -> None:
    """Put the cars' lean in a left turn on the page; nothing where weights are not given."""
    found: list[tuple[str, Layout, CornerPicture]] = []
    for words, layout in cars:
        picture = cornering(layout, lateral_g)
        if isinstance(picture, str) or not bool(picture.pose.assembles[0]):
            return
        found.append((words, layout, picture))
    frame = _frame(found)
    gap = 8.0
    width = flow.width if len(found) == 1 else 0.5 * (flow.width - gap)
    scale = scale_for(frame, width, _HEIGHT)
    shown = [
        _Turning(words, _leaning(layout, picture, frame, scale), _sentence(words, picture))
        for words, layout, picture in found
    ]
    tall = frame.height / scale
    flow.title("In a turn", tall + 6.0 + 4.2 * len(shown))
    base = flow.y - 1.25 * BODY
    for place, turning in enumerate(shown):
        x = flow.left + place * (width + gap)
        flow.add(Text((x, base), turning.words, BODY, bold=True, style=ink()))
    flow.skip(1.8 * BODY)
    for place, turning in enumerate(shown):
        x = flow.left + place * (width + gap) + 0.5 * (width - frame.width / scale)
        flow.put(turning.drawing, x)
    flow.skip(tall + 1.0)
    for turning in shown:
        flow.paragraph(turning.sentence)
    flow.paragraph(
        f"A steady turn to the left at {lateral_g:.2g} g on a level road, worked out from the "
        "weights and springs given. The thin upright line is plumb.",
        SMALL, color=SOFT,
    )


def _frame(cars: list[tuple[str, Layout, CornerPicture]]) -> Bounds:
    """Room for every car at ride height, and for its corners as the body leans."""
    frame = frame_for([solve(layout) for _, layout, _ in cars], 30.0)
    lean = max(abs(picture.turn.roll_angle) for _, _, picture in cars)
    more = frame.right * math.sin(min(lean, 0.5))
    return Bounds(frame.left - 0.4 * more, frame.bottom, frame.right + 0.4 * more,
                  frame.top + 0.5 * more)


def _sentence(words: str, picture: CornerPicture) -> str:
    body = _tenths(picture.turn.roll_angle)
    outer = float(picture.pose.right.camber[0])
    if not math.isfinite(outer):
        return f"{words}: the body leans {body}."
    return f"{words}: the body leans {body}; the outer tire {lean_words(outer)}."


def _tenths(angle: float) -> str:
    return f"{abs(math.degrees(angle)):.1f}°"


def lean_words(camber: float) -> str:
    """A tire's lean to the road, rad (top outboard positive), in a driver's words."""
    size = _tenths(camber)
    if size == "0.0°":
        return "stands straight up on the road"
    return f"leans {size} {'outward' if camber > 0.0 else 'inward'} at its top"


def _leaning(layout: Layout, picture: CornerPicture, frame: Bounds, scale: float) -> Drawing:
    """The car turned so that its floor lies level, in paper mm."""
    pose = picture.pose
    travel = {side: float(pose.sides[side].poses.travel[0]) for side in pose.sides}
    solution = solve(layout, travel)
    roll = float(pose.roll[0])
    # The floor passes the left contact and falls to the car's left in positive roll.
    contact = pose.left.poses.contact[:, 0]
    foot = complex(float(contact[1]), float(contact[2])) * np.exp(1j * roll)
    top = frame.top - 0.1 * frame.height
    body: list[Item] = list(part_items(all_parts(solution), Look(springs=False, grooves=False)))
    body.append(Line((0.0, 0.0), (0.0, top), CENTERLINE))
    leaned = Drawing(tuple(body)).rotated(roll).translated(0.0, -foot.imag)
    level: list[Item] = [
        Line((frame.left, 0.0), (frame.right, 0.0), GROUND),
        *leaned.items,
        Line((0.0, 0.0), (0.0, top), HAIR),
    ]
    paper = Bounds(*(value / scale for value in frame))
    return Drawing(Drawing(tuple(level)).scaled(1.0 / scale).items, paper)
