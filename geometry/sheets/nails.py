"""Every nail of a car with a letter, as drawings and lists name it, and its tape readings."""

from __future__ import annotations

from dataclasses import dataclass

from geometry.layout import RELAY_POINTS, SIDE_POINTS, SIDES, Layout, Point, RelayRod, SideName
from geometry.lengths import format_length
from geometry.standing import BODY_POINTS

LETTERS = "ABCDEFGHJKLMNPQRSTUVWXYZ"
"""Without I and O, which read as figures."""


@dataclass(frozen=True)
class Nail:
    """One pivot: its letter, its measured name, where it is, and what it is fixed in.

    ``side`` is None for a nail that both sides have in the same place.
    """

    letter: str
    name: str
    side: SideName | None
    place: Point
    in_body: bool

    @property
    def title(self) -> str:
        words = self.name[:1].upper() + self.name[1:]
        return words if self.side is None else f"{words}, {self.side}"


def nails_of(layout: Layout) -> tuple[Nail, ...]:
    """Every nail, a point's letter the same on both sides; sides apart where they differ."""
    present = [
        name for name in SIDE_POINTS if any(name in layout.side(side).points for side in SIDES)
    ]
    relay = list(RELAY_POINTS) if isinstance(layout.steering, RelayRod) else []
    letters = dict(zip([*present, *relay], LETTERS, strict=False))
    alike = layout.linked or layout.left == layout.right
    out = []
    for side in SIDES[:1] if alike else SIDES:
        points = layout.side(side).points
        out += [
            Nail(letters[name], name, None if alike else side, points[name], name in BODY_POINTS)
            for name in present if name in points
        ]
    if isinstance(layout.steering, RelayRod):
        out += [
            Nail(letters[name], name, layout.steering.side_of(name), layout.steering[name],
                 name in BODY_POINTS)
            for name in relay
        ]
    return tuple(out)


def readings(layout: Layout, place: Point) -> tuple[str, str, str]:
    """Over, up and fore as a tape shows them: sixteenths, or tenths of a millimeter."""
    over, up, fore = (format_length(value, layout.units) for value in place)
    return over, up, fore
