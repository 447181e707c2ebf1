"""The plane a drawing lies in: places, rectangles and moves that keep shapes, all in mm."""

from __future__ import annotations

import cmath
import math
from collections.abc import Iterable
from dataclasses import dataclass
from typing import NamedTuple, TypeAlias

Place: TypeAlias = tuple[float, float]
"""A place in a drawing, mm: (x to the right, y up)."""


class DrawingError(ValueError):
    """Something that can't be drawn; the message is a plain sentence."""


class Bounds(NamedTuple):
    """An upright rectangle, mm."""

    left: float
    bottom: float
    right: float
    top: float

    @property
    def width(self) -> float:
        return self.right - self.left

    @property
    def height(self) -> float:
        return self.top - self.bottom

    @property
    def center(self) -> Place:
        return (self.left + self.right) / 2, (self.bottom + self.top) / 2

    @property
    def corners(self) -> tuple[Place, Place, Place, Place]:
        """The corners, counterclockwise from the bottom left one."""
        return (
            (self.left, self.bottom),
            (self.right, self.bottom),
            (self.right, self.top),
            (self.left, self.top),
        )

    def padded(self, by: float) -> Bounds:
        """The rectangle grown by ``by`` mm on every side (shrunk if negative)."""
        return Bounds(self.left - by, self.bottom - by, self.right + by, self.top + by)

    def joined(self, other: Bounds) -> Bounds:
        """The smallest rectangle that holds both."""
        return Bounds(
            min(self.left, other.left),
            min(self.bottom, other.bottom),
            max(self.right, other.right),
            max(self.top, other.top),
        )

    @classmethod
    def around(cls, places: Iterable[Place]) -> Bounds:
        """The smallest rectangle around one or more places."""
        xs, ys = zip(*places, strict=True)
        return cls(min(xs), min(ys), max(xs), max(ys))


@dataclass(frozen=True)
class Move:
    """A move of the plane that keeps shapes: mirror first, then turn and scale, then shift.

    ``factor`` is the complex number that scales and turns; ``shift`` is x + iy, mm.
    """

    factor: complex = 1 + 0j
    shift: complex = 0j
    mirror: bool = False

    def __call__(self, place: Place) -> Place:
        z = complex(*place)
        if self.mirror:
            z = -z.conjugate()
        z = self.factor * z + self.shift
        return z.real, z.imag

    @property
    def scale(self) -> float:
        return abs(self.factor)

    def angle(self, angle: float) -> float:
        """The direction that the direction ``angle`` becomes, radians."""
        return (math.pi - angle if self.mirror else angle) + cmath.phase(self.factor)
