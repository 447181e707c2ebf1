"""Descriptions of data in a layout file: one table drives writing, reading and the schema.

Each kind of value knows how to write itself as JSON text parts, how to read itself back
while noting every fault with its place in the file, and its part of the JSON Schema.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from typing import Any, Generic, Protocol, TypeVar

from geometry.layout import Point
from geometry.lengths import LIMIT_DEG, LIMIT_MM, radians_of, shortest_degrees
from geometry.text_file import printable

Schema = dict[str, Any]
T = TypeVar("T")
MISSING = object()


class Raw(str):
    """A number already written as JSON text (floats keep every digit they need)."""


class Faults:
    """Collects what is wrong with a file, each fault with its place in it."""

    def __init__(self) -> None:
        self.found: list[str] = []

    def add(self, place: str, words: str) -> None:
        if len(self.found) < 200:
            self.found.append(f"{place}: {words}" if place else words)


def describe(value: object) -> str:
    """What was found, in words short enough for a message."""
    if value is None:
        return "null"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, dict):
        return "a group of entries"
    if isinstance(value, list):
        return f"a list of {len(value)}"
    if isinstance(value, str):
        return f'"{printable(value)}"'
    return str(value)[:40]


def number_text(value: float) -> Raw:
    """A float as the shortest JSON number that reads back the same.

    What is not finite becomes a text that reading refuses, with its place in the file.
    """
    if not math.isfinite(value):
        return Raw("NaN" if math.isnan(value) else "Infinity")
    text = repr(float(value) + 0.0)
    return Raw(text[:-2] if text.endswith(".0") else text)


class Kind(Protocol[T]):
    """One kind of value of a layout file."""

    def write(self, value: T) -> Any: ...
    def read(self, raw: Any, place: str, faults: Faults) -> T: ...
    def schema(self) -> Schema: ...


@dataclass(frozen=True)
class Number:
    """A plain number within limits, with the words for what was expected."""

    words: str = "a number"
    low: float = -1e9
    high: float = 1e9

    def write(self, value: float) -> Raw:
        return number_text(value)

    def read(self, raw: Any, place: str, faults: Faults) -> float:
        if isinstance(raw, bool) or not isinstance(raw, int | Decimal):
            faults.add(place, f"expected {self.words}, got {describe(raw)}.")
            return 0.0
        if not (raw == raw and self.low <= raw <= self.high):
            faults.add(
                place,
                f"expected {self.words} from {self.low:,.0f} to {self.high:,.0f}, "
                f"got {describe(raw)}.",
            )
            return 0.0
        return float(raw)

    def schema(self) -> Schema:
        return {"type": "number", "minimum": self.low, "maximum": self.high}


def length(words: str = "a length in mm", low: float = -LIMIT_MM) -> Number:
    """A length in mm."""
    return Number(words, low, LIMIT_MM)


@dataclass(frozen=True)
class Angle:
    """An angle, degrees in the file, radians inside; exact both ways."""

    limit: float = LIMIT_DEG

    def write(self, value: float) -> Raw:
        if not math.isfinite(value):
            return number_text(value)
        degrees = shortest_degrees(value)
        return Raw(f"{degrees:f}" if -9 < degrees.adjusted() < 9 else str(degrees))

    def read(self, raw: Any, place: str, faults: Faults) -> float:
        number = Number("an angle in degrees", -self.limit, self.limit)
        before = len(faults.found)
        number.read(raw, place, faults)
        if len(faults.found) > before:
            return 0.0
        # An exact fraction of some tiny number would take more memory than there is.
        exact = Fraction(raw) if abs(raw) > Decimal("1e-400") else Fraction(0)
        return radians_of(exact)

    def schema(self) -> Schema:
        return {"type": "number", "minimum": -self.limit, "maximum": self.limit}


@dataclass(frozen=True)
class Text:
    """Free text up to a length."""

    most: int = 2000

    def write(self, value: str) -> str:
        return value

    def read(self, raw: Any, place: str, faults: Faults) -> str:
        if not isinstance(raw, str):
            faults.add(place, f"expected text, got {describe(raw)}.")
            return ""
        if len(raw) > self.most:
            faults.add(place, f"expected text of at most {self.most} letters, got {len(raw)}.")
            return ""
        if any(0xD800 <= ord(letter) <= 0xDFFF for letter in raw):
            faults.add(place, "holds half a letter that can't be written.")
            return ""
        return raw

    def schema(self) -> Schema:
        return {"type": "string", "maxLength": self.most}


@dataclass(frozen=True)
class Choice:
    """One of some words."""

    words: tuple[str, ...]

    def write(self, value: str) -> str:
        return value

    def read(self, raw: Any, place: str, faults: Faults) -> Any:
        if raw not in self.words:
            wanted = " or ".join(f'"{word}"' for word in self.words)
            faults.add(place, f"expected {wanted}, got {describe(raw)}.")
            return self.words[0]
        return raw

    def schema(self) -> Schema:
        return {"enum": list(self.words)}


@dataclass(frozen=True)
class Maybe(Generic[T]):
    """A value, or null where it was not given."""

    kind: Kind[T]

    def write(self, value: T | None) -> Any:
        return None if value is None else self.kind.write(value)

    def read(self, raw: Any, place: str, faults: Faults) -> T | None:
        return None if raw is None else self.kind.read(raw, place, faults)

    def schema(self) -> Schema:
        return {"anyOf": [self.kind.schema(), {"type": "null"}]}


@dataclass(frozen=True)
class Items(Generic[T]):
    """A list of one kind of value."""

    kind: Kind[T]
    least: int = 0
    most: int = 2000
    sort: bool = False

    def write(self, value: Sequence[T]) -> list[Any]:
        items = [self.kind.write(item) for item in value]
        return sorted(items) if self.sort else items

    def read(self, raw: Any, place: str, faults: Faults) -> tuple[T, ...]:
        if not isinstance(raw, list) or not self.least <= len(raw) <= self.most:
            faults.add(
                place,
                f"expected a list of {self.least} to {self.most} entries, got {describe(raw)}.",
            )
            return ()
        return tuple(
            self.kind.read(item, f"{place} › {number}", faults)
            for number, item in enumerate(raw, 1)
        )

    def schema(self) -> Schema:
        return {
            "type": "array",
            "items": self.kind.schema(),
            "minItems": self.least,
            "maxItems": self.most,
        }


@dataclass(frozen=True)
class Pair:
    """Two lengths, as a list."""

    def write(self, value: tuple[float, float]) -> list[Any]:
        return [number_text(v) for v in value]

    def read(self, raw: Any, place: str, faults: Faults) -> tuple[float, float]:
        if not isinstance(raw, list) or len(raw) != 2:
            faults.add(place, f"expected two lengths in mm, got {describe(raw)}.")
            return (0.0, 0.0)
        kind = length()
        return (kind.read(raw[0], place, faults), kind.read(raw[1], place, faults))

    def schema(self) -> Schema:
        return {
            "type": "array",
            "items": length().schema(),
            "minItems": 2,
            "maxItems": 2,
        }


@dataclass(frozen=True)
class Field:
    """One entry of a record: its key in the file, the attribute it fills, and its kind.

    ``default`` is what a missing entry means; MISSING makes the entry required.
    """

    key: str
    attribute: str
    kind: Any
    default: Any = MISSING


@dataclass(frozen=True)
class Record(Generic[T]):
    """A group of named entries that makes one object.

    ``make`` builds the object from the attributes; a ValueError from it becomes a fault.
    ``fixed`` entries always say the same in the file and are checked. A record with a
    ``name`` is described once in the schema and referred to by it.
    """

    make: Callable[..., T]
    fields: tuple[Field, ...]
    fixed: tuple[tuple[str, str], ...] = ()
    note: str = ""
    name: str = ""

    def write(self, value: T) -> dict[str, Any]:
        out: dict[str, Any] = dict(self.fixed)
        for field in self.fields:
            out[field.key] = field.kind.write(getattr(value, field.attribute))
        return out

    def read(self, raw: Any, place: str, faults: Faults) -> Any:
        if not isinstance(raw, dict):
            faults.add(place, f"expected a group of entries, got {describe(raw)}.")
            return None
        before = len(faults.found)
        keys = [key for key, _ in self.fixed] + [field.key for field in self.fields]
        for key in raw:
            if key not in keys:
                faults.add(_at(place, printable(key)), _unknown(keys))
        for key, wanted in self.fixed:
            if key not in raw:
                faults.add(_at(place, key), f'is missing; expected "{wanted}".')
            elif raw[key] != wanted:
                faults.add(_at(place, key), f'expected "{wanted}", got {describe(raw[key])}.')
        values: dict[str, Any] = {}
        for field in self.fields:
            at = _at(place, field.key)
            if field.key in raw:
                values[field.attribute] = field.kind.read(raw[field.key], at, faults)
            elif field.default is MISSING:
                faults.add(at, "is missing.")
            else:
                values[field.attribute] = field.default
        if len(faults.found) > before:
            return None
        try:
            return self.make(**values)
        except ValueError as error:
            faults.add(place, str(error))
            return None

    def schema(self) -> Schema:
        return {"$ref": f"#/$defs/{self.name}"} if self.name else self.definition()

    def definition(self) -> Schema:
        """The schema of this record itself, as it stands among the schema's ``$defs``."""
        properties: Schema = {key: {"const": words} for key, words in self.fixed}
        properties |= {field.key: field.kind.schema() for field in self.fields}
        required = [key for key, _ in self.fixed]
        required += [field.key for field in self.fields if field.default is MISSING]
        out: Schema = {
            "type": "object",
            "properties": properties,
            "required": required,
            "additionalProperties": False,
        }
        return {"description": self.note, **out} if self.note else out


def _unknown(known: Sequence[str]) -> str:
    return f"is not known here. Known are: {', '.join(known)}."


def _at(place: str, key: str) -> str:
    return f"{place} › {key}" if place else key


POINT = Record(
    Point,
    (
        Field("over", "over", length()),
        Field("up", "up", length()),
        Field("fore", "fore", length(), 0.0),
    ),
    note="over: from the centerline, outboard positive; up: from the floor; fore: ahead of "
    "the front axle line.",
    name="point",
)


@dataclass(frozen=True)
class Named(Generic[T]):
    """A group of values whose keys are taken from a list of names, each with its kind.

    ``check`` gets the names present and returns sentences on what is wrong with the set.
    """

    kinds: Mapping[str, Kind[T]]
    check: Callable[[Mapping[str, Any]], list[str]] | None = None

    def write(self, value: Mapping[str, T]) -> dict[str, Any]:
        out = {name: kind.write(value[name]) for name, kind in self.kinds.items() if name in value}
        # Written all the same, so that reading back tells of it instead of losing it.
        return out | {name: None for name in value if name not in self.kinds}

    def read(self, raw: Any, place: str, faults: Faults) -> dict[str, T]:
        if not isinstance(raw, dict):
            faults.add(place, f"expected a group of entries, got {describe(raw)}.")
            return {}
        for key in raw:
            if key not in self.kinds:
                faults.add(_at(place, printable(key)), _unknown(list(self.kinds)))
        if self.check is not None:
            for words in self.check(raw):
                faults.add(place, words)
        return {
            name: kind.read(raw[name], _at(place, name), faults)
            for name, kind in self.kinds.items()
            if name in raw
        }

    def schema(self) -> Schema:
        return {
            "type": "object",
            "properties": {name: kind.schema() for name, kind in self.kinds.items()},
            "additionalProperties": False,
        }
