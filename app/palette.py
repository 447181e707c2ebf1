"""Every color of the floor and of the curves, light and dark, in one place.

Strings use the Okabe-Ito colors that reach 3:1 on a light ground (on the dark floor, their
light sisters); each string has its own dash besides.
"""

from __future__ import annotations

from dataclasses import dataclass

from geometry.floor_colors import (
    BLUE,
    CHALK,
    GREEN,
    INK,
    NO_GO,
    PARTS,
    TAG,
    TAG_EDGE,
    TAG_INK,
    TAPE,
    TAPE_EDGE,
    TAPE_INK,
    TAPE_RED,
    VERMILLION,
)

ARM_DASH = (11.0, 4.0)
CONTACT_DASH = (10.0, 3.0, 1.5, 3.0)
TIE_DASH = (4.0, 3.0)
CHALK_DASH = (9.0, 1.1, 5.0, 1.6, 13.0, 0.9, 3.0, 1.2)
"""Broken now and then, as a chalk line is."""
BROKEN_DASH = (5.0, 4.0)


@dataclass(frozen=True)
class Palette:
    """The floor's colors, as #rrggbb.

    ``parts`` maps a part's role to (fill, edge); of a drawn line, (core, edge).
    """

    dark: bool
    floor: str
    grain: int
    dot: str
    dot_strong: str
    chalk: str
    chalk_core: str
    chalk_text: str
    dust: str
    arm_string: str
    contact_string: str
    tie_string: str
    zone: str
    zone_edge: str
    no_go: str
    ink: str
    mark_fill: str
    tape: str
    tape_edge: str
    tape_ink: str
    tape_red: str
    tag: str
    tag_edge: str
    tag_ink: str
    tag_quiet: str
    chosen: str
    nail_light: str
    nail_dark: str
    nail_edge: str
    nail_locked: str
    broken: str
    parts: dict[str, tuple[str | None, str | None]]


_DARK_PARTS: dict[str, tuple[str | None, str | None]] = {
    "tire": ("#55544F", "#B3AFA6"),
    "groove": (None, "#8F8C84"),
    "window": ("#33363A", "#8B8A85"),
    "rim": ("#5A6267", "#C4CACE"),
    "hub": ("#757A7E", "#C4C8CB"),
    "spring": ("#6F8A6C", "#C3D2C0"),
    "strut": ("#67727B", "#C5CDD3"),
    "rod": ("#AEB4B8", "#DDE1E4"),
    "rack": ("#77695F", "#CDBFB4"),
    "rack light": ("#A3958A", None),
    "bellows": ("#3B3B3D", "#A4A4A6"),
    "clamp": ("#626A71", "#B9C1C7"),
    "relay": ("#745F83", "#CDBBD9"),
    "relay light": ("#A591B2", None),
    "tie": ("#9A6733", "#E2B686"),
    "tie light": ("#D3A066", None),
    "arm": ("#5D6E7D", "#C3D0DB"),
    "arm light": ("#9DB0C0", None),
    "low arm": ("#485661", "#AFBCC7"),
    "low arm light": ("#80919F", None),
    "knuckle": ("#66727C", "#C2CCD4"),
    "knuckle light": ("#84919B", "#B6C0C8"),
    "eye": ("#6A7B8A", "#C3D0DB"),
    "bush": ("#22272C", "#9FB0BE"),
    "joint": ("#38424B", "#B7C2CB"),
}

LIGHT = Palette(
    dark=False,
    floor="#D9D5CC", grain=4, dot="#B5B0A5", dot_strong="#8E897E",
    chalk="#7FA3D6", chalk_core=CHALK, chalk_text="#2F5592", dust="#FBF9F4",
    arm_string=VERMILLION, contact_string=BLUE, tie_string=GREEN,
    zone="#BFDCC9", zone_edge="#2E8B63", no_go=NO_GO,
    ink=INK, mark_fill="#F7F4ED",
    tape=TAPE, tape_edge=TAPE_EDGE, tape_ink=TAPE_INK, tape_red=TAPE_RED,
    tag=TAG, tag_edge=TAG_EDGE, tag_ink=TAG_INK, tag_quiet="#6A6046",
    chosen="#B3420A", nail_light="#F6F7F8", nail_dark="#8F979E", nail_edge="#23292E",
    nail_locked="#4A5258", broken="#8D887D",
    parts=PARTS,
)

DARK = Palette(
    dark=True,
    floor="#2B2D2F", grain=4, dot="#4B4E51", dot_strong="#777B7F",
    chalk="#3F5F92", chalk_core="#7FA8E8", chalk_text="#A9C5F2", dust="#7C7A74",
    arm_string="#FF8A3D", contact_string="#56B4E9", tie_string="#37D0A0",
    zone="#27463A", zone_edge="#55C79A", no_go="#A8664F",
    ink="#ECEAE4", mark_fill="#1E2022",
    tape="#C9A92B", tape_edge="#6E5A0C", tape_ink="#1E1A08", tape_red="#9C0F0F",
    tag="#4A442F", tag_edge="#7C7148", tag_ink="#F6EFD8", tag_quiet="#CFC49B",
    chosen="#FFB454", nail_light="#FFFFFF", nail_dark="#9AA3AA", nail_edge="#0E1114",
    nail_locked="#69737A", broken="#7F8285",
    parts=_DARK_PARTS,
)


def mixed(a: str, b: str, share: float) -> str:
    """The opaque color ``share`` of the way from ``a`` to ``b`` (see-through costs frames)."""
    one = [int(a[i : i + 2], 16) for i in (1, 3, 5)]
    two = [int(b[i : i + 2], 16) for i in (1, 3, 5)]
    parts = (round(x + share * (y - x)) for x, y in zip(one, two, strict=True))
    return "#" + "".join(f"{part:02X}" for part in parts)
