"""TOML files as a tree in which every key and value knows its place.

Text enters; a `Table` of keys leaves, or `BoardError` with what is not TOML and where. Values
come from one reader (tomli), places from a syntax tree of the same text (tree-sitter). A value
whose place is not found stands at the key that holds it.
"""

import re
import stat
from bisect import bisect_right
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import date, time
from decimal import Decimal
from itertools import accumulate
from pathlib import Path
from types import MappingProxyType

import tomli
import tree_sitter_toml
from tree_sitter import Language, Node, Parser

from bitweight.errors import BoardError, Mistake, SourceError
from bitweight.places import LineIndex, Place
from bitweight.toml_texts import DEPTH, on_one_line, with_short_numbers

FILE_BYTES = 1 << 20
"""Largest TOML file read; a board of a hundred channels takes about 50 KB."""

KeyPath = tuple[str | int, ...]
"""Names of keys and positions in arrays, from the root."""

ScalarValue = str | int | bool | Decimal | date | time
"""A value without parts; numbers with a point are `Exact` decimals."""


class Exact(Decimal):
    """A number with a point or exponent, and how it is written."""

    written: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Scalar:
    """A text, number, truth value or date."""

    value: ScalarValue
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Array:
    """Values in order; also the tables of an array of tables."""

    items: "tuple[Value, ...]"
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """Keys by name, in the order of the file. `place` is its header or opening bracket."""

    keys: "Mapping[str, Key]"
    place: Place

    def get(self, name: str) -> "Value | None":
        """The value of a key, or None when it is not given."""
        key = self.keys.get(name)
        return key.value if key is not None else None


Value = Scalar | Array | Table


@dataclass(frozen=True, slots=True, kw_only=True)
class Key:
    """A key as it stands in the file, with its value."""

    name: str
    place: Place
    value: Value


def read_document(path: Path, *, shown: str) -> Table:
    """The tree of a TOML file, named `shown` in places.

    Raises `SourceError` when it cannot be read and `BoardError` when it is not TOML.
    """
    return parse_document(_decoded(_bytes_of(path, shown), shown), file=shown)


def parse_document(text: str, *, file: str) -> Table:
    """The tree of a TOML text. Raises `BoardError` with one mistake when it is not TOML."""
    plain = with_short_numbers(text.removeprefix("\ufeff").replace("\r\n", "\n"))
    flat = on_one_line(plain, file)
    places = _Places(flat, plain, file)
    try:
        data = tomli.loads(plain, parse_float=_exact)
    except tomli.TOMLDecodeError as error:
        raise BoardError((_not_toml(error, places, plain),)) from None
    except (ValueError, RecursionError):
        raise _mistake(Place(file), "a number or a nesting here is too large to be read") from None
    keys, values = places.found()
    return _Builder(keys, values, file).table(data, ())


def replaced(table: Table, changes: Mapping[str, Key]) -> Table:
    """The table with keys added or put in place of those of the same name."""
    return Table(keys=MappingProxyType({**table.keys, **changes}), place=table.place)


def merged(base: Table, over: Table) -> Table:
    """Two tables merged key by key; what is no table on both sides is taken from `over`."""
    changes: dict[str, Key] = {}
    for name, key in over.keys.items():
        old = base.get(name)
        if isinstance(old, Table) and isinstance(key.value, Table):
            key = Key(name=name, place=key.place, value=merged(old, key.value))
        changes[name] = key
    return replaced(base, changes)


def _bytes_of(path: Path, shown: str) -> bytes:
    try:
        if not stat.S_ISREG(path.stat().st_mode):
            raise SourceError(path=shown, message="not a regular file")
        with path.open("rb") as stream:
            content = stream.read(FILE_BYTES + 1)
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) and error.strerror else "no such name"
        raise SourceError(path=shown, message=f"cannot be read: {reason}") from None
    if len(content) > FILE_BYTES:
        raise SourceError(path=shown, message="is larger than 1 MiB, too large for a board file")
    return content


def _decoded(content: bytes, file: str) -> str:
    try:
        return content.decode("utf-8")
    except UnicodeDecodeError as error:
        before = content[: error.start].decode("utf-8")
        place = LineIndex(before).place(file, len(before))
        raise _mistake(place, "expected UTF-8 text, found a byte that is not") from None


def _mistake(place: Place, message: str) -> BoardError:
    return BoardError((Mistake(place=place, message=message),))


def _exact(text: str) -> Decimal:
    """A number with a point or exponent, exactly; kept as a decimal, so 1e999999 costs nothing."""
    number = Exact(text.replace("_", ""))
    number.written = text
    return number


# What follows finds the places.


@dataclass(frozen=True, slots=True)
class _Mention:
    """A key or array item as it is spelled. `gives`: what defines the path, "pair" or "table"."""

    path: KeyPath
    key: Place
    value: Place
    gives: str = ""


class _Places:
    """Where the keys and values of one text stand, by their path."""

    def __init__(self, flat: str, plain: str, file: str) -> None:
        self._raw = flat.encode("utf-8", "surrogatepass")
        self._lines = LineIndex(plain)
        self._file = file
        self._starts = None if flat.isascii() else _byte_starts(flat)

    def found(self) -> tuple[dict[KeyPath, Place], dict[KeyPath, Place]]:
        """The first place of every key, and of every value."""
        keys: dict[KeyPath, Place] = {}
        values: dict[KeyPath, Place] = {}
        for mention in self._mentions():
            if mention.gives or mention.path not in keys:
                keys[mention.path] = mention.key
                values[mention.path] = mention.value
        return keys, values

    def duplicate(self) -> tuple[Place, Place] | None:
        """The first key or table given twice: where it stands and where it stood before."""
        first: dict[tuple[KeyPath, str], Place] = {}
        for mention in self._mentions():
            if not mention.gives:
                continue
            given = (mention.path, mention.gives)
            if given in first:
                return mention.key, first[given]
            first[given] = mention.key
        return None

    def key_before(self, place: Place) -> Place:
        """The key that gives what ends at a place; the place itself where there is none."""
        keys = [mention.key for mention in self._mentions() if mention.key <= place]
        return max(keys, default=place)

    def at(self, line: int, column: int) -> Place:
        """A place by line and column."""
        return Place(self._file, line, column)

    def _mentions(self) -> Iterator[_Mention]:
        """Every path that the text spells, in order."""
        root = Parser(Language(tree_sitter_toml.language())).parse(self._raw).root_node
        counts: dict[KeyPath, int] = {}
        for node in root.named_children:
            if node.type in ("table", "table_array_element"):
                path: KeyPath = ()
                for mention in self._header(node, counts):
                    path = mention.path
                    yield mention
                yield from self._pairs(node.named_children[1:], path)
            else:
                yield from self._pairs([node], ())

    def _header(self, node: Node, counts: dict[KeyPath, int]) -> Iterator[_Mention]:
        """The keys of a header; a name that is an array of tables means its latest element."""
        opening = self._of(node)
        path: KeyPath = ()
        names = list(self._names(node.named_children[0]))
        for position, (name, key) in enumerate(names, start=1):
            path = (*path, name)
            last = position == len(names)
            if last and node.type == "table_array_element":
                counts[path] = counts.get(path, -1) + 1
                yield _Mention(path, key, opening)
                yield _Mention((*path, counts[path]), key, opening)
            elif path in counts:
                path = (*path, counts[path])
                yield _Mention(path, key, opening if last else key)
            else:
                yield _Mention(path, key, opening if last else key, "table" if last else "")

    def _pairs(self, nodes: Sequence[Node], prefix: KeyPath) -> Iterator[_Mention]:
        """Pairs and everything inside their values, without recursion."""
        pending = [(node, prefix) for node in reversed(nodes) if node.type != "comment"]
        while pending:
            node, path = pending.pop()
            children = [child for child in node.named_children if child.type != "comment"]
            if node.type == "pair" and len(children) == 2:
                *_, last = mentions = list(self._pair(children[0], path, children[1]))
                yield from mentions
                pending.append((children[1], last.path))
            elif node.type == "inline_table":
                pending.extend((child, path) for child in reversed(children))
            elif node.type == "array":
                for index, item in enumerate(children):
                    yield _Mention((*path, index), self._of(item), self._of(item))
                    pending.append((item, (*path, index)))

    def _pair(self, keys: Node, prefix: KeyPath, value: Node) -> Iterator[_Mention]:
        """The names of a pair's key; the last one stands for the value."""
        names = list(self._names(keys))
        for name, place in names[:-1]:
            prefix = (*prefix, name)
            yield _Mention(prefix, place, place)
        name, place = names[-1]
        yield _Mention((*prefix, name), place, self._of(value), "pair")

    def _names(self, node: Node) -> Iterator[tuple[str, Place]]:
        """The names of a key, dotted or not, each with its place."""
        pending = [node]
        while pending:
            key = pending.pop()
            if key.type == "dotted_key":
                pending.extend(reversed(key.named_children))
            else:
                yield self._name(key), self._of(key)

    def _name(self, node: Node) -> str:
        text = self._raw[node.start_byte : node.end_byte].decode("utf-8", "replace")
        if node.type != "quoted_key":
            return text
        try:
            return str(tomli.loads(f"k = {text}")["k"])
        except (tomli.TOMLDecodeError, KeyError):
            return text

    def _of(self, node: Node) -> Place:
        offset = node.start_byte
        if self._starts is not None:
            offset = bisect_right(self._starts, offset) - 1
        return self._lines.place(self._file, offset)


def _byte_starts(text: str) -> list[int]:
    """The byte at which each character starts."""
    return list(accumulate((len(c.encode("utf-8", "surrogatepass")) for c in text), initial=0))


@dataclass(frozen=True, slots=True)
class _Builder:
    """Joins values and places to one tree."""

    keys: Mapping[KeyPath, Place]
    values: Mapping[KeyPath, Place]
    file: str

    def table(self, data: Mapping[str, object], path: KeyPath) -> Table:
        if len(path) > DEPTH:
            raise _mistake(self.place(path), f"nested more than {DEPTH} deep")
        keys = {name: self.key(name, value, (*path, name)) for name, value in data.items()}
        return Table(keys=MappingProxyType(keys), place=self.place(path))

    def key(self, name: str, value: object, path: KeyPath) -> Key:
        place = self.keys.get(path) or self.place(path[:-1])
        return Key(name=name, place=place, value=self.value(value, path))

    def value(self, value: object, path: KeyPath) -> Value:
        match value:
            case dict():
                return self.table(value, path)
            case list():
                items = tuple(self.value(item, (*path, i)) for i, item in enumerate(value))
                return Array(items=items, place=self.place(path))
            case str() | int() | Decimal() | date() | time():
                return Scalar(value=value, place=self.place(path))
            case _:
                raise _mistake(self.place(path), "a value of a kind that TOML does not have")

    def place(self, path: KeyPath) -> Place:
        """The place of a value, or the nearest known around it."""
        while path:
            found = self.values.get(path) or self.keys.get(path)
            if found is not None:
                return found
            path = path[:-1]
        return Place(self.file)


_EXPECTED = {
    "Invalid value": 'expected a value: text in quotes, a number, true, false, "[" or "{"',
    "Invalid statement": "expected a key, a table in brackets or a comment",
    "Invalid initial character for a key part": "expected a key",
    "Expected '=' after a key in a key/value pair": 'expected "=" after the key',
    "Expected newline or end of document after a statement": "expected the end of the line",
    "Unclosed array": 'expected "," or "]"',
    "Unclosed inline table": 'expected "," or "}"',
    "Unterminated string": "expected a closing quote",
    "Illegal character '\\n'": "expected a closing quote before the end of the line",
    "Expected ']' at the end of a table declaration": 'expected "]" after the name of the table',
    "Expected ']]' at the end of an array declaration": 'expected "]]" after the name of the table',
}
_TWICE = re.compile(r"overwrite|twice|[Dd]uplicate|immutable|already defined")


_DAY = re.compile(r"\d{4}-\d{2}-\d{2}")


def _not_toml(error: tomli.TOMLDecodeError, places: _Places, text: str) -> Mistake:
    """The reader's complaint in plain words, at the place it concerns."""
    if _TWICE.search(error.msg):
        twice = places.duplicate()
        if twice is not None:
            message = f"given twice; first on line {twice[1].line}"
            return Mistake(place=twice[0], message=message)
        place = places.key_before(places.at(error.lineno, error.colno))
        return Mistake(place=place, message="already given above as something else")
    place = places.at(error.lineno, error.colno)
    return Mistake(place=place, message=f"not TOML: {_complaint(error, text)}")


def _complaint(error: tomli.TOMLDecodeError, text: str) -> str:
    """What the reader expected; two complaints are told by the text where it stopped."""
    rest = text[error.pos :]
    day = _DAY.match(rest)
    if day is not None and "date" in error.msg:
        return f"there is no day {day.group()}"
    in_name = error.msg == "Invalid statement" or "key" in error.msg or "declaration" in error.msg
    if in_name and rest[:1].isalpha() and not rest[:1].isascii():
        return "put a name with other letters than a to z in quotes"
    return _EXPECTED.get(error.msg, error.msg[:1].lower() + error.msg[1:])
