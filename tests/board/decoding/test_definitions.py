"""Macros of the board file: names with what they stand for."""

import jsonschema
import pytest

from bitweight.board.decoding.definitions import Definitions
from bitweight.documents import Value, parse_document
from bitweight.errors import BoardError


def value(text: str) -> Value:
    """The value of a TOML text."""
    found = parse_document(f"v = {text}", file="b").get("v")
    assert found is not None
    return found


def test_names_with_their_texts_in_order() -> None:
    """A number stands as its digits and true as 1; the published schema allows them."""
    made = Definitions().decode(value("{ A = 'x', B = 2, C = true, D = false }"))
    assert made == (("A", "x"), ("B", "2"), ("C", "1"), ("D", "0"))
    jsonschema.validate({"A": "x", "B": 2, "C": True}, Definitions().schema())


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("[]", "expected a table like"),
        ("{ '1' = 'x' }", "expected the name of a macro, found '1'"),
        ("{ A = [] }", "expected a text in quotes"),
        ("{ A = " + "9" * 30 + " }", "expected a number of at most 64 bits"),
    ],
)
def test_what_is_no_macro_is_refused(text: str, message: str) -> None:
    """Each refusal says what was expected."""
    with pytest.raises(BoardError) as caught:
        Definitions().decode(value(text))
    assert message in str(caught.value)
