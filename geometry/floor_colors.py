"""The floor's colors that screen, pictures and paper share, as #rrggbb.

Strings use the Okabe-Ito colors that reach 3:1 on a light ground; each has its own dash
besides, so that color is never alone.
"""

from __future__ import annotations

VERMILLION = "#D55E00"
BLUE = "#0072B2"
GREEN = "#00795A"
"""Okabe-Ito's bluish green, darkened to stand out as much as the others."""
PURPLE = "#8B3A6F"
CHALK = "#3E6DB5"
TAPE, TAPE_EDGE, TAPE_INK, TAPE_RED = "#F2CE3E", "#A98708", "#28230C", "#C01818"
TAG, TAG_EDGE, TAG_INK = "#F3E7C3", "#C9B47C", "#2B2618"
NO_GO = "#B4705C"
INK = "#22262A"

PARTS: dict[str, tuple[str | None, str | None]] = {
    "tire": ("#77746E", "#2B2B2A"),
    "groove": (None, "#3A3937"),
    "window": ("#C9C4BA", "#4A4844"),
    "rim": ("#8E9599", "#2A3034"),
    "hub": ("#A9ACAD", "#3B4045"),
    "spring": ("#8FA08C", "#3C4A3B"),
    "strut": ("#4E565D", "#20262B"),
    "rod": ("#AEB4B8", "#4A5157"),
    "rack": ("#8D7F75", "#3B332D"),
    "rack light": ("#B5A89E", None),
    "bellows": ("#4A4A4B", "#1F1F20"),
    "clamp": ("#5C6268", "#2A2F34"),
    "relay": ("#6C5A78", "#33293B"),
    "relay light": ("#9D8BA9", None),
    "tie": ("#8A5A2B", "#3D2610"),
    "tie light": ("#C08E58", None),
    "arm": ("#46535F", "#1C242B"),
    "arm light": ("#8796A3", None),
    "low arm": ("#6B7783", "#1C242B"),
    "low arm light": ("#A3AFB9", None),
    "knuckle": ("#7B868F", "#2C343B"),
    "knuckle light": ("#98A3AB", "#4C565E"),
    "eye": ("#5B6975", "#1C242B"),
    "bush": ("#23282D", "#15191D"),
    "joint": ("#39424A", "#171D22"),
}
"""A part's role to (fill, edge); of a drawn line, (core, edge)."""
