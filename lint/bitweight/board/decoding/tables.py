"""One TOML table read by a list of its fields; mistakes are collected, never raised one by one.

The same fields make the published schema, so what is read and what is published cannot differ.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from difflib import get_close_matches
from types import MappingProxyType
from typing import Generic, Protocol, TypeVar, cast

from bitweight.documents import Array, Scalar, Table, Value
from bitweight.errors import BoardError, Mistake
from bitweight.places import Place

Schema = dict[str, object]
"""A fragment of JSON schema."""

_LONGEST_MESSAGE = 400
_LONGEST_NAME = 60
"""Characters of one message and of one name in it: what a line can carry."""

T = TypeVar("T")
T_co = TypeVar("T_co", covariant=True)


class Shape(Protocol[T_co]):
    """What a value must look like."""

    def decode(self, value: Value) -> T_co:
        """The value as a fact. Raises `BoardError` with what was expected and found."""

    def schema(self) -> Schema:
        """The shape as JSON schema."""


@dataclass(frozen=True, slots=True)
class Field(Generic[T_co]):
    """A key that a table may have. `help` is one sentence for editors."""

    name: str
    shape: Shape[T_co]
    help: str
    required: bool = False


@dataclass(slots=True)
class Mistakes:
    """Everything found wrong so far; a mistake seen twice (through a copied table) counts once."""

    found: dict[tuple[Place, str], Mistake] = field(default_factory=dict)

    def add(self, place: Place, message: str) -> None:
        """Note one mistake."""
        self.extend((Mistake(place=place, message=message),))

    def extend(self, mistakes: Iterable[Mistake]) -> None:
        """Note several."""
        for mistake in mistakes:
            message = printable(mistake.message)
            shown = Mistake(place=mistake.place, message=message)
            self.found.setdefault((mistake.place, message), shown)

    def raise_any(self) -> None:
        """Raise `BoardError` with all mistakes in the order of the file, if there are any."""
        if self.found:
            raise BoardError(tuple(self.found[key] for key in sorted(self.found)))


@dataclass(frozen=True, slots=True)
class Decoded:
    """The fields of one table that could be read. `where` names the table in sentences."""

    table: Table
    where: str
    values: Mapping[str, object]

    def get(self, field: Field[T]) -> T | None:
        """The value of a field; None when it is not given or was wrong."""
        return cast("T | None", self.values.get(field.name))

    def given(self, field: Field[T]) -> bool:
        """Whether the file has the key, right or wrong."""
        return field.name in self.table.keys

    def place(self, field: Field[T]) -> Place:
        """Where the key's value stands; the table's own place when it is not given."""
        value = self.table.get(field.name)
        return value.place if value is not None else self.table.place


def wrong(place: Place, message: str) -> BoardError:
    """The error for one value."""
    return BoardError((Mistake(place=place, message=message),))


def described(value: Value) -> str:
    """A value for a sentence: 'the text "x"', "the number 3", "a table"."""
    match value:
        case Table():
            return "a table"
        case Array():
            return "a list"
        case Scalar(value=bool() as flag):
            return "true" if flag else "false"
        case Scalar(value=str() as text):
            return f'the text "{shortened(text)}"'
        case Scalar(value=int() as number):
            return f"the number {shortened(str(number)) if number.bit_length() < 200 else '...'}"
        case Scalar(value=other):
            return shortened(str(other))


def shortened(text: str) -> str:
    """A text from the file, cut to what a message can carry."""
    return text if len(text) <= _LONGEST_NAME else text[: _LONGEST_NAME - 3] + "..."


def printable(message: str) -> str:
    """A message with control and bidirectional characters escaped, of bounded length."""
    shown = message if len(message) <= _LONGEST_MESSAGE else message[:_LONGEST_MESSAGE] + "..."
    return "".join(
        character if character.isprintable() else ascii(character)[1:-1] for character in shown
    )


def nearest(name: str, known: Iterable[str]) -> str:
    """', did you mean "x"?' for the nearest known name, or nothing."""
    close = get_close_matches(name[:_LONGEST_NAME], list(known), n=1, cutoff=0.5)
    return f", did you mean '{close[0]}'?" if close else ""


def read_table(
    value: Value, fields: tuple[Field[object], ...], where: str, mistakes: Mistakes
) -> Decoded:
    """The fields of a table. Unknown and missing keys and wrong values become mistakes."""
    if not isinstance(value, Table):
        mistakes.add(value.place, f"expected a table for {where}, found {described(value)}")
        return Decoded(Table(keys=MappingProxyType({}), place=value.place), where, {})
    names = {field.name for field in fields}
    for key in value.keys.values():
        if key.name not in names:
            hint = nearest(key.name, names) or _all_of(names)
            mistakes.add(key.place, f"unknown key '{shortened(key.name)}' in {where}{hint}")
    values = {field.name: _read_field(value, field, where, mistakes) for field in fields}
    return Decoded(value, where, values)


def read_all(
    value: Value | None, what: str, mistakes: Mistakes
) -> Mapping[str, tuple[Place, Value]]:
    """The named tables under one key: `[converter.NAME]`. Each with the place of its name."""
    if value is None:
        return {}
    if not isinstance(value, Table):
        mistakes.add(value.place, f"expected tables [{what}.NAME], found {described(value)}")
        return {}
    return {name: (key.place, key.value) for name, key in value.keys.items()}


def _all_of(names: Iterable[str]) -> str:
    return f"; known keys: {', '.join(sorted(names))}"


def _read_field(table: Table, field: Field[object], where: str, mistakes: Mistakes) -> object:
    value = table.get(field.name)
    if value is None:
        if field.required:
            mistakes.add(table.place, f"missing key '{field.name}' in {where}: {field.help}")
        return None
    try:
        return field.shape.decode(value)
    except BoardError as error:
        mistakes.extend(
            Mistake(place=one.place, message=f"{field.name}: {one.message}")
            for one in error.mistakes
        )
        return None
