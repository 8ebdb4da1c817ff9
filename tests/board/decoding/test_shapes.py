"""Shapes of plain values: what they read, what they refuse, what they publish."""

from datetime import date
from fractions import Fraction

import jsonschema
import pytest

from bitweight.board.decoding.shapes import (
    Choice,
    Counts,
    Day,
    Flag,
    Inner,
    Number,
    Numbers,
    Sign,
    Tables,
    Text,
    Texts,
    Whole,
    Width,
    one_of,
    table_schema,
    words,
)
from bitweight.board.decoding.tables import Decoded, Field, Shape
from bitweight.board.stages import Side
from bitweight.documents import Value, parse_document
from bitweight.errors import BoardError

INNER = Inner("x", (Field("n", Whole(0, 9), "a digit", required=True),))


def value(text: str) -> Value:
    """The value of a TOML text."""
    found = parse_document(f"v = {text}", file="b").get("v")
    assert found is not None
    return found


RIGHT: list[tuple[Shape[object], str, object, object]] = [
    (Text(), "'a'", "a", "a"),
    (Texts(), "'a'", ("a",), "a"),
    (Texts(), "['a', 'b']", ("a", "b"), ["a", "b"]),
    (Flag(), "true", True, True),
    (Whole(1, 32), "12", 12, 12),
    (Width((16, 32)), "16", 16, 16),
    (Number(), "1.25", Fraction(5, 4), 1.25),
    (Number(), "3", Fraction(3), 3),
    (Number(), "'1/3'", Fraction(1, 3), "1/3"),
    (words("a", "b"), "'b'", "b", "b"),
    (one_of(Side), "'top'", Side.TOP, "top"),
    (Choice({"x": 3}), "'x'", 3, "x"),
    (Counts(4096), "4096", (4096,), 4096),
    (Counts(4096), "[4096, 4095]", (4096, 4095), [4096, 4095]),
    (Numbers(1, 3), "[1, 2.5]", (Fraction(1), Fraction(5, 2)), [1, 2.5]),
    (Day(), "2027-06-30", date(2027, 6, 30), "2027-06-30"),
    (Day(), "'2027-06-30'", date(2027, 6, 30), "2027-06-30"),
]


@pytest.mark.parametrize(("shape", "text", "fact", "data"), RIGHT)
def test_a_right_value_becomes_a_fact_and_fits_its_schema(
    shape: Shape[object], text: str, fact: object, data: object
) -> None:
    """What the shape reads, its published schema allows."""
    assert shape.decode(value(text)) == fact
    jsonschema.validate(data, shape.schema())


@pytest.mark.parametrize(
    ("shape", "text", "message"),
    [
        (Text(), "3", "expected a text in quotes, found the number 3"),
        (Text(), "''", 'expected a text in quotes, found the text ""'),
        (Texts(), "{}", "expected a text or a list of texts, found a table"),
        (Texts(), "['a', 3]", "expected a text in quotes"),
        (Flag(), "'yes'", "expected true or false"),
        (Whole(1, 9), "true", "expected a whole number, found true"),
        (Whole(1, 9), "1.0", "expected a whole number, found the number 1.0"),
        (Whole(1, 9), "10", "expected a whole number from 1 to 9, found 10"),
        (Width((16, 32)), "24", "expected 16 or 32, found the number 24"),
        (Number(), "true", "expected a number like 3 or 0.5, found true"),
        (Number(), "nan", "expected a number like 3 or 0.5, found the number nan"),
        (Number(), "'x'", "expected a number like 3, 0.5 or 1/512"),
        (Number(), "1e400", "expected a number like 3 or 0.5"),
        (Number(Sign.POSITIVE), "0", "expected a number above 0, found the number 0"),
        (Number(Sign.NOT_NEGATIVE), "-1", "expected a number 0 or more, found the number -1"),
        (Number(Sign.NOT_ZERO), "0.0", "expected a number other than 0, found the number 0.0"),
        (one_of(Side), "'tip'", "did you mean 'top'?"),
        (one_of(Side), "3", 'expected one of "top", "bottom", found the number 3'),
        (Counts(9), "[]", "expected at least one count"),
        (Counts(9), "[0]", "from 1 to 9"),
        (Numbers(3, 4), "[1]", "expected a list of 3 to 4 numbers"),
        (Numbers(2, 2), "[1]", "expected a list of 2 numbers"),
        (Day(), "'30.6.2027'", "expected a date like 2027-06-30"),
        (Day(), "2027-06-30T10:00:00", "expected a date"),
        (Day(), "'2027-02-30'", "day"),
        (Day(), "'2027-02-30'", "there is no day 2027-02-30"),
        (Tables(INNER), "3", "expected a list"),
        (Tables(INNER), "[{}, { m = 1 }]", "missing key 'n' in x"),
        (INNER, "{ m = 1 }", "missing key 'n' in x"),
    ],
)
def test_a_wrong_value_says_what_was_expected(
    shape: Shape[object], text: str, message: str
) -> None:
    """Each refusal names what was expected and what was found."""
    with pytest.raises(BoardError) as caught:
        shape.decode(value(text))
    assert message in str(caught.value)


def test_all_items_of_a_list_are_checked() -> None:
    """Two wrong items are two mistakes, each at its item."""
    with pytest.raises(BoardError) as caught:
        Texts().decode(value("['a', 3, 'b', 4]"))
    assert [one.place.column for one in caught.value.mistakes] == [11, 19]


def test_an_inner_table_is_decoded_by_its_fields() -> None:
    """A table inside a table gives its own fields."""
    decoded = INNER.decode(value("{ n = 7 }"))
    assert isinstance(decoded, Decoded)
    assert decoded.get(Field("n", Whole(0, 9), "")) == 7


def test_a_table_schema_lists_its_keys() -> None:
    """Every field is a property with its help; required ones are required where asked."""
    schema = table_schema(INNER.fields)
    assert schema["required"] == ["n"]
    assert schema["additionalProperties"] is False
    assert "required" not in table_schema(INNER.fields, required=False)
