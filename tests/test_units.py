"""Units: words and prefixes, products, conversion."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.units import (
    AMPERE,
    FARAD,
    HENRY,
    HERTZ,
    OHM,
    SECOND,
    VOLT,
    WATT,
    Dimension,
    UnitError,
    coherent,
    inverse,
    known,
    parse_unit,
    product,
    takes_prefix,
)

# SI Brochure (BIPM, 9th edition), table 7: prefixes; table 4: derived units. From memory.
SCALES = [
    ("V", "1"),
    ("mV", "0.001"),
    ("uV", "0.000001"),
    ("µV", "0.000001"),
    ("μV", "0.000001"),
    ("kohm", "1000"),
    ("kΩ", "1000"),
    ("OHM", "1"),
    ("kohms", "1000"),
    ("Mohm", "1000000"),
    ("pF", "0.000000000001"),
    ("nF", "0.000000001"),
    ("bar", "100000"),
    ("mbar", "100"),
    ("hPa", "100"),
    ("cm", "0.01"),
    ("%", "0.01"),
    ("ppm", "0.000001"),
    ("mg/l", "0.001"),
    ("mV/degC", "0.001"),
    ("V/(mg/l)", "1000"),
    ("m/s^2", "1"),
    ("mm²", "0.000001"),
]


@pytest.mark.parametrize(("text", "scale"), SCALES)
def test_a_unit_is_worth_its_scale_in_coherent_units(text: str, scale: str) -> None:
    """Prefixes, products and quotients are exact."""
    assert parse_unit(text).scale == Fraction(scale)


@pytest.mark.parametrize("word", ["pH", "NTU", "rpm", "mmHg", "Ah", "mAh", "%RH", "kB"])
def test_any_other_word_is_a_unit_of_its_own(word: str) -> None:
    """A word that is not known takes no prefix apart."""
    unit = parse_unit(word)
    assert (unit.dimension, unit.scale) == (((word, 1),), 1)
    assert known(word) is None


@pytest.mark.parametrize(
    "text", ["/", "V/", "V//A", "(V", "V)", "1V", "V A", "", "V^", "€", "V/(A"]
)
def test_what_is_no_unit_is_refused_or_plain(text: str) -> None:
    """A malformed text is an error that gives an example; nothing at all is a plain number."""
    if not text:
        assert parse_unit(text).dimension == ()
        return
    with pytest.raises(UnitError, match="expected a unit like V, kPa or mV/degC"):
        parse_unit(text)


def test_deep_brackets_are_refused() -> None:
    """Nesting is bounded, and so is the length."""
    with pytest.raises(UnitError):
        parse_unit("(" * 30 + "V" + ")" * 30)
    with pytest.raises(UnitError, match="very long"):
        parse_unit("V*" * 100 + "V")


@pytest.mark.parametrize(
    ("left", "right"),
    [
        (product(VOLT, inverse(AMPERE)), OHM),
        (product(VOLT, AMPERE), WATT),
        (product(OHM, FARAD), SECOND),
        (product(HENRY, inverse(OHM)), SECOND),
        (inverse(SECOND), HERTZ),
    ],
)
def test_electrical_units_hang_together(left: Dimension, right: Dimension) -> None:
    """Ohm's law, power and time constants relate the units (SI Brochure table 4, from memory)."""
    assert left == right


def test_conversion_gives_the_factor() -> None:
    """A factor converts numbers of one unit to the other."""
    assert parse_unit("kPa").convert_to(parse_unit("bar")) == Fraction(1, 100)


def test_conversion_between_kinds_names_both() -> None:
    """Volts do not become pascals, and the error says so."""
    with pytest.raises(UnitError, match="V does not convert to kPa"):
        parse_unit("V").convert_to(parse_unit("kPa"))


def test_celsius_and_kelvin_convert_with_their_offset() -> None:
    """0 K is -273.15 degC as a temperature, and 1 K is 1 degC as a step (SI Brochure 2.3.1)."""
    kelvin, celsius = parse_unit("K"), parse_unit("degC")
    assert kelvin.offset_to(celsius) == Fraction("-273.15")
    assert kelvin.convert_to(celsius) == 1
    assert parse_unit("mV/degC").convert_to(parse_unit("mV/K")) == 1


def test_what_stands_under_the_bar_is_kept() -> None:
    """A sensitivity knows what it is per."""
    assert parse_unit("mV/degC").below == (("K", 1),)
    assert parse_unit("ohm").below == ()


def test_a_dimension_is_named_by_a_known_unit() -> None:
    """Coherent units have their usual names, others are spelled out."""
    assert coherent(OHM).text == "ohm"
    assert coherent(product(VOLT, inverse((("K", 1),)))).text == "V/K"
    assert coherent(()).text == ""
    assert coherent(HERTZ).text == "Hz"


def test_only_plain_known_units_take_a_prefix() -> None:
    """V can be shown as mV; mV, pH, LSB and degC are shown as they are."""
    shown = {word: takes_prefix(parse_unit(word)) for word in ("V", "mV", "pH", "LSB", "degC")}
    assert shown == {"V": True, "mV": False, "pH": False, "LSB": False, "degC": False}


DIMENSIONS = st.dictionaries(st.sampled_from("VAsKm"), st.integers(-3, 3)).map(
    lambda powers: product(tuple(powers.items()))
)


@given(DIMENSIONS, DIMENSIONS)
def test_products_commute_and_inverses_cancel(one: Dimension, two: Dimension) -> None:
    """Dimensions multiply like exponents add."""
    assert product(one, two) == product(two, one)
    assert product(one, inverse(one)) == ()
