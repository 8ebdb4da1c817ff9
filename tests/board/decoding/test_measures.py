"""Shapes of quantities and units."""

from fractions import Fraction

import pytest

from bitweight.board.decoding.measures import Ends, Measure, Points, Ratio, UnitWord
from bitweight.board.decoding.shapes import Sign
from bitweight.board.decoding.tables import Shape
from bitweight.documents import Value, parse_document
from bitweight.errors import BoardError
from bitweight.units import KELVIN, OHM, SECOND, VOLT

OHMS = Measure("4k7", (OHM,), Sign.POSITIVE)


def value(text: str) -> Value:
    """The value of a TOML text."""
    found = parse_document(f"v = {text}", file="b").get("v")
    assert found is not None
    return found


def test_a_measure_is_a_quantity_of_its_kind() -> None:
    """A text with unit becomes the exact quantity."""
    assert OHMS.decode(value("'R1 4k7 1%'")).value == 4700
    assert Measure("1 s").decode(value("'3 kPa'")).value == 3000


def test_a_ratio_is_plain_or_has_a_tolerance() -> None:
    """A gain may be a number or a text; beta may have its kelvins."""
    assert Ratio().decode(value("1.5")).value == Fraction(3, 2)
    assert Ratio().decode(value("'11 1%'")).half_width == Fraction(11, 100)
    beta = Ratio(Sign.POSITIVE, ((), KELVIN), "3950 K")
    assert beta.decode(value("3950")).value == beta.decode(value("'3950 K'")).value


def test_ends_are_low_and_high() -> None:
    """An interval gives both ends as quantities."""
    low, high = Ends("[...]").decode(value("['4 mA', '0.02 A']"))
    assert (low.value, high.value) == (Fraction(4, 1000), Fraction(20, 1000))


def test_units_are_plain_or_scaled() -> None:
    """A channel's unit is a word; the firmware's may have a number in front."""
    assert UnitWord().decode(value("'kPa'")).scale == 1000
    assert UnitWord(scaled=True).decode(value("'0.1 kPa'")).scale == 100


def test_points_are_pairs_in_order() -> None:
    """A curve is pairs of quantities of two kinds."""
    points = Points().decode(value("[['0 degC','27k'],['10 degC','18k']]"))
    assert [second.value for _, second in points] == [27000, 18000]


@pytest.mark.parametrize(
    ("shape", "text", "message"),
    [
        (OHMS, "3", 'expected a quantity in ohm, like "4k7", found the number 3'),
        (OHMS, "'3 V'", 'expected a quantity in ohm, like "4k7", found the text "3 V"'),
        (OHMS, "'x'", 'expected a quantity like "16 V" or "4k7", found "x"'),
        (OHMS, "'0 ohm'", 'expected a value above 0, found "0 ohm"'),
        (OHMS, "'1k ± 1k'", 'the tolerance reaches 0, found "1k ± 1k"'),
        (Measure("1 us", (SECOND, VOLT)), "'1 A'", "in s or V"),
        (Measure("1 V"), "3", "expected a quantity with its unit"),
        (Ratio(), "'3 V'", "found the text"),
        (Ratio(Sign.NOT_ZERO), "0", "other than 0"),
        (Ends("x"), "['0 V', '1 V 1%']", 'an end takes no tolerance, found "1 V 1%"'),
        (OHMS, "'-300 degC'", "expected a quantity in ohm"),
        (Measure("0 degC"), "'-273.16 degC'", "expected no less than -273.15 degC"),
        (Ends("x"), "['1 V']", "expected a low and a high end like x, found a list"),
        (Ends("x"), "['2 V', '1 V']", 'expected the low end first, found "2 V" before "1 V"'),
        (Ends("x"), "['1 V', '1 V']", "expected the low end first"),
        (Ends("x"), "['1 V', '2 A']", "the low end is in V, the high end in A"),
        (Ends("x", (VOLT,)), "['1 A', '2 A']", "in V"),
        (UnitWord(), "'k/'", "expected a unit like V"),
        (UnitWord(), "'0.1 kPa'", "expected a unit like V"),
        (UnitWord(scaled=True), "'0 V'", "expected a unit"),
        (Points(), "[['0 V','1 V']]", "at least two"),
        (Points(), "[['0 V'],['1 V','1 V']]", "expected a pair"),
        (Points(), "[['0 V','1 V'],['1 A','1 V']]", "the first quantities of the points"),
        (Points(), "[['0 V','1 V'],['1 V','1 A']]", "the second quantities of the points"),
        (Points(), "[['0 V','1 V'],['0 V','2 V']]", "to rise, or to fall"),
    ],
)
def test_a_wrong_measure_says_what_was_expected(
    shape: Shape[object], text: str, message: str
) -> None:
    """Each refusal names what was expected and what was found."""
    with pytest.raises(BoardError) as caught:
        shape.decode(value(text))
    assert message in str(caught.value)
