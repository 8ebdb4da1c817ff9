"""What the values of a board file look like: each shape reads a value and publishes its schema."""

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import date
from decimal import Decimal
from enum import Enum
from fractions import Fraction
from typing import Generic, TypeVar

from bitweight.board.decoding.tables import (
    Decoded,
    Field,
    Mistakes,
    Schema,
    Shape,
    described,
    nearest,
    read_table,
    wrong,
)
from bitweight.documents import Array, Scalar, Value
from bitweight.errors import BoardError, Mistake
from bitweight.quantities import parse_number

T = TypeVar("T")

_LARGEST_EXPONENT = 40
"""Powers of ten of a plain number; beyond it exact fractions grow without use."""


class Sign(Enum):
    """Which numbers make sense."""

    ANY = "any"
    NOT_ZERO = "other than 0"
    NOT_NEGATIVE = "0 or more"
    POSITIVE = "above 0"

    def holds(self, number: Fraction) -> bool:
        """Whether a number has this sign."""
        match self:
            case Sign.ANY:
                return True
            case Sign.NOT_ZERO:
                return number != 0
            case Sign.NOT_NEGATIVE:
                return number >= 0
            case Sign.POSITIVE:
                return number > 0


@dataclass(frozen=True, slots=True)
class Text:
    """A text that is not empty."""

    def decode(self, value: Value) -> str:
        """The text."""
        if isinstance(value, Scalar) and isinstance(value.value, str) and value.value.strip():
            return value.value
        raise wrong(value.place, f"expected a text in quotes, found {described(value)}")

    def schema(self) -> Schema:
        """A string."""
        return {"type": "string", "minLength": 1}


@dataclass(frozen=True, slots=True)
class Texts:
    """One text or a list of texts."""

    def decode(self, value: Value) -> tuple[str, ...]:
        """The texts in order."""
        if isinstance(value, Array):
            return each(value, Text())
        if isinstance(value, Scalar) and isinstance(value.value, str):
            return (Text().decode(value),)
        raise wrong(value.place, f"expected a text or a list of texts, found {described(value)}")

    def schema(self) -> Schema:
        """A string or an array of strings."""
        return {"anyOf": [Text().schema(), {"type": "array", "items": Text().schema()}]}


@dataclass(frozen=True, slots=True)
class Flag:
    """True or false."""

    def decode(self, value: Value) -> bool:
        """The truth value."""
        if isinstance(value, Scalar) and isinstance(value.value, bool):
            return value.value
        raise wrong(value.place, f"expected true or false, found {described(value)}")

    def schema(self) -> Schema:
        """A boolean."""
        return {"type": "boolean"}


@dataclass(frozen=True, slots=True)
class Whole:
    """A whole number from `low` to `high`."""

    low: int
    high: int

    def decode(self, value: Value) -> int:
        """The number."""
        number = value.value if isinstance(value, Scalar) else None
        if not isinstance(number, int) or isinstance(number, bool):
            raise wrong(value.place, f"expected a whole number, found {described(value)}")
        if not self.low <= number <= self.high:
            found = described(value).removeprefix("the number ")
            message = f"expected a whole number from {self.low} to {self.high}, found {found}"
            raise wrong(value.place, message)
        return number

    def schema(self) -> Schema:
        """An integer with its bounds."""
        return {"type": "integer", "minimum": self.low, "maximum": self.high}


@dataclass(frozen=True, slots=True)
class Width:
    """One of a few widths in bits."""

    widths: tuple[int, ...]

    def decode(self, value: Value) -> int:
        """The width."""
        width = value.value if isinstance(value, Scalar) else None
        if isinstance(width, int) and not isinstance(width, bool) and width in self.widths:
            return width
        known = " or ".join(str(width) for width in self.widths)
        raise wrong(value.place, f"expected {known}, found {described(value)}")

    def schema(self) -> Schema:
        """An enumeration."""
        return {"enum": list(self.widths)}


@dataclass(frozen=True, slots=True)
class Number:
    """A plain number, exactly; a fraction like "1/3" may be written as a text."""

    sign: Sign = Sign.ANY

    def decode(self, value: Value) -> Fraction:
        """The number as a fraction."""
        number = plain_number(value)
        if not self.sign.holds(number):
            found = described(value)
            raise wrong(value.place, f"expected a number {self.sign.value}, found {found}")
        return number

    def schema(self) -> Schema:
        """A number, or a fraction as a string."""
        return {"anyOf": [{"type": "number"}, {"type": "string"}]}


def plain_number(value: Value) -> Fraction:
    """The exact number of a scalar that has no unit."""
    match value:
        case Scalar(value=bool()):
            pass
        case Scalar(value=int() as whole) if whole.bit_length() < 200:
            return Fraction(whole)
        case Scalar(value=Decimal() as decimal) if _is_bounded(decimal):
            return Fraction(decimal)
        case Scalar(value=str() as text):
            return spoken(value, parse_number, text)
        case _:
            pass
    raise wrong(value.place, f"expected a number like 3 or 0.5, found {described(value)}")


def _is_bounded(number: Decimal) -> bool:
    return number.is_finite() and abs(number.adjusted()) <= _LARGEST_EXPONENT


def spoken(value: Value, parse: Callable[[str], T], text: str) -> T:
    """Parse a text; its complaint becomes a mistake at the value's place."""
    try:
        return parse(text)
    except ValueError as error:
        raise wrong(value.place, str(error)) from None


@dataclass(frozen=True, slots=True)
class Choice(Generic[T]):
    """One of a few words."""

    words: Mapping[str, T]

    def decode(self, value: Value) -> T:
        """What the word stands for."""
        word = value.value if isinstance(value, Scalar) else None
        if isinstance(word, str) and word in self.words:
            return self.words[word]
        known = ", ".join(f'"{name}"' for name in self.words)
        hint = nearest(word, self.words) if isinstance(word, str) else ""
        raise wrong(value.place, f"expected one of {known}, found {described(value)}{hint}")

    def schema(self) -> Schema:
        """An enumeration."""
        return {"enum": list(self.words)}


E = TypeVar("E", bound=Enum)


def one_of(members: type[E]) -> Choice[E]:
    """The choice among the members of an enumeration, by their values."""
    return Choice({str(member.value): member for member in members})


def words(*names: str) -> Choice[str]:
    """The choice among plain words."""
    return Choice({name: name for name in names})


@dataclass(frozen=True, slots=True)
class Counts:
    """A count, or a list of counts of which the first is taken and all are accepted."""

    high: int

    def decode(self, value: Value) -> tuple[int, ...]:
        """The counts in order."""
        if isinstance(value, Array):
            if not value.items:
                raise wrong(value.place, "expected at least one count, found an empty list")
            return each(value, Whole(1, self.high))
        return (Whole(1, self.high).decode(value),)

    def schema(self) -> Schema:
        """An integer or an array of integers."""
        count = Whole(1, self.high).schema()
        return {"anyOf": [count, {"type": "array", "items": count, "minItems": 1}]}


@dataclass(frozen=True, slots=True)
class Numbers:
    """A list of plain numbers, `low` to `high` of them."""

    low: int
    high: int

    def decode(self, value: Value) -> tuple[Fraction, ...]:
        """The numbers in order."""
        if not isinstance(value, Array) or not self.low <= len(value.items) <= self.high:
            many = str(self.low) if self.low == self.high else f"{self.low} to {self.high}"
            raise wrong(value.place, f"expected a list of {many} numbers, found {described(value)}")
        return each(value, Number())

    def schema(self) -> Schema:
        """An array of numbers."""
        items = Number().schema()
        return {"type": "array", "items": items, "minItems": self.low, "maxItems": self.high}


@dataclass(frozen=True, slots=True)
class Day:
    """A date, as TOML writes it or in quotes."""

    def decode(self, value: Value) -> date:
        """The day."""
        content = value.value if isinstance(value, Scalar) else None
        if type(content) is date:
            return content
        if isinstance(content, str) and re.fullmatch(r"\d{4}-\d{2}-\d{2}", content, re.ASCII):
            try:
                return date.fromisoformat(content)
            except ValueError:
                raise wrong(value.place, f"there is no day {content}") from None
        raise wrong(value.place, f"expected a date like 2027-06-30, found {described(value)}")

    def schema(self) -> Schema:
        """A date; editors show TOML dates as strings."""
        return {"type": "string", "format": "date"}


@dataclass(frozen=True, slots=True)
class Inner:
    """A table inside a table, by its own fields."""

    what: str
    fields: tuple[Field[object], ...]

    def decode(self, value: Value) -> Decoded:
        """The inner table's fields."""
        mistakes = Mistakes()
        decoded = self.read(value, mistakes, "")
        mistakes.raise_any()
        return decoded

    def read(self, value: Value, mistakes: Mistakes, path: str) -> Decoded:
        """The inner table's fields that are right."""
        return read_table(value, self.fields, self.what, mistakes, path)

    def schema(self) -> Schema:
        """An object with its properties."""
        return table_schema(self.fields)


@dataclass(frozen=True, slots=True)
class Tables:
    """A list of tables of one kind: `[[channel.NAME.limit]]`."""

    shape: Inner

    def decode(self, value: Value) -> tuple[Decoded, ...]:
        """The fields of every table in order."""
        mistakes = Mistakes()
        found = self.read(value, mistakes, "")
        mistakes.raise_any()
        return found

    def read(self, value: Value, mistakes: Mistakes, path: str) -> tuple[Decoded, ...]:
        """The fields of every table that are right."""
        if not isinstance(value, Array):
            mistakes.add(value.place, f"{path}expected a list, found {described(value)}")
            return ()
        return tuple(self.shape.read(item, mistakes, path) for item in value.items)

    def schema(self) -> Schema:
        """An array."""
        return {"type": "array", "items": self.shape.schema()}


def each(value: Array, shape: Shape[T]) -> tuple[T, ...]:
    """Every item of a list; the mistakes of all items together."""
    found: list[T] = []
    mistakes: list[Mistake] = []
    for item in value.items:
        try:
            found.append(shape.decode(item))
        except BoardError as error:
            mistakes.extend(error.mistakes)
    if mistakes:
        raise BoardError(tuple(mistakes))
    return tuple(found)


def table_schema(fields: tuple[Field[object], ...], *, required: bool = True) -> Schema:
    """A table's fields as JSON schema."""
    schema: Schema = {
        "type": "object",
        "properties": {
            field.name: {"description": field.help, **field.shape.schema()} for field in fields
        },
        "additionalProperties": False,
    }
    needed = [field.name for field in fields if field.required]
    if needed and required:
        schema["required"] = needed
    return schema
