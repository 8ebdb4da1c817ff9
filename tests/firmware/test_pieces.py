"""Text that knows where it was written."""

import pytest

from bitweight.firmware.files import SourceFile
from bitweight.firmware.outlines import Outline
from bitweight.firmware.pieces import Pieces
from bitweight.firmware.tokens import Kind, Token, Use, tokens_of
from bitweight.places import Place

FILE = SourceFile("a.c", "one /* c */\ntwo -3")
OUTLINE = Outline(FILE)


def test_copied_text_keeps_its_places() -> None:
    """Runs that follow each other are one, and each character has its own place."""
    pieces = Pieces(1000)
    pieces.copy(OUTLINE, 0, 4)
    pieces.copy(OUTLINE, 4, 12, blank=True)
    pieces.copy(OUTLINE, 12, len(FILE.text))
    assert pieces.text() == "one        \ntwo -3"
    assert pieces.origin(13).place == Place("a.c", 2, 2)
    assert pieces.origin(13).use == Place("a.c", 2, 2)


def test_tokens_that_would_join_are_kept_apart() -> None:
    """A space is put between tokens only where it is needed or was written."""
    pieces = Pieces(1000)
    pieces.copy(OUTLINE, 16, 17)
    pieces.expansion([*tokens_of(OUTLINE, 16, 18), *tokens_of(OUTLINE, 0, 3)])
    pieces.copy(OUTLINE, 12, 15)
    assert pieces.text() == "- -3 one two"


def test_an_expansion_spans_its_tokens() -> None:
    """Marks become ranges; one that never closes ends with the text."""
    pieces = Pieces(1000)
    use = Use("M", FILE, 12, None)
    number = Token(Kind.NUMBER, "3", FILE, 17, True, use)
    pieces.expansion(
        [
            Token(Kind.OPEN, "M", FILE, 0),
            Token(Kind.OPEN, "E", FILE, 1),
            Token(Kind.CLOSE, "E", FILE, 1),
            number,
            Token(Kind.OPEN, "U", FILE, 2),
            number,
            Token(Kind.CLOSE, "M", FILE, 0),
        ]
    )
    assert pieces.text() == "3 3"
    assert sorted(pieces.expansions) == [(0, 0, 3), (1, 0, 0), (2, 2, 3)]
    assert pieces.origin(2) == (Place("a.c", 2, 6), "M", Place("a.c", 2, 1), ("M",))


def test_empty_text_has_no_origin() -> None:
    """There is no offset to ask for."""
    with pytest.raises(IndexError):
        Pieces(1000).origin(0)
