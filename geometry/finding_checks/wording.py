"""Numbers as a builder reads them: tape fractions, thousandths for toe, degrees."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

from geometry.layout import MM_PER_INCH, UnitName
from geometry.lengths import format_length
from geometry.tolerances import Kind

FAR = 30_000.0
"""Beyond this, mm, a length is only said to be more than it."""

TAPE = {"in": MM_PER_INCH / 16, "mm": 1.0}
"""What a tape resolves, mm."""


FINEST = {"in": MM_PER_INCH / 64, "mm": 0.1}
"""The finest step in which a small size is said, mm."""

FINE_BELOW = MM_PER_INCH / 4
"""A size below this, mm, is said in finer steps than the tape's."""


@dataclass(frozen=True)
class Wording:
    """How one person reads numbers; ``units`` is the layout's."""

    units: UnitName

    @property
    def travel_step(self) -> float:
        """The travel by which rates are given, mm: one inch, or 25 mm."""
        return MM_PER_INCH if self.units == "in" else 25.0

    @property
    def per_travel(self) -> str:
        return "per inch of travel" if self.units == "in" else "per 25 mm of travel"

    def tape(self, mm: float) -> str:
        """A size to the tape's sixteenth (or millimeter), finer where it is small; no sign."""
        return _tape(abs(mm), self.units)

    def signed_tape(self, mm: float) -> str:
        """A place with its sign: below the floor or past the centerline is negative."""
        if abs(mm) < 0.5 * FINEST[self.units]:
            return f"0 {self.units}"
        if mm < -FAR:
            return self.tape(mm).replace("more than ", "less than -")
        return f"-{self.tape(mm)}" if mm < 0.0 else self.tape(mm)

    def counts(self, mm: float) -> bool:
        """True if a move is big enough to say: half of what the tape resolves."""
        return abs(mm) >= 0.5 * TAPE[self.units]

    def fine(self, mm: float) -> str:
        """A toe length in thousandths of an inch or hundredths of a millimeter; no sign."""
        size = abs(mm)
        if size > FAR:
            return self.tape(mm)
        return f"{size / MM_PER_INCH:.3f} in" if self.units == "in" else f"{size:.2f} mm"

    def toe(self, mm: float) -> str:
        """A toe limit or figure: a tape fraction where it is just that, else thousandths."""
        steps = mm / MM_PER_INCH * 64.0
        if self.units == "in" and steps >= 1.0 and abs(steps - round(steps)) < 1e-6:
            return self.tape(mm)
        return self.fine(mm)

    def angle(self, rad: float) -> str:
        """Degrees to a tenth, to a hundredth where small; signed."""
        degrees = math.degrees(rad)
        if abs(degrees) >= 1.0:
            return f"{degrees:.1f}°"
        return f"{round(degrees, 2) + 0.0:.2f}°"

    def rate(self, rad_per_mm: float, of: str = "") -> str:
        """Degrees per inch (or 25 mm) of travel; signed. ``of`` goes after the degrees."""
        degrees = round(math.degrees(rad_per_mm) * self.travel_step, 2) + 0.0
        return f"{degrees:.2f}°{of} {self.per_travel}"

    def slope(self, per_mm: float, toe: str = "") -> str:
        """Toe length per inch (or 25 mm) of travel; no sign. ``toe`` goes after the length."""
        return f"{self.fine(per_mm * self.travel_step)}{toe} {self.per_travel}"

    def of(self, value: float, kind: Kind) -> str:
        """A figure in its own kind's wording."""
        if kind == "length":
            return self.signed_tape(value)
        if kind == "toe":
            return self.toe(value)
        if kind == "angle":
            return self.angle(value)
        return self.rate(value) if kind == "rate" else self.slope(value)

    def span(self, mm: float) -> str:
        """The chosen travel both ways, as words."""
        return f"{self.tape(mm)} of bump and {self.tape(mm)} of droop"


# The same limits and spans are said in every frame of a drag.
@lru_cache(maxsize=256)
def _tape(size: float, units: UnitName) -> str:
    if size > FAR:
        return "more than 100 ft" if units == "in" else "more than 30 m"
    if 0.0 < size < 0.5 * FINEST[units]:
        return "less than 1/64 in" if units == "in" else "less than 0.1 mm"
    small = size < FINE_BELOW
    denominator = (64 if size < 0.25 * FINE_BELOW else 32) if small else 16
    return format_length(size, units, denominator, mark=True, decimals=1 if small else 0)
