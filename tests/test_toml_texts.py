"""TOML texts on one line and with short numbers: what changes, and what stays where it is."""

import pytest

from bitweight.documents import parse_document
from bitweight.errors import BoardError
from bitweight.toml_texts import DEPTH, on_one_line, with_short_numbers

ENDLESS = "9" * 5000


def test_an_inline_table_loses_its_line_ends() -> None:
    """Line ends, comments and the last comma become blanks; no character moves."""
    text = "a = {\n  b = 1, # c\n}\n"
    flat = on_one_line(text, "b")
    assert flat.split() == ["a", "=", "{", "b", "=", "1", "}"]
    assert len(flat) == len(text)


def test_deep_brackets_are_refused() -> None:
    """The bracket that is one too many is named by its place."""
    with pytest.raises(BoardError, match=f"b:1:{DEPTH + 1}: error: nested more than {DEPTH} deep"):
        on_one_line("[" * (DEPTH + 1), "b")


def test_an_endless_number_is_cut_and_the_rest_is_read() -> None:
    """Digits are replaced by blanks, so that all that follows keeps its place."""
    text = f"a = {ENDLESS} # c\nb = 2\n"
    assert len(with_short_numbers(text)) == len(text)
    table = parse_document(text, file="b")
    assert [(one.place.line, one.place.column) for one in table.keys.values()] == [(1, 1), (2, 1)]


@pytest.mark.parametrize("text", [f'a = "{ENDLESS}"', f"# {ENDLESS}", f"a = 1.{ENDLESS}", "a = 3"])
def test_what_is_no_endless_number_stays(text: str) -> None:
    """Texts, comments and decimals may be as long as they like."""
    assert with_short_numbers(text) == text
