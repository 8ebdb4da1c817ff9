"""Where something stands. Offsets count from 0, lines and columns shown count from 1.

This is the only module that converts between the two. Columns count characters (code points).
"""

import bisect
import re
from dataclasses import dataclass

_LINE_END = re.compile(r"\r\n|\n|\r")


@dataclass(frozen=True, slots=True, order=True)
class Place:
    """A line and column of a file; `file` as shown to the user (relative, with `/`)."""

    file: str
    line: int = 1
    column: int = 1

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}"


class LineIndex:
    """Line starts of one text, so that an offset becomes a line and a column."""

    __slots__ = ("_starts",)

    def __init__(self, text: str) -> None:
        self._starts = [0, *(match.end() for match in _LINE_END.finditer(text))]

    def place(self, file: str, offset: int) -> Place:
        """The place of a character offset."""
        line = bisect.bisect_right(self._starts, offset)
        return Place(file, line, offset - self._starts[line - 1] + 1)

    def offset(self, line: int, column: int = 1) -> int:
        """The offset of a line and column; the inverse of `place`."""
        return self._starts[line - 1] + column - 1
