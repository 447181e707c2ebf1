"""Tire size text to dimensions, and what a wheel change does to the track.

Overall diameter = rim + 2 x width x aspect: the designation's own meaning (ETRTO Standards
Manual; the nominal figures, makers differ by a few mm).
"""

from __future__ import annotations

import re
from dataclasses import dataclass, replace

from geometry.layout import MM_PER_INCH, WHEEL_CENTER, Layout, Point, Side, SideName, Tire
from geometry.stance import body_things_down

LOADED_SHARE = 0.97
"""Loaded radius over free radius for a road tire at its pressure (common practice, no source)."""

_METRIC = re.compile(
    r"(?:P|LT)?\s*(\d{2,3})\s*/\s*(\d{2,3})\s*(?:[SHVZ]?R|-|B|D)\s*(\d{2}(?:[.,]\d)?)", re.I
)
_FULL = re.compile(r"(\d{3})\s*[SHV]?R\s*(\d{2})", re.I)
_INCH = re.compile(
    r"(\d{2}(?:\.\d+)?)\s*[xX×]\s*(\d{1,2}(?:\.\d+)?)\s*(?:R|-|–)?\s*(\d{2}(?:\.\d)?)", re.I
)
_OLD = re.compile(r"(\d{1,2}\.\d{2})\s*-\s*(\d{2}(?:\.\d)?)")


FULL_PROFILE = 0.82
"""Aspect of a metric size that names none, such as 165R13 (common practice, no source)."""


class TireSizeError(ValueError):
    """A text that is no tire size; the message is a plain reason."""


@dataclass(frozen=True)
class TireSize:
    """A tire's nominal section width, overall and rim diameter, mm."""

    width: float
    diameter: float
    rim_diameter: float

    @property
    def loaded_radius(self) -> float:
        """Half the diameter, less what the load presses flat (an estimate; measure it)."""
        return 0.5 * self.diameter * LOADED_SHARE


def parse_tire_size(text: str) -> TireSize:
    """A tire size such as ``205/55R16``, ``165R13``, ``31x10.5R15`` or ``6.00-16`` (inches).

    Raises TireSizeError with a plain reason.
    """
    shown = text.strip()[:40]
    metric = _METRIC.match(shown)
    if metric is not None:
        width, aspect = float(metric[1]), float(metric[2]) / 100.0
        rim = float(metric[3].replace(",", ".")) * MM_PER_INCH
        return _checked(TireSize(width, rim + 2.0 * width * aspect, rim), shown)
    full = _FULL.match(shown)
    if full is not None:
        width, rim = float(full[1]), float(full[2]) * MM_PER_INCH
        return _checked(TireSize(width, rim + 2.0 * width * FULL_PROFILE, rim), shown)
    inch = _INCH.match(shown)
    if inch is not None:
        diameter, width, rim = (float(part) * MM_PER_INCH for part in inch.groups())
        return _checked(TireSize(width, diameter, rim), shown)
    old = _OLD.match(shown)
    if old is not None:
        # Before the aspect was written, a section was about as high as it is wide.
        width, rim = (float(part) * MM_PER_INCH for part in old.groups())
        return _checked(TireSize(width, rim + 2.0 * width, rim), shown)
    raise TireSizeError(
        f"Can't read “{shown}” as a tire size. It should look like 205/55R16, 31x10.5R15 or "
        "6.00-16."
    )


def _checked(size: TireSize, shown: str) -> TireSize:
    if not (size.rim_diameter < size.diameter < 1500.0 and 80.0 <= size.width <= 500.0):
        raise TireSizeError(f"“{shown}” makes no tire that a car could wear.")
    return size


def with_tire(tire: Tire, size: TireSize, text: str) -> Tire:
    """The wheel with a tire of another size."""
    return replace(
        tire,
        radius=size.loaded_radius,
        width=size.width,
        rim_diameter=size.rim_diameter,
        size=text.strip(),
    )


def backspace_of(tire: Tire) -> float:
    """Backspace, mm: mounting face to the rim's inner edge, flanges of 1/2 in (12.7) counted."""
    return 0.5 * tire.rim_width + 0.5 * MM_PER_INCH + tire.offset


def offset_for(backspace: float, rim_width: float) -> float:
    """Wheel offset, mm, positive with the face outboard of the middle, for a backspace."""
    return backspace - 0.5 * rim_width - 0.5 * MM_PER_INCH


def wheel_changed(layout: Layout, side: SideName, tire: Tire) -> Layout:
    """The car with another wheel or tire on the same hub.

    Less offset carries the wheel center outboard along the axle. A loaded radius that
    changes lifts or lowers the whole car on that side with the wheel.
    """
    old = layout.side(side)
    out = old.tire.offset - tire.offset
    rise = tire.radius - old.tire.radius
    points = {name: p._replace(up=p.up + rise) for name, p in old.points.items()}
    center: Point = points[WHEEL_CENTER]
    points[WHEEL_CENTER] = center._replace(over=center.over + out)
    changed: Side = replace(old, points=points, tire=tire)
    # One side's rise lifts the middle of the car by half of it.
    lift = rise if layout.linked else 0.5 * rise
    return body_things_down(layout.with_side(side, changed), -lift)
