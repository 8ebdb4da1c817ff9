"""Escapes, figures, counts."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.report.texts import (
    closing,
    figure,
    figures,
    number,
    plural,
    shown,
    wrapped,
    wrapped_formula,
)

ESCAPES = {
    "plain": ("src/adc.c", "src/adc.c"),
    "spaces": ("my file.c", "my file.c"),
    "accents": ("Füllstand µΩ", "Füllstand µΩ"),
    "escape": ("a\x1b[31mb", "a\\x1b[31mb"),
    "newline": ("a\nb\r\tc", "a\\nb\\r\\tc"),
    "nul": ("a\0b", "a\\x00b"),
    "c1 control": ("a\x9bb", "a\\x9bb"),
    "right-to-left override": ("adc\u202ec.h", "adc\\u202ec.h"),
    "isolate": ("\u2066x\u2069", "\\u2066x\\u2069"),
    "line separator": ("a\u2028b", "a\\u2028b"),
    "zero width": ("a\u200bb", "a\\u200bb"),
    "byte that is no UTF-8": ("caf\udce9.c", "caf\\xe9.c"),
    "language tag": ("a\U000e0041b", "a\\U000e0041b"),
    "markup": ("[red]x[/red]", "[red]x[/red]"),
}


@pytest.mark.parametrize(("text", "expected"), ESCAPES.values(), ids=ESCAPES.keys())
def test_shown(text: str, expected: str) -> None:
    """What could move, hide or reorder its surroundings is escaped, all else stands as it is."""
    assert shown(text) == expected


@given(st.text())
def test_shown_is_one_printable_line(text: str) -> None:
    """Whatever enters, one printable line leaves."""
    result = shown(text)
    assert len((result + "x").splitlines()) == 1
    assert all(char.isprintable() or char.isspace() for char in result)
    assert shown(result) == result


NUMBERS = {
    "whole": (1024.0, "1024"),
    "zero": (0.0, "0"),
    "negative zero": (-0.0, "0"),
    "rounded": (17.72341, "17.72"),
    "no trailing zeros": (1.5, "1.5"),
    "small": (0.00012344, "0.0001234"),
    "tiny": (1.2346e-9, "1.235e-09"),
    "huge": (1.5e12, "1.5e+12"),
    "negative": (-0.3, "-0.3"),
    "nan": (math.nan, "none"),
    "infinite": (-math.inf, "-infinite"),
}


@pytest.mark.parametrize(("value", "expected"), NUMBERS.values(), ids=NUMBERS.keys())
def test_number(value: float, expected: str) -> None:
    """A number has four significant digits and no trailing zeros."""
    assert number(value) == expected


FIGURES = {
    "millivolts": (0.012207, "V", "12.21 mV"),
    "volts": (16.0, "V", "16 V"),
    "kilo": (27000.0, "ohm", "27 kohm"),
    "micro": (-3.2e-6, "A", "-3.2 µA"),
    "a prefixed unit takes no other": (0.0123, "kPa", "0.0123 kPa"),
    "a temperature takes none": (0.05, "degC", "0.05 degC"),
    "a unit of its own takes none": (0.05, "pH", "0.05 pH"),
    "no unit": (0.05, "", "0.05"),
    "exactly a thousandth": (0.001, "V", "1 mV"),
    "just a thousand": (1000.0, "V", "1 kV"),
    "zero": (0.0, "V", "0 V"),
    "nan": (math.nan, "V", "none V"),
    "below pico": (1e-15, "V", "0.001 pV"),
}


@pytest.mark.parametrize(("value", "unit", "expected"), FIGURES.values(), ids=FIGURES.keys())
def test_figure(value: float, unit: str, expected: str) -> None:
    """A value stands in engineering notation where its unit takes prefixes."""
    assert figure(value, unit) == expected


def test_figure_with_sign() -> None:
    """Asked for a sign, a positive value gets one and zero none."""
    assert [figure(value, "V", sign=True) for value in (1.0, 0.0, -1.0)] == ["+1 V", "0 V", "-1 V"]


def test_figure_escapes_its_unit() -> None:
    """A unit that the user made up cannot carry control characters."""
    assert figure(1.0, "x\x1b") == "1 x\\x1b"


def test_figures_share_prefix_and_decimals() -> None:
    """Values read against each other have one prefix and one number of decimals."""
    assert figures([0.0, 0.25, 16.0], "V", resolution=0.01) == ("0.00 V", "0.25 V", "16.00 V")
    assert figures([0.001, -0.0004], "V", sign=True) == ("+1.000 mV", "-0.400 mV")


def test_figures_never_show_minus_zero() -> None:
    """A value that rounds to zero shows no sign."""
    assert figures([-0.0001, 5.0], "V", resolution=0.1, sign=True) == ("0.0 V", "+5.0 V")


def test_figures_without_a_number() -> None:
    """Values that are no numbers neither fail nor decide the decimals of the others."""
    assert figures([math.nan, math.inf, 2.0], "V") == ("none V", "infinite V", "2.000 V")


def test_plural() -> None:
    """Only one is singular."""
    assert [plural(count, "error") for count in (0, 1, 2)] == ["0 errors", "1 error", "2 errors"]


def test_closing() -> None:
    """The last line counts channels by status and findings by level, accepted ones if any."""
    counts = {"verified": 3, "mismatched": 4, "untraced": 1, "error": 5, "warning": 2, "note": 1}
    line = "8 channels: 3 verified, 4 mismatched, 1 untraced; 5 errors, 2 warnings, 1 note"
    assert closing(counts, 0) == line
    assert closing(counts, 2) == line + ", 2 accepted"


def test_wrapped_keeps_number_and_unit_together() -> None:
    """A line is not broken between a number and its unit."""
    assert wrapped("allowed at most 100 mV here", 19) == ("allowed at most", "100 mV here")


def test_wrapped_cuts_what_is_too_long() -> None:
    """A word without a place to break is cut, and nothing is lost."""
    lines = wrapped("x" * 50, 20)
    assert max(map(len, lines)) == 20
    assert "".join(lines) == "x" * 50


def test_a_formula_breaks_before_operators() -> None:
    """No line of a formula ends in an operator, and no cast is torn apart."""
    text = "level_mm = (unsigned int)adc_code(LEVEL) * VREF_MV * 10u / (1 << BITS) - ZERO"
    lines = wrapped_formula(text, 32)
    assert " ".join(lines) == text
    assert max(map(len, lines)) <= 32
    assert not [line for line in lines if line.endswith(("*", "/", "-", "=", "<<", "unsigned"))]
