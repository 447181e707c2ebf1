"""Three ways to the same drop side by side: by spring, by dropped knuckle, by smaller tire."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from geometry.compare import bump_toe_change, compare
from geometry.drawing import Text
from geometry.drops import Way, alignment, three_ways
from geometry.finding_checks.wording import Wording
from geometry.layout import SIDES, Job
from geometry.lengths import format_angle
from geometry.pages import Pages
from geometry.sheets.car_art import frame_for, front_art, scale_for
from geometry.sheets.cautions import COMPUTED, FOR_SHOP
from geometry.sheets.customer import roll_label
from geometry.sheets.flow import Cell, Column, Flow
from geometry.sheets.look import BODY, SMALL, SOFT, VERDICT_INK, ink
from geometry.sheets.options import Heading, SheetOptions, notes_of
from geometry.solution import CornerState, Solution, solve

KIND = "Three ways to lower"
RAISE = "Three ways to raise"
_VIEW_HEIGHT = 38.0
_MARKS = {"better": "better", "worse": "worse"}


@dataclass(frozen=True)
class _Figure:
    label: str
    say: Callable[[Wording, Solution], str]
    key: str = ""
    """The figure of ``geometry.compare`` that judges it, if one does."""


def _sided(read: Callable[[CornerState], str]) -> Callable[[Solution], str]:
    """One side's figure, or both where they read differently."""

    def both(solution: Solution) -> str:
        left, right = (read(solution.sides[side]) for side in SIDES)
        return left if left == right else f"left {left}\nright {right}"

    return both


def _roll_center(words: Wording, solution: Solution) -> str:
    center = solution.ride_roll_center
    return "none" if center is None else words.signed_tape(center[1])


def _camber_gain(words: Wording, solution: Solution) -> str:
    def read(state: CornerState) -> str:
        arm = float(state.ride_view.swing_arm[0])
        if math.isnan(arm) or arm == 0.0:
            return "none"
        return f"{math.degrees(-1.0 / arm) * words.travel_step + 0.0:+.2f}°"

    return _sided(read)(solution)


def _bump_steer(words: Wording, solution: Solution) -> str:
    def read(state: CornerState) -> str:
        change = bump_toe_change(state)
        return "out of reach" if change is None else words.fine(change)

    return _sided(read)(solution)


def _scrub(words: Wording, solution: Solution) -> str:
    def read(state: CornerState) -> str:
        value = float(state.ride.scrub_radius[0])
        return words.signed_tape(value) if math.isfinite(value) else "none"

    return _sided(read)(solution)


def _camber(words: Wording, solution: Solution) -> str:
    return _sided(lambda state: format_angle(float(state.ride.camber[0])))(solution)


def _swing_arm(words: Wording, solution: Solution) -> str:
    def read(state: CornerState) -> str:
        arm = float(state.ride_view.swing_arm[0])
        return words.signed_tape(arm) if math.isfinite(arm) else "none: arms parallel"

    return _sided(read)(solution)


def figures_for(words: Wording, span: float) -> tuple[_Figure, ...]:
    """The rows of the table, in the words of one unit."""
    per = "an inch" if words.units == "in" else "per 25 mm"
    return (
        _Figure("Roll center above the floor", _roll_center, "roll center"),
        _Figure("Swing arm", _swing_arm),
        _Figure(f"Camber change in bump, {per}", _camber_gain, "camber"),
        _Figure(f"Bump steer, {words.tape(span)} of bump", _bump_steer, "bump steer"),
        _Figure("Scrub radius", _scrub, "scrub"),
        _Figure("Static camber before alignment", _camber),
    )


def lowering_sheet(job: Job, options: SheetOptions | None = None) -> Pages:
    """The same drop taken three ways, against the car as it is."""
    options = options or SheetOptions()
    layout = job.planned
    span, drop = options.span_for(layout.units), options.drop_for(layout.units)
    words = Wording(layout.units)
    now = solve(layout, span=span)
    ways = three_ways(layout, drop, span)
    kind = KIND if drop > 0.0 else RAISE
    flow = Flow(Heading.of(kind, job, options), options.paper_for(layout.units), COMPUTED)
    verb = "down" if drop > 0.0 else "up"
    flow.skip(1.0)
    flow.paragraph(
        f"The body {words.tape(drop)} {verb}, taken three ways, toe set again at the new height.",
        2.8, bold=True,
    )
    flow.skip(1.0)
    _views(flow, now, ways)
    _table(flow, words, now, ways, span)
    _after(flow, job, words, ways, span)
    notes = notes_of(job, options)
    if notes:
        flow.title("Notes", 8.0)
        for paragraph in notes.splitlines():
            flow.paragraph(paragraph)
    flow.box_of("Before work starts", FOR_SHOP)
    return flow.finish()


def _views(flow: Flow, now: Solution, ways: tuple[Way, ...]) -> None:
    """Four front views at one scale, two by two."""
    shown: list[tuple[str, Solution | None]] = [("As it is", now)]
    shown += [(way.label.capitalize(), way.solution) for way in ways]
    frame = frame_for([car for _, car in shown if car is not None], 30.0)
    gap = 6.0
    width = 0.5 * (flow.width - gap)
    scale = scale_for(frame, width, _VIEW_HEIGHT)
    tall = frame.height / scale
    for row in (shown[:2], shown[2:]):
        flow.keep(tall + 1.8 * BODY)
        base = flow.y - 1.25 * BODY
        for place, (words, car) in enumerate(row):
            x = flow.left + place * (width + gap)
            title = Text((x, base), words, BODY, bold=True, style=ink())
            center = "" if car is None else ", ".join(text for text, _ in roll_label(car))
            beside = (x + title.width + 2.0, base)
            flow.add(title, Text(beside, center, SMALL, style=ink(SOFT)))
        flow.skip(1.8 * BODY)
        for place, (_, car) in enumerate(row):
            x = flow.left + place * (width + gap)
            if car is None:
                where = (x, flow.y - 0.5 * tall)
                flow.add(Text(where, "The parts can't reach this.", BODY, style=ink(SOFT)))
                continue
            flow.put(front_art(car, frame, scale), x)
        flow.skip(tall + 1.5)
    flow.paragraph(f"All to scale 1 : {scale:g}, the car's left side on the right.",
                   SMALL, color=SOFT)


def _table(
    flow: Flow, words: Wording, now: Solution, ways: tuple[Way, ...], span: float
) -> None:
    flow.title("Figures", 40.0)
    columns = [Column("", 0.32), Column("As it is", 0.17)]
    columns += [Column(way.label.capitalize(), 0.17) for way in ways]
    verdicts = [
        {} if way.solution is None
        else {row.key: row.verdict for row in compare(now, way.solution)}
        for way in ways
    ]
    rows = []
    for figure in figures_for(words, span):
        row: list[str | Cell] = [Cell(figure.label, bold=True), figure.say(words, now)]
        for way, verdict in zip(ways, verdicts, strict=True):
            if way.solution is None:
                row.append("–")
                continue
            judged = verdict.get(figure.key, "")
            text = figure.say(words, way.solution)
            if judged in _MARKS:
                row.append(Cell(f"{text} ({_MARKS[judged]})", color=VERDICT_INK[judged]))
            else:
                row.append(text)
        rows.append(row)
    flow.table(columns, rows)
    for way in ways:
        if way.reason:
            flow.paragraph(f"{way.label.capitalize()}: {way.reason}")


def _after(
    flow: Flow, job: Job, words: Wording, ways: tuple[Way, ...], span: float
) -> None:
    """What an alignment puts right afterward, and what it can't."""
    flow.title("After an alignment", 20.0)
    flow.paragraph(
        "An alignment sets static camber (shims at the upper inner pivots, or the strut's top "
        "mount) and static toe (tie rods). It does not change where the arms are bolted. What it "
        "leaves:"
    )
    for way in ways:
        if way.layout is None:
            continue
        done = alignment(way.layout, job.planned, span)
        if done.after is None:
            says = f"the camber can't be set again. {' '.join(done.leaves)}"
        elif done.leaves:
            says = " ".join(done.leaves)
        else:
            says = "nothing is left wrong in these figures."
        flow.paragraph(f"{way.label.capitalize()}: {says}", mark="•")
