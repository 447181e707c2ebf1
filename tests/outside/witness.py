"""Checks against outside figures: each is held, and remembered for the table of witnesses."""

from __future__ import annotations

from dataclasses import dataclass

import pytest


@dataclass(frozen=True)
class Witnessed:
    """One figure of this program beside the same one from outside."""

    source: str
    what: str
    expected: float
    got: float
    tolerance: float

    @property
    def difference(self) -> float:
        return self.got - self.expected


RECORD: list[Witnessed] = []
"""What was witnessed in this process, in the order in which it was."""


def witness(
    source: str, what: str, expected: float, got: float | None, tolerance: float
) -> None:
    """Hold a figure to a published or exact one, within ``tolerance`` (in the figure's unit).

    ``source`` is what the reader can look up; it says so where it was only remembered.
    """
    assert got is not None, f"{what}: there is no figure"
    RECORD.append(Witnessed(source, what, float(expected), float(got), tolerance))
    assert float(got) == pytest.approx(float(expected), abs=tolerance, rel=0.0), what
