"""The customer sheet: the car as found and as planned, in words that a driver follows."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

from geometry.compare import compare, described, differences, overall
from geometry.drawing import Text
from geometry.layout import SIDES, Job, SideName
from geometry.pages import Pages
from geometry.sheets.bump_strip import (
    bump_strip,
    factor_for,
    strip_frame,
    strip_solutions,
    turned_by,
)
from geometry.sheets.car_art import frame_for, front_art, scale_for
from geometry.sheets.cautions import COMPUTED, FOR_CUSTOMER
from geometry.sheets.flow import Cell, Column, Flow
from geometry.sheets.look import BODY, SMALL, SOFT, VERDICT_INK, VERDICT_WORDS
from geometry.sheets.options import Heading, SheetOptions, notes_of
from geometry.sheets.toe_plot import toe_plot
from geometry.sheets.turn_picture import turn_picture
from geometry.solution import Solution, solve
from geometry.standing import XY
from geometry.tolerances import LAYOUT, tolerance_source

KIND = "Customer sheet"
_VIEW_HEIGHT = 62.0
_LONE_HEIGHT = 56.0
_PLOT_HEIGHT = 48.0
_MOST_CHANGES = 8
FOUND, PLANNED = "As found", "As planned"


@dataclass(frozen=True)
class Cars:
    """What a sheet compares: the car as planned and, where it differs, as found."""

    planned: Solution
    found: Solution | None = None
    lone: str = ""

    @classmethod
    def of(cls, job: Job, options: SheetOptions) -> Cars:
        """Both cars solved at ride height over the sheet's travel."""
        span = options.span_for(job.planned.units)
        planned = solve(job.planned, span=span)
        if job.found is None or not options.show_found:
            return cls(planned, lone="Your car")
        found = replace(job.found, units=job.planned.units)
        if replace(found, title=job.planned.title) == job.planned:
            return cls(planned, lone=FOUND)
        return cls(planned, solve(found, span=span))

    @property
    def named(self) -> tuple[tuple[str, Solution], ...]:
        """Each car with its words, the planned one last."""
        if self.found is None:
            return ((self.lone, self.planned),)
        return ((FOUND, self.found), (PLANNED, self.planned))

    @property
    def sides(self) -> tuple[SideName, ...]:
        """The sides worth showing: one while both mirror each other."""
        return ("left",) if all(car.layout.linked for _, car in self.named) else SIDES


def customer_sheet(job: Job, options: SheetOptions | None = None) -> Pages:
    """One or two pages for the owner of the car: pictures, four figures, a curve, the work."""
    options = options or SheetOptions()
    units = job.planned.units
    cars = Cars.of(job, options)
    flow = Flow(Heading.of(KIND, job, options), options.paper_for(units), COMPUTED)
    _summary(flow, cars)
    _views(flow, cars)
    _figures(flow, cars)
    _work(flow, job, cars)
    _toe(flow, cars)
    _strip(flow, cars)
    turn_picture(flow, [(words, car.layout) for words, car in cars.named], options.lateral_g)
    notes = notes_of(job, options)
    if notes:
        flow.title("Notes", 8.0)
        for paragraph in notes.splitlines():
            flow.paragraph(paragraph)
    flow.box_of("Please read", FOR_CUSTOMER)
    return flow.finish()


def _summary(flow: Flow, cars: Cars) -> None:
    flow.skip(1.0)
    if cars.found is not None:
        flow.paragraph(overall(compare(cars.found, cars.planned)), 2.8, bold=True)
    elif cars.lone == FOUND:
        flow.paragraph("The car as found. Nothing is changed in the plan yet.", 2.8, bold=True)
    else:
        flow.paragraph("The front end as measured.", 2.8, bold=True)
    flow.skip(1.5)


def roll_label(solution: Solution) -> list[tuple[str, XY]]:
    """The words at a car's roll center, if it has one."""
    place = solution.roll_center_place
    if place is None or not solution.assembles:
        return []
    told = next(told for told in described(solution) if told.key == "roll center")
    return [(f"roll center, {told.value}", place)]


def _views(flow: Flow, cars: Cars) -> None:
    """The front views one below the other, at one scale."""
    frame = frame_for(car for _, car in cars.named)
    scale = scale_for(frame, flow.width, _VIEW_HEIGHT if cars.found else _LONE_HEIGHT)
    for words, car in cars.named:
        flow.keep(frame.height / scale + 6.0)
        caption = f"{words}, seen from the front"
        room = Text((0, 0), caption, BODY, bold=True).width + 2.0
        side = f"scale 1 : {scale:g}, the car's left side on the right"
        flow.skip(1.0)
        flow.add(_small(flow, flow.left + room, side))
        flow.line(caption, BODY, bold=True)
        flow.picture(front_art(car, frame, scale, labels=roll_label(car)))


def _small(flow: Flow, x: float, words: str) -> Text:
    from geometry.sheets.look import ink

    return Text((x, flow.y - 1.25 * BODY), words, SMALL, style=ink(SOFT))


def _figures(flow: Flow, cars: Cars) -> None:
    """The figures that matter with what each means and whether it got better."""
    if cars.found is None:
        flow.title("Four figures that matter")
        flow.table(
            (Column("", 0.72), Column("", 0.28)),
            [(told.sentence.replace(f": {told.value}. It is", ": it is", 1),
              Cell(told.value, bold=True)) for told in described(cars.planned)],
        )
        return
    flow.title("Four figures that matter", 30.0)
    rows = []
    for row in compare(cars.found, cars.planned):
        says = row.sentence.removeprefix(f"{row.heading}: ")
        rows.append((
            Cell(row.heading, bold=True),
            says[:1].upper() + says[1:],
            Cell(VERDICT_WORDS[row.verdict], bold=True, color=VERDICT_INK[row.verdict]),
        ))
    flow.table((Column("", 0.24), Column("", 0.6), Column("", 0.16)), rows)


def _toe(flow: Flow, cars: Cars) -> None:
    """The curve that shows the wheel steering itself."""
    sides = cars.sides
    flow.title("How a front wheel turns by itself as it goes up and down", _PLOT_HEIGHT)
    # The legend needs its width, so two wheels stand one below the other.
    for side in sides:
        if len(sides) == 2:
            flow.keep(_PLOT_HEIGHT + 5.0)
            flow.line(f"{side.capitalize()} wheel", BODY, bold=True)
        flow.picture(toe_plot(cars.named, side, flow.width, _PLOT_HEIGHT, sides))
    own = tolerance_source(cars.planned.layout, "toe range") == LAYOUT
    band = "wanted for this car" if own else "commonly called good (shop practice, no standard)"
    flow.paragraph(
        "A level line means the wheel keeps pointing the same way. The tinted band is what is "
        f"{band}.",
        SMALL, color=SOFT,
    )


def _strip(flow: Flow, cars: Cars) -> None:
    """The left wheel over a bump, in small pictures."""
    side = _livelier(cars)
    poses = [(words, strip_solutions(car, side)) for words, car in cars.named]
    turns = [turn for _, strip in poses for turn in turned_by(strip, side)]
    factor = factor_for(turns)
    frame = strip_frame([pose for _, strip in poses for pose in strip], side)
    strips = [(words, bump_strip(strip, side, factor, flow.width, frame))
              for words, strip in poses]
    flow.title(f"The {side} wheel over a bump", strips[0][1].shown().height + 6.0)
    for words, strip in strips:
        flow.keep(strip.shown().height + 5.0)
        if len(strips) > 1:
            flow.line(words, BODY, bold=True)
        flow.picture(strip)
        flow.skip(1.5)
    larger = f", drawn {factor} times larger than it is" if factor > 1 else ", drawn true to size"
    flow.paragraph(
        "Beside each front view the same wheel is seen from above, the car's front downward: how "
        f"it has turned by itself since ride height{larger}. The angles in words are true: “in” "
        "turns the front of the wheel toward the car.",
        SMALL, color=SOFT,
    )


def _livelier(cars: Cars) -> SideName:
    """The side that turns more by itself in any of the cars; the left one if they are alike."""

    def most(side: SideName) -> float:
        sizes = [0.0]
        for _, car in cars.named:
            state = car.sides[side]
            gaps = abs(state.sweep.toe - state.ride.toe[0])
            sizes += [float(gap) for gap in gaps if math.isfinite(gap)]
        return max(sizes)

    return "right" if most("right") > most("left") + 1e-6 else "left"


def _work(flow: Flow, job: Job, cars: Cars) -> None:
    """What was done or is proposed."""
    if cars.found is None or job.found is None:
        return
    flow.title("What is changed between the two")
    if job.stance:
        flow.paragraph(job.stance)
    found = replace(job.found, units=job.planned.units)
    changes = differences(found, job.planned)
    flow.two_columns(changes[:_MOST_CHANGES])
    more = len(changes) - _MOST_CHANGES
    if more > 0:
        flow.paragraph(f"And {more} more; the build sheet lists every pivot.", color=SOFT)
    if not changes and not job.stance:
        flow.paragraph("Only what the figures above already say.")
