"""The set-out list on paper: a picture with letters, the nails, and the strings' checks."""

from __future__ import annotations

from geometry.bounds import Bounds
from geometry.drawing import Circle, Drawing, Item, Style, Text
from geometry.finding_checks.wording import Wording
from geometry.floor_words import capital
from geometry.layout import SIDES, Job
from geometry.pages import Pages
from geometry.sheets.car_art import Look, frame_for, front_art, holds, scale_for
from geometry.sheets.cautions import COMPUTED, FOR_FLOOR
from geometry.sheets.flow import Cell, Column, Flow
from geometry.sheets.look import INK, SMALL, SOFT, ink
from geometry.sheets.nails import Nail, nails_of, readings
from geometry.sheets.options import Heading, SheetOptions, notes_of
from geometry.sheets.set_out import Check, checks, sides_of
from geometry.solution import Solution, solve
from geometry.standing import sign_of

KIND = "Set-out list"
_PICTURE = 72.0
_WIDER = 1.7
"""How much wider than the car a picture may become to show an instant center."""


def set_out_sheet(job: Job, options: SheetOptions | None = None) -> Pages:
    """What to nail and stretch on a floor or board, and what must then meet where."""
    options = options or SheetOptions()
    layout = job.planned
    solution = solve(layout, span=options.span_for(layout.units))
    words = Wording(layout.units)
    flow = Flow(Heading.of(KIND, job, options), options.paper_for(layout.units), COMPUTED)
    nails = nails_of(layout)
    frame = _frame(solution)
    flow.skip(1.0)
    flow.paragraph(_begin(words, frame))
    flow.skip(1.0)
    scale = scale_for(frame, flow.width, _PICTURE)
    flow.picture(_picture(solution, nails, frame, scale))
    flow.paragraph(
        f"Scale 1 : {scale:g}, seen from the front, the car's left side on the right. Strings: "
        "arms long dashes, contact dash and dot, tie rods short dashes.", SMALL, color=SOFT,
    )
    _nails(flow, job, nails)
    _checks(flow, solution, checks(solution))
    if layout.assumed:
        flow.title("Assumed, not measured", 8.0)
        flow.bullets(layout.assumed)
    notes = notes_of(job, options)
    if notes:
        flow.title("Notes", 8.0)
        for paragraph in notes.splitlines():
            flow.paragraph(paragraph)
    flow.box_of("Before work starts", FOR_FLOOR)
    return flow.finish()


def _begin(words: Wording, frame: Bounds) -> str:
    """How to begin: two lines square to one another."""
    three, four, five = ("3 ft", "4 ft", "5 ft") if words.units == "in" else (
        "600 mm", "800 mm", "1000 mm")
    wide, high = words.tape(frame.width), words.tape(frame.top - min(frame.bottom, 0.0))
    return (
        f"Snap a floor line and a centerline square to it: {three} along one and {four} along "
        f"the other must be {five} apart. Measure over from the centerline and up from the "
        f"floor line, each nail from the lines and never from another nail. What is drawn "
        f"here takes about {wide} by {high}."
    )


def _frame(solution: Solution) -> Bounds:
    """The whole car, and its instant centers where that leaves the car large enough to read."""
    car = frame = frame_for([solution], 50.0)
    for side in SIDES:
        over, up, weight = (float(v) for v in solution.sides[side].ride_view.instant_center[:, 0])
        if weight == 1.0 and abs(over) < _WIDER * car.right and abs(up) < _WIDER * car.right:
            out = max(frame.right, abs(over) + 60.0)
            frame = Bounds(-out, min(frame.bottom, up - 60.0), out, max(frame.top, up + 120.0))
    return frame


def _picture(
    solution: Solution, nails: tuple[Nail, ...], frame: Bounds, scale: float
) -> Drawing:
    """The front view with every nail's letter beside it."""
    art = front_art(solution, frame, scale, look=Look(springs=False, grooves=False))
    items: list[Item] = list(art.items)
    taken: list[Bounds] = [item.bounds for item in items if isinstance(item, Text)]
    paper = art.shown(-2.0)
    for nail in nails:
        for side in SIDES if nail.side is None else (nail.side,):
            x, y = sign_of(side) * nail.place.over / scale, nail.place.up / scale
            at = _free(x, y, sign_of(side), taken, paper)
            if at is None:
                continue
            taken.append(Bounds(*at, *at).padded(1.6))
            items.append(Circle(at, 1.5, Style(INK, 0.12, fill="#FFFFFF", layer="labels")))
            items.append(Text(at, nail.letter, 1.5, "center", "middle", bold=True,
                              style=ink(layer="labels")))
    return Drawing(tuple(items), art.frame)


def _free(
    x: float, y: float, out: float, taken: list[Bounds], paper: Bounds
) -> tuple[float, float] | None:
    """A place for a letter near a nail, clear of all other words; None if there is none."""
    spots = [(0.0, 2.8), (0.0, -2.8), (-2.8, 0.0), (2.8, 0.0), (2.4, 2.4), (-2.4, 2.4),
             (2.4, -2.4), (-2.4, -2.4)]
    for reach in (1.0, 1.8, 2.6, 3.6, 5.0):
        for dx, dy in spots:
            at = (x + out * reach * dx, y + reach * dy)
            box = Bounds(*at, *at).padded(1.6)
            if holds(paper, at) and not any(_overlap(box, other) for other in taken):
                return at
    return None


def _overlap(a: Bounds, b: Bounds) -> bool:
    return a.left < b.right and b.left < a.right and a.bottom < b.top and b.bottom < a.top


def _nails(flow: Flow, job: Job, nails: tuple[Nail, ...]) -> None:
    flow.title("Nails", 30.0)
    unit = job.planned.units
    rows = [
        (Cell(nail.letter, bold=True), nail.title, *readings(job.planned, nail.place))
        for nail in nails
    ]
    flow.table(
        (Column("", 0.06), Column("Nail", 0.46), Column(f"Over, {unit}", 0.16, "right"),
         Column(f"Up, {unit}", 0.16, "right"), Column(f"Fore, {unit}", 0.16, "right")),
        rows,
    )
    flow.skip(0.8)
    flow.paragraph(
        "Fore is ahead of the axle line, behind it with a minus; on a front-view board it only "
        "says how far a nail stands off the board's plane.", SMALL, color=SOFT,
    )


def _checks(flow: Flow, solution: Solution, found: tuple[Check, ...]) -> None:
    flow.title("Strings to stretch, and what must meet where", 30.0)
    several = len(sides_of(solution.layout)) > 1
    rows = []
    for number, check in enumerate(found, 1):
        title = check.title if check.side is None or not several else (
            f"{check.title}, {check.side}")
        rows.append((str(number), Cell(title, bold=True), capital(check.sentence)))
    flow.table((Column("", 0.05), Column("", 0.23), Column("", 0.72)), rows)
    flow.skip(0.8)
    flow.paragraph(
        "A string that misses its place says that a nail was measured or set wrong, or that the "
        "board is not square. Places are rounded to what a tape reads; where strings meet at a "
        "flat angle, expect several times that.", SMALL, color=SOFT,
    )
