"""Tape text to millimeters and back, exactly; and the same for degrees.

A length may be typed the way a tape is read (``9 1/16``, ``9-1/16``, ``1' 2 1/2"``), as a
decimal (``9.0625``, ``230 mm``), in the unit that was set or with its own unit mark. Text is
read with exact fractions and rounded to a float once.
"""

from __future__ import annotations

import math
import re
from decimal import Decimal
from fractions import Fraction

from geometry.layout import UnitName

LIMIT_MM = 1e6
"""The longest length taken, mm: a kilometer is no car."""

LIMIT_DEG = 360.0

_PI = Fraction(31415926535897932384626433832795028841971, 10**40)
"""Pi to 40 decimals: degrees typed or read become the nearest float of radians."""

_UNIT_MM = {
    "mm": Fraction(1),
    "cm": Fraction(10),
    "in": Fraction(254, 10),
    "ft": Fraction(3048, 10),
}
_MARKS = {
    "″": '"', "”": '"', "“": '"', "''": '"', "′": "'", "’": "'", "‘": "'",
    "−": "-", "–": "-", "—": "-", "⁄": "/",
    "½": " 1/2", "¼": " 1/4", "¾": " 3/4", "⅛": " 1/8", "⅜": " 3/8", "⅝": " 5/8", "⅞": " 7/8",
}
_UNIT_WORDS = {
    '"': "in", "in": "in", "in.": "in", "inch": "in", "inches": "in",
    "'": "ft", "ft": "ft", "ft.": "ft", "foot": "ft", "feet": "ft",
    "mm": "mm", "cm": "cm",
}
_NUMBER = r"(?:\d+(?:[.,]\d*)?|[.,]\d+)"
_QUANTITY = re.compile(
    rf"\s*(?:(?P<whole>{_NUMBER})(?:\s+|\s*-\s*)(?P<top2>\d+)\s*/\s*(?P<bottom2>\d+)"
    rf"|(?P<top>\d+)\s*/\s*(?P<bottom>\d+)"
    rf"|(?P<decimal>{_NUMBER}))"
    r"\s*(?P<unit>\"|'|[a-zA-Z]+\.?)?\s*"
)
_THOUSANDS = re.compile(r"[1-9]\d{0,2},\d{3}")


class LengthTextError(ValueError):
    """A text that is no length; the message is a plain reason."""


class AngleTextError(ValueError):
    """A text that is no angle; the message is a plain reason."""


def _decimal(text: str) -> Fraction:
    return Fraction("0" + text.replace(",", ".") + ("0" if text[-1] in ".," else ""))


def parse_length(text: str, unit: UnitName, *, decimal_comma: bool = False) -> float:
    """The length, mm, that ``text`` says, read in ``unit`` unless it has its own marks.

    A comma is a decimal comma; only millimeters such as ``2,743``, which could as well be
    thousands, are refused unless ``decimal_comma`` says what is meant. Raises
    LengthTextError with a plain reason.
    """
    shown = _one_line(text)
    if len(shown) > 60:
        raise LengthTextError("Can't read this: it is too long for a length.")
    if not shown:
        raise LengthTextError("Nothing was typed. A length such as 9 1/16 or 230 mm was expected.")
    sign, rest = _sign(_plain_marks(shown))
    match = _QUANTITY.match(rest)
    if match is None:
        raise _unreadable(shown)
    scale = _scale(match["unit"], unit, None, shown)
    if not decimal_comma and scale in (1, 10) and _THOUSANDS.fullmatch(match["decimal"] or ""):
        point, none = match["decimal"].replace(",", "."), match["decimal"].replace(",", "")
        raise LengthTextError(f"Can't tell whether “{shown}” means {point} or {none}. Type either.")
    total = _amount(match, shown) * scale
    rest = rest[match.end() :].strip()
    if rest and scale == _UNIT_MM["ft"]:
        # Between feet and inches a dash may stand, as on a drawing: 1'-2 1/2".
        match = _QUANTITY.fullmatch(rest.removeprefix("-"))
        if match is None or _scale(match["unit"], unit, scale, shown) != _UNIT_MM["in"]:
            raise _unreadable(shown)
        total += _amount(match, shown) * _UNIT_MM["in"]
    elif rest:
        raise _unreadable(shown)
    if total > LIMIT_MM:
        raise LengthTextError(f"{shown} is longer than any car. Is the unit right?")
    value = float(sign * total)
    return 0.0 if value == 0.0 else value


def _one_line(text: str) -> str:
    """The text with plain spaces for every other sort and for control letters."""
    return "".join(letter if letter.isprintable() else " " for letter in text).strip()


def _plain_marks(text: str) -> str:
    for mark, plain in _MARKS.items():
        text = text.replace(mark, plain)
    return text.strip()


def _sign(text: str) -> tuple[int, str]:
    if text[:1] in ("+", "-"):
        return (-1 if text[0] == "-" else 1), text[1:].strip()
    return 1, text


def _scale(word: str | None, unit: UnitName, before: Fraction | None, shown: str) -> Fraction:
    if word is None:
        # A bare number behind feet is inches, whatever the unit setting.
        return _UNIT_MM["in"] if before == _UNIT_MM["ft"] else _UNIT_MM[unit]
    known = _UNIT_WORDS.get(word.lower())
    if known is None:
        if re.fullmatch(r"(?i)nan|inf(inity)?|e\d*", word):
            raise _unreadable(shown)
        raise LengthTextError(
            f"Can't read “{shown}”: “{word}” is no unit. Use in, ft, mm or cm, or none."
        )
    return _UNIT_MM[known]


def _amount(match: re.Match[str], shown: str) -> Fraction:
    for top, bottom in (("top2", "bottom2"), ("top", "bottom")):
        if match[top] is not None:
            if int(match[bottom]) == 0:
                raise LengthTextError(f"Can't read “{shown}”: a fraction can't be over zero.")
            part = Fraction(int(match[top]), int(match[bottom]))
            if top == "top2":
                whole = _decimal(match["whole"])
                if whole.denominator != 1 or "." in match["whole"] or "," in match["whole"]:
                    raise LengthTextError(
                        f"Can't read “{shown}”: a decimal and a fraction don't go together."
                    )
                return whole + part
            return part
    return _decimal(match["decimal"])


def _unreadable(shown: str) -> LengthTextError:
    return LengthTextError(
        f"Can't read “{shown}” as a length. It should look like 9 1/16, 9.0625 or 230 mm."
    )


def format_length(
    mm: float,
    unit: UnitName,
    denominator: int = 16,
    *,
    mark: bool = False,
    decimals: int = 1,
) -> str:
    """A length as a tape shows it: ``9 1/16`` or, in millimeters, ``230.2``.

    Inches are rounded to the nearest ``1/denominator`` and reduced; millimeters to
    ``decimals``, trailing zeros dropped. ``mark`` adds the unit.
    """
    if not math.isfinite(mm):
        return "–"
    text = _tape(mm, denominator) if unit == "in" else _plain(round(mm, decimals), decimals)
    return f"{text} {unit}" if mark else text


def inch_steps(mm: float, denominator: int) -> int:
    """The nearest whole number of ``1/denominator`` inches, halves to even, exactly.

    Floats decide wherever their last digits can't matter; fractions take a hundred times
    as long, and a drag shows dozens of lengths a frame.
    """
    rough = mm / 25.4 * denominator
    nearest = math.floor(rough + 0.5)
    if abs(abs(rough - nearest) - 0.5) > 1e-6 and abs(rough) < 1e9:
        return nearest
    return round(Fraction(mm) / _UNIT_MM["in"] * denominator)


def _tape(mm: float, denominator: int) -> str:
    steps = inch_steps(mm, denominator)
    whole, part = divmod(abs(steps), denominator)
    sign = "-" if steps < 0 else ""
    if part == 0:
        return f"{sign}{whole}"
    common = math.gcd(part, denominator)
    text = f"{part // common}/{denominator // common}"
    return f"{sign}{whole} {text}" if whole else f"{sign}{text}"


def _plain(value: float, decimals: int) -> str:
    text = f"{value:.{decimals}f}"
    if "." in text:
        text = text.rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def format_exact(mm: float, unit: UnitName) -> str:
    """The shortest text that ``parse_length`` reads back as the very same float.

    A fraction where the length is exactly one of a 64th or coarser; else a decimal in
    ``unit``; in millimeters with their mark where no decimal inch gives the same float.
    What is no length (not finite) is shown as a dash, which does not read back.
    """
    if not math.isfinite(mm):
        return "–"
    if unit == "in":
        for denominator in (16, 32, 64):
            text = _tape(mm, denominator)
            if _reads_back(text, "in", mm):
                return text
        inches = mm / 25.4
        for digits in range(1, 18):
            text = format(Decimal(f"{inches:.{digits}g}"), "f")
            if _reads_back(text, "in", mm):
                return text
        return f"{_digits_until(mm, 'mm')} mm"
    return _digits_until(mm, "mm")


def _digits_until(mm: float, unit: UnitName) -> str:
    # Below a thousandth of a nanometer the last text is only the nearest.
    for decimals in range(26):
        text = _plain(mm, decimals)
        if _reads_back(text, unit, mm):
            break
    return text


def _reads_back(text: str, unit: UnitName, mm: float) -> bool:
    try:
        return parse_length(text, unit) == mm
    except LengthTextError:
        return False


_MINUTES = rf"(?P<min>{_NUMBER})\s*'(?:\s*(?P<sec>{_NUMBER})\s*\")?"
_ANGLE = re.compile(
    r"(?:(?:(?P<whole>\d+)\s+)?(?P<top>\d+)\s*/\s*(?P<bottom>\d+)\s*(?:°|deg\.?|degrees?)?"
    rf"|(?P<deg>{_NUMBER})\s*(?:°|deg\.?|degrees?)?"
    rf"|(?:(?P<deg2>\d+)\s*(?:°|deg\.?|degrees?)\s*)?{_MINUTES})"
)


def parse_angle(text: str) -> float:
    """The angle, rad, that a text in degrees says: ``0.5``, ``-1/2``, ``0.5°``, ``0°30'``.

    Minutes may stand alone (``30'``) and may have seconds. Raises AngleTextError with a
    plain reason.
    """
    shown = _one_line(text)
    sign, rest = _sign(_plain_marks(shown[:60]))
    match = _ANGLE.fullmatch(rest) if len(shown) <= 60 else None
    if match is None:
        raise AngleTextError(
            f"Can't read “{shown[:40]}” as an angle. It should look like -0.5 or 0°30'."
        )
    degrees = _decimal(match["deg"] or match["deg2"] or match["whole"] or "0")
    degrees += _decimal(match["min"] or "0") / 60 + _decimal(match["sec"] or "0") / 3600
    if match["bottom"] is not None:
        if int(match["bottom"]) == 0:
            raise AngleTextError(f"Can't read “{shown}”: a fraction can't be over zero.")
        degrees += Fraction(int(match["top"]), int(match["bottom"]))
    if degrees > LIMIT_DEG:
        raise AngleTextError(f"{shown} is more than a whole turn.")
    value = radians_of(degrees)
    return -value if sign < 0 and value else value


def radians_of(degrees: Fraction) -> float:
    """Exact degrees as the nearest float of radians."""
    return float(degrees * _PI / 180)


def format_angle(radians: float, decimals: int = 2) -> str:
    """An angle in degrees with its mark: ``-0.5°``."""
    if not math.isfinite(radians):
        return "–"
    return _plain(round(math.degrees(radians), decimals), decimals) + "°"


def format_angle_exact(radians: float) -> str:
    """The shortest plain decimal of degrees that reads back as the very same float."""
    if not math.isfinite(radians):
        return "–"
    return format(shortest_degrees(radians), "f")


def shortest_degrees(radians: float) -> Decimal:
    """The shortest decimal of degrees whose nearest float of radians is ``radians``.

    Degrees are read exactly (``radians_of``), so that every finite float has one.
    """
    if radians == 0.0:
        return Decimal(0)
    degrees = Fraction(radians) * 180 / _PI
    leading = math.frexp(radians)[1] * 30103 // 100000
    # One decimal more each time: 17 digits always tell one float from its neighbors.
    for exponent in range(leading + 3, leading - 24, -1):
        step = Fraction(10) ** exponent
        scaled = round(degrees / step)
        if radians_of(scaled * step) == radians:
            break
    return Decimal(scaled).scaleb(exponent)
