"""What one finding holds: words, figure, tolerance, cure, and the pivots it is about."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

from geometry.finding_checks.wording import Wording
from geometry.layout import Layout, Point, SideName
from geometry.solution import CornerState, Solution
from geometry.tolerances import TOLERANCES, Kind, tolerance, tolerance_source

Severity = Literal["wrong", "warn", "note"]
SEVERITIES: tuple[Severity, ...] = ("wrong", "warn", "note")
"""Worst first."""


@dataclass(frozen=True)
class Move:
    """One pivot's way to a better place, mm in its side's measures."""

    point: str
    side: SideName
    d_over: float = 0.0
    d_up: float = 0.0
    d_fore: float = 0.0


@dataclass(frozen=True)
class Cure:
    """What would cure a finding: a sentence for the person, and the same as moves."""

    text: str
    moves: tuple[Move, ...] = ()

    def applied(self, layout: Layout) -> Layout:
        """The car with every move made (exact, not rounded to the tape)."""
        for move in self.moves:
            old = layout.point(move.side, move.point)
            new = Point(old.over + move.d_over, old.up + move.d_up, old.fore + move.d_fore)
            layout = layout.with_point(move.side, move.point, new)
        return layout


@dataclass(frozen=True)
class Finding:
    """Something about a car that a builder should know.

    ``code`` is stable. ``side`` is None for a finding that holds for both sides or for the
    whole car. ``figure`` and ``tolerance`` are in internal units of ``kind`` (None where
    there is nothing to measure); ``tolerance_key`` names the setting, if there is one.
    ``points`` are the names to show on the floor.
    """

    code: str
    severity: Severity
    side: SideName | None
    headline: str
    detail: str
    figure: float | None = None
    kind: Kind = "length"
    tolerance: float | None = None
    tolerance_key: str = ""
    tolerance_source: str = ""
    cure: Cure | None = None
    points: tuple[str, ...] = ()

    @property
    def text(self) -> str:
        """The finding and its cure in one line."""
        return self.headline if self.cure is None else f"{self.headline} {self.cure.text}"


@dataclass(frozen=True)
class Subject:
    """One side of a solved car under examination.

    ``side`` is None while the sides are linked: one finding then speaks for both.
    """

    solution: Solution
    state: CornerState
    side: SideName | None
    words: Wording

    @property
    def layout(self) -> Layout:
        return self.solution.layout

    def limit(self, key: str) -> float:
        return tolerance(self.layout, key)

    def source(self, key: str) -> str:
        return tolerance_source(self.layout, key)

    def name(self, thing: str) -> str:
        """A thing's name at the start of a sentence, with its side where it matters."""
        said = thing if self.side is None else f"{self.side} {thing}"
        return said[0].upper() + said[1:]

    def move(self, point: str, over: float = 0.0, up: float = 0.0) -> Move:
        return Move(point, self.state.name, over, up)

    def finding(
        self,
        code: str,
        severity: Severity,
        headline: str,
        detail: str = "",
        *,
        figure: float | None = None,
        kind: Kind = "length",
        key: str = "",
        cure: Cure | None = None,
        points: Iterable[str] = (),
        whole_car: bool = False,
    ) -> Finding:
        """A finding on this side; with a ``key``, the tolerance closes the detail."""
        value, source = (self.limit(key), self.source(key)) if key else (None, "")
        if value is not None:
            entry = TOLERANCES[key]
            said = f"{entry.bound} {self.words.of(value, entry.kind)}"
            detail = f"{detail} Tolerance: {said} ({source}).".strip()
        return Finding(
            code,
            severity,
            None if whole_car else self.side,
            headline,
            detail,
            figure,
            kind,
            value,
            key,
            source,
            cure,
            tuple(points),
        )
