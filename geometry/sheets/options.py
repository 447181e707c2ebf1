"""What a person chooses for a sheet, and the words that head it."""

from __future__ import annotations

import datetime
from dataclasses import dataclass

from geometry.layout import Job, UnitName
from geometry.pages import A4, LETTER, PageSize

_MONTHS = (
    "January", "February", "March", "April", "May", "June", "July", "August", "September",
    "October", "November", "December",
)


@dataclass(frozen=True)
class SheetOptions:
    """Choices for one sheet; None takes what the job says.

    ``paper`` None is Letter for a car in inches and A4 for one in millimeters. ``span`` is
    half the travel over which curves and ranges go, ``drop`` how far a lowering sheet takes
    the body down, both mm. ``lateral_g`` is the turn that a car is shown in.
    """

    paper: PageSize | None = None
    shop: str | None = None
    customer: str | None = None
    notes: str | None = None
    date: datetime.date | None = None
    span: float | None = None
    drop: float | None = None
    lateral_g: float = 0.5
    show_found: bool = True

    def paper_for(self, units: UnitName) -> PageSize:
        """The sheet of paper, standing upright."""
        return (self.paper or (LETTER if units == "in" else A4)).portrait

    def span_for(self, units: UnitName) -> float:
        """Half the travel curves go over, mm: three inches, or 75 mm, unless chosen."""
        if self.span is not None and self.span > 0.0:
            return self.span
        return 76.2 if units == "in" else 75.0

    def drop_for(self, units: UnitName) -> float:
        """How far a lowering sheet takes the body down, mm: 2 1/2 in, or 60 mm, unless chosen."""
        if self.drop is not None and self.drop != 0.0:
            return self.drop
        return 63.5 if units == "in" else 60.0


@dataclass(frozen=True)
class Heading:
    """Who and what a sheet is for, as it stands at the top of its first page."""

    kind: str
    car: str
    shop: str = ""
    customer: str = ""
    date: str = ""

    @classmethod
    def of(cls, kind: str, job: Job, options: SheetOptions) -> Heading:
        """The heading of one kind of sheet for a job."""
        shop = job.shop if options.shop is None else options.shop
        customer = job.customer if options.customer is None else options.customer
        return cls(
            kind,
            " ".join(job.planned.title.split()) or "Untitled",
            " ".join(shop.split()),
            " ".join(customer.split()),
            long_date(options.date),
        )

    @property
    def title(self) -> str:
        """The name a file or print job goes by."""
        return f"{self.kind}, {self.car}"


def long_date(date: datetime.date | None) -> str:
    """A date in words, "December 1, 2026"; empty for none."""
    return "" if date is None else f"{_MONTHS[date.month - 1]} {date.day}, {date.year}"


def notes_of(job: Job, options: SheetOptions) -> str:
    """The notes to print."""
    return (job.notes if options.notes is None else options.notes).strip()
