"""What a measure sheet leaves out and is assumed instead, in plain words.

The sentences are what every output lists; writing a sheet knows them again and leaves
blank what was never measured.
"""

from __future__ import annotations

from collections.abc import Iterable

from geometry.layout import IDLER_END, IDLER_PIVOT, SideName

ASSUMED_OUTER_FORE = -127.0
"""Five inches behind the axle, where many knuckles have their steering arm's end."""

OUTER_FORE = (
    "Fore of the outer tie rod was not measured{}: taken as 5 in (127 mm) behind the axle. "
    "Toe as an angle rests on it."
)
TIRE_RADIUS = "Tire radius was not measured{}: taken as the height of the wheel center."
NO_CAMBER_OR_TOE = {
    "static camber": "Static camber was not measured{}: taken as 0.",
    "static toe": "Static toe was not measured{}: taken as 0.",
}
IDLER_MIRRORED = {
    IDLER_PIVOT: "The idler arm's pivot was not measured{}: taken as the pitman arm's, mirrored.",
    IDLER_END: "The idler arm's end was not measured{}: taken as the pitman arm's, mirrored.",
}
BOX_LEFT = "The steering box's side was not given{}: taken as left."
UNITS = "Units were not given{}: numbers without a mark were read as inches."
_FORES = ("Fore was not measured for ", ": taken as 0, on the axle line.")


class Assumed:
    """Gathers what was assumed over both sides, and says it once."""

    def __init__(self) -> None:
        self._said: dict[str, list[SideName | None]] = {}
        self._fores: dict[str, list[SideName | None]] = {}

    def add(self, sentence: str, side: SideName | None = None) -> None:
        """One of the sentences above, for one side or (None) for both or the whole car."""
        self._said.setdefault(sentence, []).append(side)

    def add_fore(self, point: str, side: SideName | None = None) -> None:
        """A point whose fore was taken as 0."""
        self._fores.setdefault(point, []).append(side)

    def sentences(self) -> tuple[str, ...]:
        """Every sentence; a side is named where only that side was assumed."""
        out = [sentence.format(_where(sides)) for sentence, sides in self._said.items()]
        if self._fores:
            names = ", ".join(name + _where(sides) for name, sides in self._fores.items())
            out.append(names.join(_FORES))
        return tuple(out)


def _where(sides: list[SideName | None]) -> str:
    return f" on the {sides[0]}" if len(sides) == 1 and sides[0] is not None else ""


def is_assumed(assumed: Iterable[str], sentence: str, side: SideName | None) -> bool:
    """Whether a sentence above was said of a side (None: of both, or of the whole car)."""
    return sentence.format("") in assumed or sentence.format(_where([side])) in assumed


def assumed_fores(assumed: Iterable[str], side: SideName | None) -> set[str]:
    """The points of a side whose fore was taken as 0."""
    start, end = _FORES
    listed: list[str] = []
    for sentence in assumed:
        if sentence.startswith(start) and sentence.endswith(end):
            listed += sentence[len(start) : -len(end)].split(", ")
    here = _where([side])
    return {name.removesuffix(here) for name in listed if " on the " not in name or
            (here and name.endswith(here))}
