"""Macro definitions, and which of them are in force where."""

import bisect
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import Protocol

from bitweight.firmware.files import SourceFile
from bitweight.firmware.outlines import Outline
from bitweight.firmware.tokens import NAME, Token, tokens_of
from bitweight.places import Place

VARIABLE_ARGUMENTS = "__VA_ARGS__"
_DEFINE = re.compile(rf"\#\s*define\s+({NAME})(\()?")
_PARAMETERS = re.compile(rf"\s*(?:(?:{NAME}\s*,\s*)*(?:{NAME}\s*(?:\.\.\.)?|\.\.\.))?\s*\)")


@dataclass(frozen=True, kw_only=True, eq=False)
class Macro:
    """A definition; `parameters` is None for an object-like macro.

    The parameter of `...` is `__VA_ARGS__`. A `builtin` macro has no body: its text depends on
    where it is used.
    """

    name: str
    parameters: tuple[str, ...] | None
    variadic: bool
    file: SourceFile
    builtin: bool = False
    outline: Outline = field(repr=False)
    span: tuple[int, int, int] = field(repr=False)
    """Logical offsets of the name and of the body's start and end."""

    @cached_property
    def body(self) -> tuple[Token, ...]:
        """The replacement list; every token knows where it is spelled."""
        return tuple(tokens_of(self.outline, *self.span[1:]))

    @cached_property
    def place(self) -> Place:
        """Where the definition names the macro."""
        return self.file.place(self.outline.source(self.span[0]))

    @cached_property
    def operates(self) -> bool:
        """Whether the body pastes, stringizes or has a variable part."""
        return any(token.text in ("#", "##", "__VA_OPT__") for token in self.body)

    @cached_property
    def positions(self) -> dict[str, int]:
        """The position of each parameter."""
        return {name: position for position, name in enumerate(self.parameters or ())}


def macro_defined(outline: Outline, start: int, end: int) -> Macro | None:
    """The macro that the `#define` from `start` to `end` defines; None if it is malformed."""
    match = _DEFINE.match(outline.logical, start, end)
    if match is None or match[1] == "defined":
        return None
    parameters: tuple[str, ...] | None = None
    variadic = False
    body = match.end()
    if match[2]:
        listed = _PARAMETERS.match(outline.logical, body, end)
        if listed is None:
            return None
        body = listed.end()
        parameters, variadic = _parameters(listed[0])
    return Macro(
        name=match[1],
        parameters=parameters,
        variadic=variadic,
        file=outline.file,
        outline=outline,
        span=(match.start(1), body, end),
    )


def _parameters(listed: str) -> tuple[tuple[str, ...], bool]:
    """Parameter names of a list up to its `)`, and whether the last takes all that is left."""
    names = [name.strip() for name in listed.rstrip(") \t\n\f\v").split(",")]
    variadic = names[-1].endswith("...")
    if variadic:
        names[-1] = names[-1].removesuffix("...").strip() or VARIABLE_ARGUMENTS
    return tuple(filter(None, names)), variadic


def builtin_macro(outline: Outline, name: str) -> Macro:
    """A macro whose text depends on where it is used."""
    return Macro(
        name=name,
        parameters=None,
        variadic=False,
        file=outline.file,
        builtin=True,
        outline=outline,
        span=(0, 0, 0),
    )


class Definitions(Protocol):
    """What macro expansion asks for: the definition of a name, if there is one."""

    def get(self, name: str, /) -> Macro | None:
        """The definition in force, None for a name that is no macro."""


class MacroTable:
    """Every definition of a unit with the offset of expanded text from which it is in force."""

    def __init__(self, changes: list[tuple[int, Mapping[str, Macro | None]]]) -> None:
        """`changes`, by offset, set names to a definition or (undefined) to None."""
        self._changes = changes
        self._history: dict[str, list[tuple[int, Macro | None]]] = {}

    def at(self, offset: int) -> "MacrosInForce":
        """The definitions in force at an offset of the expanded text."""
        return MacrosInForce(self, offset)

    def names(self) -> frozenset[str]:
        """Every name that is a macro somewhere."""
        return frozenset(name for _, change in self._changes for name in change)

    @cached_property
    def final(self) -> "MacroTable":
        """The definitions in force at the end of the unit, from the start."""
        last: dict[str, Macro | None] = {}
        for _, change in self._changes:
            last.update(change)
        return MacroTable([(0, last)])

    def history(self, name: str) -> list[tuple[int, Macro | None]]:
        """The definitions of one name, each from its offset on."""
        if name not in self._history:
            self._history[name] = [
                (offset, change[name]) for offset, change in self._changes if name in change
            ]
        return self._history[name]


class MacrosInForce:
    """The macros at one offset; iterating gives their names."""

    __slots__ = ("_offset", "_table")

    def __init__(self, table: MacroTable, offset: int) -> None:
        self._table = table
        self._offset = offset

    def get(self, name: str, /) -> Macro | None:
        """The definition of `name`, None if it is no macro here."""
        changes = self._table.history(name)
        index = bisect.bisect_right(changes, self._offset, key=lambda change: change[0])
        return changes[index - 1][1] if index else None

    def __iter__(self) -> Iterator[str]:
        return (name for name in sorted(self._table.names()) if self.get(name) is not None)

    def __contains__(self, name: object) -> bool:
        return isinstance(name, str) and self.get(name) is not None
