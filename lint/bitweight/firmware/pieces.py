"""Expanded text in pieces, each of which knows where it was written.

The preprocessor puts pieces down in order; what is asked for afterwards is the text and, for each
of its offsets, the origin.
"""

import bisect
from collections.abc import Iterable, Sequence
from typing import NamedTuple

from bitweight.firmware.outlines import Outline
from bitweight.firmware.tokens import Kind, Origin, Token, Use, glues


class _Copied(NamedTuple):
    """A run of logical text."""

    outline: Outline
    start: int


class Expanded(NamedTuple):
    """One expansion in the text: its number, where it begins and ends."""

    number: int
    start: int
    end: int


class Pieces:
    """Text under construction, then its origins."""

    def __init__(self, most: int) -> None:
        """`most` is the length in characters from which on nothing more is expanded."""
        self._most = most
        self._texts: list[str] = []
        self._starts: list[int] = []
        self._origins: list[_Copied | Token] = []
        self._last = "\n"
        self._number = False
        """Whether the last piece is a number, which takes up a point behind it."""
        self._joins: tuple[Outline, int] | None = None
        self.length = 0
        self.expansions: list[Expanded] = []

    def text(self) -> str:
        """All that was put down."""
        return "".join(self._texts)

    def copy(self, outline: Outline, start: int, end: int, *, blank: bool = False) -> None:
        """A run of logical text as it stands, or with nothing but its line ends."""
        if start >= end:
            return
        piece = (outline.blank if blank else outline.logical)[start:end]
        if self._joins != (outline, start):
            self._separate(piece[0])
            self._begin(_Copied(outline, start))
        self._put(piece)
        self._joins = (outline, end)

    def line_end(self, outline: Outline, offset: int) -> None:
        """A line end that stands for blank text at a logical offset."""
        self._begin(_Copied(outline, offset))
        self._put("\n")

    def expansion(self, tokens: Iterable[Token]) -> None:
        """What one outermost macro use expands to."""
        opened: dict[int, int] = {}
        waiting: list[int] = []
        for token in tokens:
            if self.length > self._most:
                break
            if token.kind is Kind.OPEN:
                waiting.append(token.offset)
            elif token.kind is Kind.CLOSE:
                self._close(token.offset, opened, waiting)
            else:
                self._space(token)
                opened.update(dict.fromkeys(waiting, self.length))
                waiting.clear()
                self._begin(token)
                self._put(token.text)
                self._number = token.kind is Kind.NUMBER
        for number in [*opened, *waiting]:
            self._close(number, opened, waiting)

    def _close(self, number: int, opened: dict[int, int], waiting: list[int]) -> None:
        """Note the end of an expansion; one that is `waiting` for its first token is empty."""
        if number in opened:
            self.expansions.append(Expanded(number, opened.pop(number), self.length))
        elif number in waiting:
            waiting.remove(number)
            self.expansions.append(Expanded(number, self.length, self.length))

    def _space(self, token: Token) -> None:
        if token.spaced and not self._last.isspace():
            self._put(" ")
        else:
            self._separate(token.text[0])

    def _separate(self, first: str) -> None:
        if glues(self._last, first) or (self._number and first == "."):
            self._put(" ")

    def _begin(self, origin: _Copied | Token) -> None:
        self._starts.append(self.length)
        self._origins.append(origin)
        self._joins = None

    def _put(self, text: str) -> None:
        self._texts.append(text)
        self.length += len(text)
        self._last = text[-1]
        self._number = False

    def origin(self, offset: int) -> Origin:
        """Where the character at `offset` was written."""
        index = max(bisect.bisect_right(self._starts, offset) - 1, 0)
        if not self._starts:
            raise IndexError("the text is empty")
        piece, within = self._origins[index], offset - self._starts[index]
        if isinstance(piece, _Copied):
            place = piece.outline.file.place(piece.outline.source(piece.start + within))
            return Origin(place, None, place, ())
        shift = min(within, len(piece.text) - 1) if piece.exact else 0
        place = piece.file.place(piece.offset + shift)
        uses = _uses(piece.use)
        outermost = uses[-1].file.place(uses[-1].offset) if uses else place
        names = tuple(each.macro for each in uses)
        return Origin(place, names[0] if names else None, outermost, names)


def _uses(use: Use | None) -> Sequence[Use]:
    uses = []
    while use is not None:
        uses.append(use)
        use = use.within
    return uses
