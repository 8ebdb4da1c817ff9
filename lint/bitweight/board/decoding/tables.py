"""One TOML table read by a list of its fields; mistakes are collected, never raised one by one.

The same fields make the published schema, so what is read and what is published cannot differ.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from difflib import get_close_matches
from types import MappingProxyType
from typing import Generic, Protocol, TypeVar, cast, runtime_checkable

from bitweight.documents import Array, Exact, Key, Scalar, Table, Value
from bitweight.errors import BoardError, Mistake
from bitweight.places import Place

Schema = dict[str, object]
"""A fragment of JSON schema."""

_LONGEST_MESSAGE = 400
_LONGEST_NAME = 60
"""Characters of one message and of one name in it: what a line can carry."""

_NEAR = 0.65
"""Likeness of two names (`difflib`) from which one is taken for a slip of the other."""

T = TypeVar("T")
T_co = TypeVar("T_co", covariant=True)


class Shape(Protocol[T_co]):
    """What a value must look like."""

    def decode(self, value: Value) -> T_co:
        """The value as a fact. Raises `BoardError` with what was expected and found."""

    def schema(self) -> Schema:
        """The shape as JSON schema."""


@runtime_checkable
class Nested(Protocol):
    """A shape that holds tables: what is right in it is read although something is wrong."""

    def read(self, value: Value, mistakes: "Mistakes", path: str) -> object:
        """The value as a fact, its mistakes noted; `path` stands before those of its values."""


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
    """The fields of one table that could be read. `where` names the table in sentences.

    `meant` are the keys that unknown ones are probably slips of; `sound` is whether all is right.
    """

    table: Table
    where: str
    values: Mapping[str, object]
    meant: frozenset[str] = frozenset()
    sound: bool = True

    @property
    def is_table(self) -> bool:
        """Whether the file has a table here; what is none has no missing keys."""
        return bool(self.values)

    def get(self, field: Field[T]) -> T | None:
        """The value of a field; None when it is not given or was wrong."""
        return cast("T | None", self.values.get(field.name))

    def given(self, field: Field[T]) -> bool:
        """Whether the file has the key, right or wrong, misspelled ones included."""
        return field.name in self.table.keys or field.name in self.meant

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
        case Array(items=items):
            return f"a list of {len(items)}" if items else "an empty list"
        case Scalar(value=bool() as flag):
            return "true" if flag else "false"
        case Scalar(value=str() as text):
            return f'the text "{shortened(text)}"'
        case Scalar(value=int() as number):
            return f"the number {shortened(str(number)) if number.bit_length() < 200 else '...'}"
        case Scalar(value=Exact() as number):
            return f"the number {shortened(number.written)}"
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
    close = near(name, known)
    return f", did you mean '{close}'?" if close is not None else ""


def near(name: str, known: Iterable[str]) -> str | None:
    """The known name that another one is probably a slip of."""
    close = get_close_matches(name[:_LONGEST_NAME], list(known), n=1, cutoff=_NEAR)
    return close[0] if close else None


def read_table(
    value: Value,
    fields: tuple[Field[object], ...],
    where: str,
    mistakes: Mistakes,
    path: str = "",
) -> Decoded:
    """The fields of a table. Unknown and missing keys and wrong values become mistakes.

    `path` stands before the names of its keys where a value is wrong: "firmware: ".
    """
    if not isinstance(value, Table):
        mistakes.add(value.place, f"expected a table for {where}, found {described(value)}")
        return Decoded(Table(keys=MappingProxyType({}), place=value.place), where, {}, sound=False)
    own = Mistakes()
    meant = _check_keys(value, {one.name for one in fields}, where, own)
    for one in fields:
        if one.required and one.name not in value.keys and one.name not in meant:
            own.add(value.place, f"missing key '{one.name}' in {where}: {one.help}")
    values = {one.name: _read_field(value, one, own, path) for one in fields}
    mistakes.extend(own.found.values())
    return Decoded(value, where, values, meant, sound=not own.found)


def _check_keys(table: Table, names: set[str], where: str, mistakes: Mistakes) -> frozenset[str]:
    """Note the unknown keys of a table; the known ones that they are slips of."""
    meant = set()
    for key in table.keys.values():
        if key.name in names:
            continue
        close = near(key.name, names)
        hint = nearest(key.name, names) or _all_of(names)
        mistakes.add(key.place, f"unknown key '{shortened(key.name)}' in {where}{hint}")
        if close is not None:
            meant.add(close)
    return frozenset(meant)


NAMELESS = "NAME"
"""The name under which a table that lacks one is read on."""


def read_all(
    value: Value | None, what: str, mistakes: Mistakes
) -> Mapping[str, tuple[Place, Value]]:
    """The entries under one key, as in [constants]. Each with the place of its name."""
    if value is None:
        return {}
    if not isinstance(value, Table):
        mistakes.add(value.place, f"expected tables [{what}.NAME], found {described(value)}")
        return {}
    return {name: (key.place, key.value) for name, key in value.keys.items()}


def read_named(
    value: Value | None, fields: tuple[Field[object], ...], what: str, mistakes: Mistakes
) -> Mapping[str, tuple[Place, Value]]:
    """The named tables under one key: `[converter.NAME]`. Each with the place of its name.

    Keys that stand where names belong are one mistake, and read as those of a single table.
    """
    if value is not None and not isinstance(value, Table):
        return {NAMELESS: (value.place, value)}
    entries = {}
    for name, (place, inner) in read_all(value, what, mistakes).items():
        if name.strip():
            entries[name] = place, inner
        else:
            mistakes.add(place, f"expected a name in [{what}.NAME], found an empty one")
    names = {one.name for one in fields}
    loose = {name: entry for name, entry in entries.items() if not isinstance(entry[1], Table)}
    for name, (_, inner) in loose.items():
        if name not in names:
            where = f"[{what}.{shortened(name)}]"
            mistakes.add(inner.place, f"expected a table {where}, found {described(inner)}")
    own = {name: place for name, (place, _) in loose.items() if name in names}
    if own:
        mistakes.add(min(own.values()), f"a {what} needs a name: write [{what}.NAME]")
        return _nameless(entries, names)
    return {name: entry for name, entry in entries.items() if name not in loose}


def _nameless(
    entries: Mapping[str, tuple[Place, Value]], names: set[str]
) -> Mapping[str, tuple[Place, Value]]:
    """The tables that have a name, and the loose keys as one more."""
    keys = {
        name: Key(name=name, place=place, value=inner)
        for name, (place, inner) in entries.items()
        if name in names
    }
    place = min(key.place for key in keys.values())
    table = Table(keys=MappingProxyType(keys), place=place)
    named = {
        name: entry
        for name, entry in entries.items()
        if name not in keys and isinstance(entry[1], Table)
    }
    return {**named, NAMELESS: (place, table)}


def _all_of(names: Iterable[str]) -> str:
    return f"; known keys: {', '.join(sorted(names))}"


def _read_field(table: Table, field: Field[object], mistakes: Mistakes, path: str) -> object:
    value = table.get(field.name)
    if value is None:
        return None
    path = f"{path}{field.name}: "
    if isinstance(field.shape, Nested):
        return field.shape.read(value, mistakes, path)
    try:
        return field.shape.decode(value)
    except BoardError as error:
        mistakes.extend(
            Mistake(place=one.place, message=f"{path}{one.message}") for one in error.mistakes
        )
        return None
