"""Preprocessing tokens that remember where they are spelled, and how they are cut from text.

The logical text of an outline enters; tokens carry the file and the offset in the text as read.
"""

import re
from collections.abc import Iterable, Iterator
from enum import Enum
from typing import NamedTuple

from bitweight.firmware.files import SourceFile
from bitweight.firmware.outlines import Outline
from bitweight.places import Place


class Kind(Enum):
    """The preprocessing-token kinds of C11 6.4, and the marks that macro expansion leaves."""

    NAME = "name"
    NUMBER = "number"
    STRING = "string"
    CHARACTER = "character"
    PUNCTUATOR = "punctuator"
    EMPTY = "placemarker"
    LEAVE = "macro may expand again"
    OPEN = "expansion begins"
    CLOSE = "expansion ends"


MARKS = frozenset((Kind.OPEN, Kind.CLOSE, Kind.LEAVE))
NAME = r"(?:[^\W\d]|\$)[\w$]*+"
NUMBER = r"\.?[0-9](?:[eEpP][+-]|[\w.])*"
STRING = r'"[^"\\\n]*+(?:\\.[^"\\\n]*+)*"?'
CHARACTER = r"'[^'\\\n]*+(?:\\.[^'\\\n]*+)*'?"
WORDS = re.compile(rf"({NAME})|{NUMBER}|{STRING}|{CHARACTER}")
"""Identifiers (the group), and what else is spelled with letters."""
_PUNCTUATOR = (
    r"\.\.\.|<<=|>>=|->|\+\+|--|<<|>>|<=|>=|==|!=|&&|\|\||[-+*/%&|^]=|\#\#|::|[^\w\s]|[^\s]"
)
_TOKEN = re.compile(
    rf"(\s++)|((?:u8|[uUL])?{STRING})|((?:u8|[uUL])?{CHARACTER})|({NAME})|({NUMBER})|({_PUNCTUATOR})"
)
_KINDS = (
    Kind.EMPTY,
    Kind.EMPTY,
    Kind.STRING,
    Kind.CHARACTER,
    Kind.NAME,
    Kind.NUMBER,
    Kind.PUNCTUATOR,
)
_SPACE = 1


class Use(NamedTuple):
    """One macro use: the name as it is spelled, and the use in whose expansion it is spelled."""

    macro: str
    file: SourceFile
    offset: int
    within: "Use | None"


class Token(NamedTuple):
    """A preprocessing token.

    `offset` counts characters of `file.text`. `spaced` says whether white space stands before it.
    `use` is the macro use that brought it, None in ordinary text. A `painted` name is never
    expanded (C11 6.10.3.4). An `exact` token is spelled at its place as its text says; pasted,
    stringized and built-in ones are not. Marks carry the number of their expansion in `offset`.
    """

    kind: Kind
    text: str
    file: SourceFile
    offset: int
    spaced: bool = False
    use: Use | None = None
    painted: bool = False
    exact: bool = True

    @property
    def place(self) -> Place:
        """Where the token is spelled."""
        return self.file.place(self.offset)


class Origin(NamedTuple):
    """Where a token of expanded text comes from.

    `place` is where it is spelled. `macro` is the macro in whose replacement list that is, None for
    ordinary text (an argument written there stays ordinary text). `use` is the outermost macro use
    that brought it, or `place`. `names` are the macros it came through, innermost first.
    """

    place: Place
    macro: str | None
    use: Place
    names: tuple[str, ...]


def tokens_of(outline: Outline, start: int, end: int) -> Iterator[Token]:
    """The tokens of a stretch of logical text."""
    position = start
    while True:
        token, position = next_token(outline, position, end)
        if token is None:
            return
        yield token


def next_token(outline: Outline, position: int, end: int) -> tuple[Token | None, int]:
    """The first token at or after a logical offset, and the offset behind it; None at `end`."""
    spaced = False
    while match := _TOKEN.match(outline.logical, position, end):
        group = match.lastindex or 0
        if group != _SPACE:
            offset = outline.source(match.start())
            return Token(_KINDS[group], match[0], outline.file, offset, spaced), match.end()
        position = match.end()
        spaced = True
    return None, end


def kind_of(text: str) -> Kind | None:
    """The kind of the one token that `text` spells, None if it spells none or several."""
    match = _TOKEN.fullmatch(text)
    return None if match is None or match.lastindex == _SPACE else _KINDS[match.lastindex or 0]


def spelled(tokens: Iterable[Token]) -> str:
    """Tokens as text, one space where white space stands between them."""
    return "".join([" " + token.text if token.spaced else token.text for token in tokens]).strip()


def _gluing() -> frozenset[str]:
    letters = [chr(code) for code in range(128) if chr(code).isalnum()] + ["_", "$"]
    operators = "+-*/%&|^!=<>#:."
    pairs = {left + right for left in letters for right in letters}
    pairs |= {left + right for left in operators for right in operators}
    pairs |= {left + right for left in "eEpP" for right in "+-"}
    pairs |= {left + right for left in "LuU8" for right in "\"'"}
    return frozenset(pairs | {digit + "." for digit in "0123456789"} | {"." + c for c in letters})


_GLUING = _gluing()


def glues(left: str, right: str) -> bool:
    """Whether two characters, one token's last and the next one's first, need a space between."""
    pair = left + right
    return pair in _GLUING or not pair.isascii()
