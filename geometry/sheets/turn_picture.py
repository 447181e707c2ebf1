"""The car leaning in a steady turn, for a customer: a picture of each car and one sentence."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass

import numpy as np

from geometry.bounds import Bounds, Place
from geometry.drawing import Circle, Drawing, Item, Line, Polygon, Style, Text
from geometry.finding_checks.wording import Wording
from geometry.layout import Layout, SideName
from geometry.sheets.car_art import Look, all_parts, frame_for, part_items, scale_for
from geometry.sheets.flow import Flow
from geometry.sheets.look import (
    BLUE,
    BODY,
    CENTERLINE,
    GROUND,
    HAIR,
    INK,
    SMALL,
    SOFT,
    VERMILLION,
    ink,
)
from geometry.solution import solve
from geometry.turn_words import CornerPicture, cornering

_HEIGHT = 33.0
_ARM = Style(VERMILLION, 0.7, layer="centers")
_TIRES: tuple[tuple[SideName, str], ...] = (("right", "outer"), ("left", "inner"))
"""In a turn to the left."""


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
    lean = max(abs(picture.turn.roll_angle) for _, _, picture in found)
    frame = turn_frame([layout for _, layout, _ in found], lean)
    gap = 8.0
    width = flow.width if len(found) == 1 else 0.5 * (flow.width - gap)
    scale = scale_for(frame, width, _HEIGHT)
    shown = [
        _Turning(words, leaning_car(layout, picture, frame, scale), _sentence(words, picture))
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


def turn_frame(cars: list[Layout], lean: float) -> Bounds:
    """Room, mm, for every car at ride height, and for its corners as the body leans (rad)."""
    frame = frame_for([solve(layout) for layout in cars], 30.0)
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


def leaning_car(
    layout: Layout, picture: CornerPicture, frame: Bounds, scale: float, *, marks: bool = False
) -> Drawing:
    """The car turned so that its floor lies level, in paper mm.

    ``marks`` adds the roll center, the center of gravity with the roll arm between them, and
    each tire's lean to the road.
    """
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
    shown = Drawing(tuple(level)).scaled(1.0 / scale).items
    if marks:
        def on_paper(over: float, up: float) -> Place:
            place = complex(over, up) * np.exp(1j * roll)
            return float(place.real) / scale, float(place.imag - foot.imag) / scale

        shown = (*shown, *_marks(layout, picture, on_paper, paper))
    return Drawing(shown, paper)


def _marks(
    layout: Layout,
    picture: CornerPicture,
    on_paper: Callable[[float, float], Place],
    paper: Bounds,
) -> Iterator[Item]:
    """The points that the body leans about and by, and the tires' lean, in paper mm."""
    pose, words = picture.pose, Wording(layout.units)
    gravity = None if layout.cg_height is None else on_paper(0.0, layout.cg_height)
    center = tuple(float(v) for v in pose.roll_center_place[:, 0])
    roll_center = on_paper(*center) if all(map(math.isfinite, center)) else None
    seen = roll_center is not None and paper.left < roll_center[0] < paper.right
    if roll_center is not None and gravity is not None:
        yield Line(gravity, _held(gravity, roll_center, paper), _ARM)
    if roll_center is not None:
        high, aside = float(pose.roll_center[1, 0]), float(pose.roll_center_offset[0])
        said = f"Roll center {words.signed_tape(high)} up"
        if words.counts(aside):
            said += f", {words.tape(aside)} to the car's {'left' if aside > 0.0 else 'right'}"
        if seen:
            yield Circle(roll_center, 1.3, Style(BLUE, 0.6, fill="#FFFFFF", layer="centers"))
        # Under the road, where nothing else stands.
        yield Text((0.5 * (paper.left + paper.right), -1.9 * BODY), said, BODY, h="center",
                   style=ink(BLUE))
    if gravity is not None:
        yield Circle(gravity, 1.6, Style(INK, 0.4, fill="#FFFFFF", layer="centers"))
        for start in (0.0, math.pi):
            wedge = [gravity] + [
                (gravity[0] + 1.6 * math.cos(start + a), gravity[1] + 1.6 * math.sin(start + a))
                for a in np.linspace(0.0, 0.5 * math.pi, 9)
            ]
            yield Polygon(tuple(wedge), style=Style(None, fill=INK, layer="centers"))
        yield _label(gravity, "Center of gravity", INK)
    turning = abs(picture.turn.lateral_g) > 1e-9
    for side, which in _TIRES:
        contact = pose.sides[side].poses.contact[:, 0]
        sign = 1.0 if side == "left" else -1.0
        x, _ = on_paper(sign * float(contact[1]), float(contact[2]))
        lean = words.angle(float(pose.sides[side].camber[0]))
        said = f"{which} tire {lean}" if turning else f"{side} tire {lean}"
        yield Text((x, -1.9 * BODY), said, BODY, h="center", bold=True, style=ink())


def _held(start: Place, end: Place, paper: Bounds) -> Place:
    """The end of a line, or where the line leaves the paper at its left or right."""
    edge = paper.right if end[0] > start[0] else paper.left
    run = end[0] - start[0]
    share = 1.0 if run == 0.0 else min(1.0, (edge - start[0]) / run)
    return start[0] + share * run, start[1] + share * (end[1] - start[1])


def _label(place: Place, words: str, color: str) -> Text:
    return Text((place[0] + 2.6, place[1] + 0.9), words, BODY, style=ink(color))
