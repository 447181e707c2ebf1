"""From which way a floor shows the car, and which two measures of a point stand on it.

Both floors run ``over`` along the same way, the car's left to the viewer's right, so that a
nail keeps its column from one floor to the other. The front floor is looked at from ahead.
On the floor from above the viewer stands ahead of the car and looks down: forward points
down the screen, to the viewer.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from geometry.layout import Point
from geometry.linkage import Array

FaceName = Literal["front", "above"]


@dataclass(frozen=True)
class Face:
    """One way of looking. Places on a floor are (x, y) mm, y up the screen.

    ``second`` is the measure that runs up or down the screen beside ``over``, ``row`` its row
    in a vector (3, ...) of a side's own axes (fore, over, up), ``way`` +1 where it grows up the
    screen and -1 where it grows down.
    """

    name: FaceName
    second: Literal["up", "fore"]
    row: int
    way: float

    def measure(self, point: Point) -> float:
        """A point's second measure, mm."""
        return point.up if self.second == "up" else point.fore

    def place(self, sign: float, point: Point) -> tuple[float, float]:
        """Where a point of the side with ``sign`` (+1 left, -1 right) stands."""
        return sign * point.over, self.way * self.measure(point)

    def seen(self, sign: float, vector: Array) -> tuple[float, float]:
        """The same for a vector (3,) in a side's own axes."""
        return sign * float(vector[1]), self.way * float(vector[self.row])

    def moved(self, point: Point, over: float, second: float) -> Point:
        """A point with its two measures on this floor changed; the third is kept."""
        if self.second == "up":
            return Point(over, second, point.fore)
        return Point(over, point.up, second)


FRONT = Face("front", "up", 2, 1.0)
ABOVE = Face("above", "fore", 0, -1.0)
