"""What stands on the floor: one scene whose items follow the document's solution."""

from __future__ import annotations

from typing import Any

import numpy as np
from PySide6.QtGui import QFont
from PySide6.QtWidgets import QGraphicsScene

from app.floor.marks import MarkItems, StringItems
from app.floor.nails import Key, NailItems
from app.floor.no_go import NoGoItems
from app.floor.parts import PartItems
from app.floor.stillness import Stillness
from app.floor.tags import TagItems
from app.palette import Palette
from geometry.faces import FRONT, Face
from geometry.front_parts import ROLES, Part, Role, car_parts, side_parts
from geometry.front_strings import (
    InstantCenter,
    String,
    inner_pivot_places,
    instant_center,
    strings,
    tire_floor,
)
from geometry.layout import KNUCKLE_POINTS, SIDES, SideName
from geometry.linkage import Array
from geometry.solution import Solution
from geometry.standing import XY, Standing, relay_standing, standing


class CarScene(QGraphicsScene):
    """A car seen from one way: items made once and moved with every solution."""

    face: Face = FRONT
    roles: tuple[Role, ...] = ROLES

    def __init__(self) -> None:
        super().__init__()
        self._still = Stillness()
        self.parts = PartItems(self, self._still, self.roles, self.face)
        self.no_go = NoGoItems(self, self.face)
        self.nails = NailItems(self, self._still)
        self.tags = TagItems(self, self._still)
        self.stands: dict[SideName, Standing] = {}
        self.places: dict[Key, XY] = {}
        self._found_shown: tuple[object, ...] | None = None

    def dress(self, palette: Palette, font: QFont, ratio: float) -> None:
        self.parts.dress(palette, ratio)
        self.no_go.dress(palette, ratio)
        self.nails.dress(palette)
        self.tags.dress(palette, font, ratio)

    def _side_parts(self, stand: Standing) -> list[Part]:
        return side_parts(stand)

    def _parts(self, solution: Solution, both: dict[SideName, Standing]) -> list[Part]:
        parts = [part for stand in both.values() for part in self._side_parts(stand)]
        return parts + car_parts(solution, both)

    def _standing(self, solution: Solution) -> dict[SideName, Standing]:
        return {side: standing(solution, side, self.face) for side in SIDES}

    def follow(self, solution: Solution, outline: Solution | None) -> None:
        """Move everything to where a solution has it."""
        self._still.frame()
        both = self._standing(solution)
        self.stands = both
        broken = {side for side in SIDES if not both[side].meets}
        self.parts.show(self._parts(solution, both), broken)
        self._follow_found(solution, outline)
        self.no_go.show(solution.layout.no_go)
        relay = relay_standing(solution, self.face)
        self.places = {
            (side, name): relay[name] if name in relay else both[side].points[name]
            for side, name in solution.layout.nails()
        }
        self.nails.show(self.places, solution.layout.locked)
        self._follow_marks(solution, both)

    def _follow_found(self, solution: Solution, outline: Solution | None) -> None:
        if outline is None or _same_car(solution, outline):
            self._found_shown = None
            self.parts.show_found(None)
            return
        # While one car is dragged the other stands still.
        stance = outline.layout, tuple(outline.travel.values()), outline.rack
        if stance == self._found_shown:
            return
        self._found_shown = stance
        self.parts.show_found(self._parts(outline, self._standing(outline)))

    def _follow_marks(self, solution: Solution, both: dict[SideName, Standing]) -> None:
        """Move the construction lines and points of this view."""
        raise NotImplementedError

    def stretch(self, box: tuple[float, float, float, float]) -> None:
        """Clip what runs far to what is in view, mm."""
        raise NotImplementedError

    def set_zone(self, side: SideName, outlines: list[Array]) -> None:
        """Where a side's inner tie-rod pivot may sit, where this view shows that."""

    def set_nail_zone(self, side: SideName, name: str, outlines: list[Array]) -> None:
        """Where a nail may sit, where this view shows that."""


class FloorScene(CarScene):
    """The car from the front, with its strings and centers."""

    def __init__(self) -> None:
        super().__init__()
        self.strings = StringItems(self)
        self.marks = MarkItems(self, self._still)
        self.centers: dict[SideName, InstantCenter] = {}
        self.roll: XY | None = None
        self.gravity: XY | None = None
        self.pivots: dict[tuple[SideName, str], XY] = {}
        self._strings: list[String] = []
        self._tire_floor: tuple[XY, XY] | None = None
        self._zones: dict[SideName, list[Array]] = {}
        self._nail_zone: tuple[SideName, str, list[Array]] | None = None

    def dress(self, palette: Palette, font: QFont, ratio: float) -> None:
        super().dress(palette, font, ratio)
        self.strings.dress(palette, ratio)
        self.marks.dress(palette, ratio)

    def _follow_marks(self, solution: Solution, both: dict[SideName, Standing]) -> None:
        self._strings = strings(solution, both)
        at_ride = all(abs(t) < 1e-9 for t in solution.travel.values())
        self._tire_floor = None if at_ride else tire_floor(both)
        self.centers = {}
        for side in SIDES:
            center = instant_center(solution, side) if both[side].meets else None
            if center is not None:
                self.centers[side] = center
            shown = center is not None and not center.at_infinity and near(center.place)
            self.marks.centers[side].put(center.place if shown and center is not None else None)
        self.roll = solution.roll_center_place if solution.assembles else None
        self.marks.roll.put(self.roll if self.roll is not None and near(self.roll) else None)
        high = solution.layout.cg_height
        self.gravity = None if high is None else (0.0, high)
        self.marks.gravity.put(self.gravity)
        self.pivots = {
            (side, kind): place
            for side in SIDES
            if both[side].meets
            for kind, place in inner_pivot_places(solution, both[side]).items()
            if near(place)
        }
        for key, mark in self.marks.pivots.items():
            mark.put(self.pivots.get(key))
        for side in self._zones:
            self._show_zone(side)
        if self._nail_zone is not None:
            self._show_nail_zone()

    def stretch(self, box: tuple[float, float, float, float]) -> None:
        """Clip the strings to what is in view, mm."""
        self.strings.show(self._strings, box, self._tire_floor)

    def set_zone(self, side: SideName, outlines: list[Array]) -> None:
        """Where a side's inner tie-rod pivot may sit: outlines (n, 2) in side measure."""
        self._zones[side] = outlines
        self._show_zone(side)

    def _show_zone(self, side: SideName) -> None:
        stand = self.stands.get(side)
        if stand is not None:
            outlines = self._zones.get(side, [])
            moved = [o * (stand.sign, 1.0) + stand.shift for o in outlines]
            self.marks.set_zone(side, moved)

    def set_nail_zone(self, side: SideName, name: str, outlines: list[Array]) -> None:
        """Where a nail may sit: outlines (n, 2) in side measure at ride height."""
        self._nail_zone = (side, name, outlines) if outlines else None
        self._show_nail_zone()

    def _show_nail_zone(self) -> None:
        """The zone goes with its nail; one on the knuckle is true at ride height alone."""
        moved: list[Array] = []
        if self._nail_zone is not None:
            side, name, outlines = self._nail_zone
            stand = self.stands.get(side)
            if stand is not None and name in stand.points:
                place = stand.state.side[name]
                measured = np.array(stand.at(place.over, place.up))
                shift = np.array(stand.points[name]) - measured
                rides = name in KNUCKLE_POINTS and bool(np.any(np.abs(shift) > 1e-6))
                if not rides:
                    moved = [o * (stand.sign, 1.0) + shift for o in outlines]
        self.marks.set_nail_zone(moved)


def near(place: XY) -> bool:
    """Not so far off that a view's coordinates would suffer."""
    return abs(place[0]) < 40_000.0 and abs(place[1]) < 40_000.0


def _same_car(a: Solution, b: Solution) -> bool:
    """True if two cars' parts cover each other wholly."""
    return (
        a.layout.left == b.layout.left
        and a.layout.right == b.layout.right
        and a.layout.steering == b.layout.steering
    )


def zone_outlines(polygons: Any) -> list[Array]:
    """Shapely geometry or arrays as a list of (n, 2) outlines, holes included."""
    if polygons is None:
        return []
    if hasattr(polygons, "geoms"):
        return [ring for part in polygons.geoms for ring in zone_outlines(part)]
    if hasattr(polygons, "exterior"):
        if polygons.is_empty:
            return []
        rings = [polygons.exterior, *polygons.interiors]
        return [np.asarray(ring.coords, dtype=float)[:-1, :2] for ring in rings]
    assert isinstance(polygons, list | tuple)
    return [np.asarray(outline, dtype=float) for outline in polygons]
