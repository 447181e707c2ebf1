"""How a run of strange cars says that something is wrong."""

from __future__ import annotations

import math
import re
from typing import Any

BAD_WORDS = re.compile(r"\b((?i:nan|inf|infinity)|None)\b|∞|(?<![\d.])[-−]0(\.0*)?(?![.\d/])")


class FaultError(AssertionError):
    """Something that must not be; the message says what."""


def hold(true: bool, words: str) -> None:
    """Raise FaultError unless ``true``."""
    if not true:
        raise FaultError(words)


def plain(text: object) -> None:
    """No number that isn't one in anything a person reads."""
    words = str(text)
    hold(not BAD_WORDS.search(words), f"said {words!r}")


def finite(value: Any, where: str = "figures") -> None:
    """Every number in a JSON-like tree is finite."""
    if isinstance(value, dict):
        for key, inner in value.items():
            finite(inner, f"{where} > {key}")
    elif isinstance(value, list | tuple):
        for inner in value:
            finite(inner, where)
    elif isinstance(value, float):
        hold(math.isfinite(value), f"{where} is {value}")
