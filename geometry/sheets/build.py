"""The build sheet: every bracket's place, every length and angle, drawn with its dimensions."""

from __future__ import annotations

from geometry import layout as names
from geometry.drawing import Text
from geometry.finding_checks.wording import Wording
from geometry.layout import SIDES, Job, SideName
from geometry.pages import Pages
from geometry.sheets import build_figures as figures
from geometry.sheets.build_figures import Figure
from geometry.sheets.cautions import COMPUTED, FOR_SHOP
from geometry.sheets.dimensioned import above_dimensions, front_dimensions, side_scale
from geometry.sheets.flow import Cell, Column, Flow
from geometry.sheets.look import BODY, SMALL, SOFT, ink
from geometry.sheets.nails import Nail, nails_of, readings
from geometry.sheets.options import Heading, SheetOptions, notes_of
from geometry.solution import Solution, solve

KIND = "Build sheet"
_DRAWING = 118.0
_JUDGED = (
    names.LOWER_INNER, names.LOWER_INNER_FRONT, names.LOWER_INNER_REAR, names.UPPER_INNER,
    names.UPPER_INNER_FRONT, names.UPPER_INNER_REAR, names.STRUT_TOP, names.TIE_INNER,
    names.TIE_OUTER,
)
"""Nails whose error is judged by the toe it costs."""


def build_sheet(job: Job, options: SheetOptions | None = None) -> Pages:
    """Drawings and tables to build the planned car by."""
    options = options or SheetOptions()
    layout = job.planned
    solution = solve(layout, span=options.span_for(layout.units))
    flow = Flow(Heading.of(KIND, job, options), options.paper_for(layout.units), COMPUTED)
    nails = nails_of(layout)
    sides: tuple[SideName, ...] = ("left",) if _alike(nails) else SIDES
    flow.skip(1.0)
    flow.paragraph(
        "Every place is measured to the center of its pivot at ride height: over from the "
        "centerline, up from the floor, fore ahead of the axle line (behind it with a minus). "
        + ("Both sides are alike." if len(sides) == 1 else "The sides differ: see both."),
    )
    for side in sides:
        _drawings(flow, solution, side, [n for n in nails if n.side in (None, side)])
    _places(flow, solution, nails, sides)
    for side in sides:
        mark = "" if len(sides) == 1 else f", {side} side"
        _figures(flow, f"Lengths, center to center{mark}", figures.part_lengths(layout, side))
        _figures(flow, f"Angles at ride height{mark}", figures.ride_angles(solution, side))
        _figures(flow, f"Adjustment{mark}", figures.adjustments(solution, side))
        _figures(flow, f"Wheel{mark}", figures.wheel_figures(layout, side))
    _figures(flow, "Steering", figures.steering_figures(solution))
    if layout.assumed:
        flow.title("Assumed, not measured", 8.0)
        flow.bullets(layout.assumed)
    notes = notes_of(job, options)
    if notes:
        flow.title("Notes", 8.0)
        for paragraph in notes.splitlines():
            flow.paragraph(paragraph)
    flow.box_of("Before work starts", FOR_SHOP)
    return flow.finish()


def _alike(nails: tuple[Nail, ...]) -> bool:
    return all(nail.side is None for nail in nails if nail.name in names.SIDE_POINTS)


def _drawings(flow: Flow, solution: Solution, side: SideName, nails: list[Nail]) -> None:
    """The side from the front, and from above in line with it."""
    scale = side_scale(solution, side, flow.width, _DRAWING)
    front = front_dimensions(solution, side, nails, scale)
    above = above_dimensions(solution, side, nails, scale)
    for words, drawing in (("from the front", front), ("from above", above)):
        flow.keep(drawing.shown().height + 6.0)
        flow.skip(1.0)
        title = Text((flow.left, flow.y - 1.25 * BODY),
                     f"{side.capitalize()} side {words}", BODY, bold=True, style=ink())
        beside = (flow.left + title.width + 2.0, flow.y - 1.25 * BODY)
        flow.add(title, Text(beside, f"scale 1 : {scale:g}, {solution.layout.units}", SMALL,
                             style=ink(SOFT)))
        flow.skip(1.8 * BODY)
        flow.picture(drawing)


def _places(
    flow: Flow, solution: Solution, nails: tuple[Nail, ...], sides: tuple[SideName, ...]
) -> None:
    """Where every nail goes and what an error there costs."""
    layout = solution.layout
    words = Wording(layout.units)
    step = words.tape(25.4 / 16) if layout.units == "in" else "1 mm"
    flow.title("Where every pivot goes", 30.0)
    rows = []
    for nail in nails:
        cost = ""
        if nail.name in _JUDGED:
            value = figures.toe_cost(solution, nail.side or "left", nail.name)
            cost = "can't be judged" if value is None else f"{words.fine(value)} of toe"
        rows.append((Cell(nail.letter, bold=True), nail.title, *readings(layout, nail.place),
                     "body" if nail.in_body else "moves", cost))
    unit = layout.units
    flow.table(
        (Column("", 0.05), Column("Pivot", 0.33), Column(f"Over, {unit}", 0.12, "right"),
         Column(f"Up, {unit}", 0.12, "right"), Column(f"Fore, {unit}", 0.12, "right"),
         Column("On", 0.1), Column(f"{step} off costs", 0.2)),
        rows,
    )
    flow.skip(0.8)
    flow.paragraph(
        f"The last column: the most toe that an error of {step} up, down, in or out adds over "
        f"{words.span(solution.span)}, per wheel, with toe set again.", SMALL, color=SOFT,
    )
    for side in sides:
        mark = "" if len(sides) == 1 else f"{side.capitalize()}: "
        flow.paragraph(f"{mark}{figures.rack_room(solution, side)}", mark="•")


def _figures(flow: Flow, title: str, rows: list[Figure]) -> None:
    if not rows:
        return
    flow.title(title, 14.0)
    flow.table(
        (Column("", 0.42), Column("", 0.32), Column("", 0.26)),
        [(row.label, Cell(row.value, bold=True), Cell(row.remark, color=SOFT)) for row in rows],
    )
