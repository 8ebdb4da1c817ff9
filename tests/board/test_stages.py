"""Stages: what each does to what passes through."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.board.parts import Part, nominal
from bitweight.board.stages import (
    Affine,
    Amplifier,
    Curved,
    Divider,
    Linear,
    offset_volts,
    parts_of,
    relative,
    sources_of,
)
from board.parts import part, stage

LINES = [
    # b / (t + b) of 100 k over 10 k, and with 1 M at the pin (common practice)
    ("{ kind='divider', top='100k', bottom='10k' }", "", "1/11", "0"),
    ("{ kind='divider', top='100k', bottom='10k', load='1M' }", "", "10/111", "0"),
    ("{ kind='divider', top='1k', bottom='3k', to='v33' }", "", "3/4", "0.825"),
    # 1 + Rf / Rg and -Rf / Rin (common practice)
    ("{ kind='amplifier', gain=5 }", "", "5", "0"),
    ("{ kind='amplifier', gain='11 1%', offset='100 mV' }", "", "11", "0.1"),
    (
        "{ kind='amplifier', topology='non-inverting', feedback='10k', ground='1k' }",
        "",
        "11",
        "0",
    ),
    (
        "{ kind='amplifier', topology='inverting', feedback='10k', input='1k', offset='v33 / 2' }",
        "",
        "-10",
        "1.65",
    ),
    ("{ kind='amplifier', feedback='10k', ground='1k' }", "", "11", "0"),
    ("{ kind='amplifier', feedback='10k', input='1k' }", "", "-10", "0"),
    ("{ kind='amplifier', gain=1, offset='vref * 0.2' }", "", "1", "0.5"),
    ("{ kind='shunt', resistance='165 ohm' }", "", "165", "0"),
    ("{ kind='low-pass', resistance='10k', capacitance='100n' }", "", "1", "0"),
    # TMP36 data sheet: 500 mV at 0 degC, 10 mV/degC; the line's input is in kelvin
    (
        "{ kind='linear', sensitivity='10 mV/degC', offset='500 mV', at='0 degC' }",
        "",
        "0.01",
        "-2.2315",
    ),
    # ACS712-05B: VCC/2 + 185 mV/A (data sheet)
    (
        "{ kind='linear', sensitivity='185 mV/A', offset='v5 / 2', ratiometric='v5' }",
        "",
        "0.185",
        "2.5",
    ),
]


@pytest.mark.parametrize(("text", "extra", "gain", "offset"), LINES)
def test_a_stage_is_its_line(text: str, extra: str, gain: str, offset: str) -> None:
    """Gain and offset are exact, in coherent units."""
    made = stage(text, extra=extra)
    assert not isinstance(made, Curved)
    assert made.line() == Affine(Fraction(gain), Fraction(offset))


def test_a_ratiometric_sensor_follows_its_supply() -> None:
    """At twice the supply, slope and offset double (common practice)."""
    made = stage("{ kind='linear', sensitivity='185 mV/A', offset='2.5 V', ratiometric='v5' }")
    assert isinstance(made, Linear)

    def doubled(one: Part) -> Fraction:
        return nominal(one) * (2 if one.key == "supply v5" else 1)

    assert made.line(doubled) == Affine(Fraction("0.37"), Fraction(5))
    assert relative(made.ratiometric, doubled) == 2
    assert relative(None, doubled) == 1


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        (
            "{ kind='thermistor', r25='10k', beta=3950, with='10k', supply='v33' }",
            "thermistor stages are not computed yet",
        ),
        (
            "{ kind='thermistor', r25='10k', steinhart_hart=[1e-3, 2e-4, 1e-7], with='10k', "
            "supply='v33', side='top' }",
            "thermistor stages are not computed yet",
        ),
        ("{ kind='rtd', r0='100 ohm', current='1 mA' }", "rtd stages are not computed yet"),
        (
            "{ kind='rtd', r0='100 ohm', with='1k', supply='vref' }",
            "rtd stages are not computed yet",
        ),
        (
            "{ kind='table', points=[['0 kPa','1 V'],['9 kPa','2 V']] }",
            "table stages are not computed yet",
        ),
        (
            "{ kind='table', points=[['0 degC','27k'],['9 degC','20k']], with='1k', supply='v5' }",
            "table stages are not computed yet",
        ),
        (
            "{ kind='polynomial', coefficients=[0, 1, 0.5], unit_in='degC', unit_out='V' }",
            "polynomial stages are not computed yet",
        ),
        ("{ kind='against', voltage='1.1 V 3%' }", "against stages are not computed yet"),
    ],
)
def test_what_is_not_computed_says_so(text: str, reason: str) -> None:
    """Curved stages are read in full and give their reason."""
    made = stage(text)
    assert isinstance(made, Curved)
    assert reason == made.NOT_COMPUTED
    assert made.KIND in text


def test_a_stage_names_its_parts_and_sources() -> None:
    """Everything that has a tolerance is listed, once a mention."""
    made = stage("{ kind='divider', top='R1 1k', bottom='R2 3k', load='1M', to='v33' }")
    assert isinstance(made, Divider)
    assert [one.label for one in parts_of(made)] == ["R1", "R2", "load"]
    assert [one.name for one in sources_of(made)] == ["v33"]
    assert made.lower() == Fraction(3_000_000_000, 1_003_000)
    other = stage("{ kind='amplifier', gain=2, offset='v33 / 2', ratiometric='v5' }")
    assert isinstance(other, Amplifier)
    assert [one.name for one in sources_of(other)] == ["v5", "v33"]


def test_no_offset_adds_nothing() -> None:
    """An offset that is not given is 0; a part's is its value."""
    assert offset_volts(None, nominal) == 0
    assert offset_volts(part("500 mV"), nominal) == Fraction(1, 2)


NUMBERS = st.fractions(-100, 100)
LINE = st.builds(Affine, NUMBERS.filter(bool), NUMBERS)


@given(LINE, LINE, NUMBERS)
def test_lines_follow_each_other_and_invert(first: Affine, second: Affine, x: Fraction) -> None:
    """Two lines in a row are one line, and a line undone gives x back, exactly."""
    assert first.then(second).at(x) == second.at(first.at(x))
    assert first.inverted().at(first.at(x)) == x


@pytest.mark.parametrize(
    ("sensitivity", "at_zero"),
    [("10 mV/degC", Fraction("273.15")), ("10 mV/K", Fraction(0)), ("4 mV/m", Fraction(0))],
)
def test_linear_without_at_starts_at_the_zero_of_its_scale(
    sensitivity: str, at_zero: Fraction
) -> None:
    """0 degC for a sensitivity per degC, 0 of the coherent unit for any other."""
    made = stage(f"{{ kind='linear', sensitivity='{sensitivity}', offset='500 mV' }}")
    assert made.line().at(at_zero) == Fraction(1, 2)
