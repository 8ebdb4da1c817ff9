"""Allowed errors: absolute, of the span, of the reading, and their sums."""

from fractions import Fraction

import pytest

from bitweight.board.decoding.allowed import AllowedShape, AllowedText, allowed_error
from bitweight.documents import parse_document
from bitweight.errors import BoardError
from bitweight.places import Place
from bitweight.units import parse_unit

HERE = Place("b", 1, 1)


def decode(text: str) -> AllowedText:
    """The allowed error of a TOML text."""
    value = parse_document(f"v = {text}", file="b").get("v")
    assert value is not None
    return AllowedShape().decode(value)


@pytest.mark.parametrize(
    ("text", "unit", "absolute", "of_span", "of_reading"),
    [
        ("50 mV", "V", "0.05", "0", "0"),
        ("50 mV", "mV", "50", "0", "0"),
        ("1 %", "V", "0", "0.01", "0"),
        ("1% of span", "V", "0", "0.01", "0"),
        ("0.5 % of reading + 20 mV", "V", "0.02", "0", "0.005"),
        ("0.5 % of reading + 0.1 % + 20 mV", "V", "0.02", "0.001", "0.005"),
        ("0.5 degC", "degC", "0.5", "0", "0"),
        ("0.5 K", "degC", "0.5", "0", "0"),
        ("0.1 pH", "pH", "0.1", "0", "0"),
        ("100 ppm", "V", "0", "0.0001", "0"),
        ("± 20 mV", "V", "0.02", "0", "0"),
        ("+-1 % of reading", "V", "0", "0", "0.01"),
    ],
)
def test_terms_add_up_in_the_channels_unit(
    text: str, unit: str, absolute: str, of_span: str, of_reading: str
) -> None:
    """A temperature error is a difference, not a temperature; percentages are of the span."""
    allowed = allowed_error(decode(f"'{text}'"), parse_unit(unit), HERE)
    assert (allowed.absolute, allowed.of_span, allowed.of_reading) == (
        Fraction(absolute),
        Fraction(of_span),
        Fraction(of_reading),
    )
    assert (allowed.text, allowed.place) == (text, HERE)


@pytest.mark.parametrize(
    "text",
    [
        "'a bit'",
        "'1 % of it'",
        "'-1 V'",
        "'+'",
        "3",
        "'1 V ± 1 %'",
        "'0 %'",
        "'0 V'",
        "'5V%'",
        "'1 %%'",
        "'100 %'",
        "'5000 % of reading'",
        "''",
    ],
)
def test_what_is_no_error_is_refused(text: str) -> None:
    """Each refusal says what was expected."""
    with pytest.raises(BoardError, match="expected"):
        decode(text)


def test_long_sums_are_refused() -> None:
    """A sum of dozens of terms is not what anybody means."""
    with pytest.raises(BoardError, match="expected an error like"):
        decode("'" + "1 V + " * 20 + "1 V'")


def test_another_kind_of_quantity_names_both() -> None:
    """Milliamperes allow no error in volts."""
    with pytest.raises(BoardError, match="is in mA but the channel's unit is V"):
        allowed_error(decode("'50 mA'"), parse_unit("V"), HERE)
