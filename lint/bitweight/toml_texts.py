"""TOML texts made readable for both readers, every character kept where it is."""

import re

from bitweight.errors import BoardError, Mistake
from bitweight.places import LineIndex

DEPTH = 32
"""Deepest nesting of tables and arrays; a chain's table needs six."""

_MOST_DIGITS = 400
"""Digits of a whole number that are read; every range of the board file ends far below."""

_ENDLESS = re.compile(rf"(?<![\w.])[1-9][0-9_]{{{_MOST_DIGITS},}}(?![\w.])")

_PIECE = re.compile(
    r"""(?P<comment>\#[^\n]*)
      | \"\"\"(?:\\.|(?!\"\"\").)*\"{3,5} | '''(?:(?!''').)*'{3,5}
      | "(?:\\.|[^"\\\n])*" | '[^'\n]*'
      | (?P<open>[\[{]) | (?P<close>[\]}]) | (?P<comma>,) | (?P<line>\n)
      | (?P<blank>[ \t]+) | (?P<other>[^\#"'\[\]{},\n\ \t]+|.)""",
    re.VERBOSE | re.DOTALL,
)


def on_one_line(text: str, file: str) -> str:
    """The text with inline tables written on one line, every character kept where it is.

    Newer TOML allows line ends, comments and a last comma inside inline tables; the syntax tree
    does not. Raises `BoardError` where brackets nest too deeply.
    """
    pieces: list[str] = []
    inside: list[str] = []
    comma: int | None = None
    for match in _PIECE.finditer(text):
        piece, kind = match.group(), match.lastgroup
        in_table = "{" in inside
        if kind == "open":
            inside.append(piece)
            if len(inside) > DEPTH:
                place = LineIndex(text).place(file, match.start())
                message = f"nested more than {DEPTH} deep"
                raise BoardError((Mistake(place=place, message=message),))
        elif kind == "close":
            if piece == "}" and in_table and comma is not None:
                pieces[comma] = " "
            if inside:
                inside.pop()
        elif in_table and kind in ("line", "comment"):
            piece = " " * len(piece)
        if kind not in ("line", "comment", "blank"):
            comma = len(pieces) if kind == "comma" else None
        pieces.append(piece)
    return "".join(pieces)


def with_short_numbers(text: str) -> str:
    """The text with endless whole numbers cut, every other character kept where it is.

    Python refuses to read them; what is left is still larger than any key accepts, so that the
    mistake is reported at its key and the others with it.
    """
    if not _ENDLESS.search(text):
        return text
    return "".join(
        _ENDLESS.sub(_cut, match.group()) if match.lastgroup == "other" else match.group()
        for match in _PIECE.finditer(text)
    )


def _cut(match: re.Match[str]) -> str:
    digits = match.group()
    kept = digits[:_MOST_DIGITS].rstrip("_")
    return kept.ljust(len(digits))
