"""Full-size patterns as pages: tiled over common paper, or on one big sheet."""

from __future__ import annotations

from geometry.layout import Job, SideName
from geometry.pages import Pages
from geometry.sheets.cautions import FOR_FLOOR
from geometry.sheets.options import Heading, SheetOptions
from geometry.sheets.patterns import PATTERNS, PatternKind, pattern
from geometry.sheets.tiles import one_sheet, tiled
from geometry.solution import Solution, solve

KIND = "Full-size pattern"


def pattern_sheet(
    job: Job,
    options: SheetOptions | None = None,
    kind: PatternKind = "front view",
    side: SideName = "left",
    *,
    tile: bool = True,
) -> Pages:
    """A pattern at true size. DrawingError, in a sentence, where there is none to draw."""
    options = options or SheetOptions()
    solution = solve(job.planned, span=options.span_for(job.planned.units))
    return pattern_pages(job, solution, options, kind, side, tile=tile)


def pattern_pages(
    job: Job, solution: Solution, options: SheetOptions, kind: PatternKind, side: SideName,
    *, tile: bool,
) -> Pages:
    """The pages of a pattern of a car that is already solved."""
    units = job.planned.units
    heading = Heading.of(f"{KIND}: {PATTERNS[kind].lower()}", job, options)
    drawing = pattern(solution, kind, side)
    if not tile:
        return one_sheet(drawing, heading, units, FOR_FLOOR)
    return tiled(drawing, heading, options.paper_for(units), units, FOR_FLOOR)
