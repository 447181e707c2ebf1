"""Every sheet by name: what it is called, what it is for, and how its pages are made."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from geometry.layout import Job
from geometry.pages import Pages
from geometry.sheets.build import build_sheet
from geometry.sheets.customer import customer_sheet
from geometry.sheets.options import SheetOptions
from geometry.sheets.pattern_sheet import pattern_sheet
from geometry.sheets.set_out_sheet import set_out_sheet
from geometry.sheets.ways import lowering_sheet

SheetKind = Literal["customer", "lowering", "build", "set-out", "pattern"]


@dataclass(frozen=True)
class Sheet:
    """One kind of sheet. ``make`` gives its pages for a job."""

    kind: SheetKind
    title: str
    purpose: str
    make: Callable[[Job, SheetOptions], Pages]


SHEETS: dict[SheetKind, Sheet] = {
    sheet.kind: sheet
    for sheet in (
        Sheet("customer", "Customer sheet", "as found and as planned in a driver's words",
              customer_sheet),
        Sheet("lowering", "Three ways to lower", "the same drop by spring, knuckle and tire",
              lowering_sheet),
        Sheet("build", "Build sheet", "places, lengths, angles and what they may be off",
              build_sheet),
        Sheet("set-out", "Set-out list", "nails and strings for a shop floor or a board",
              set_out_sheet),
        Sheet("pattern", "Full-size pattern", "true size over many sheets, or on one",
              pattern_sheet),
    )
}
