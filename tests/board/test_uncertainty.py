"""Uncertainty budgets against worked numbers and an independent program."""

from fractions import Fraction
from math import sqrt

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from uncertainties import ufloat

from bitweight.board.chains import ideal
from bitweight.board.uncertainty import budget
from board.parts import channel

REFERENCE = '[reference.vref]\nvoltage = "2.5 V 0.5%"\n'
DIVIDER = "{ kind='divider', top='R1 100k 1%', bottom='R2 10k 1%' }"
TOTAL_ERROR = "bits = 12\ntotal_error = '2 LSB'"


def test_the_worked_example_comes_out() -> None:
    """12 bits, 100 k over 10 k at 1 %, 2.5 V at 0.5 %, 2 LSB: worked by hand from JCGM 100."""
    made = channel(DIVIDER, converter=TOTAL_ERROR, supplies=REFERENCE)
    codes = np.array([2048])
    result = budget(made, codes, Fraction(2))
    assert ideal(made).at(2048) == Fraction("13.75")
    effects = {one.name: abs(float(one.effect[0])) for one in result.contributions}
    assert effects == {
        "R1": pytest.approx(0.0722, abs=5e-5),
        "R2": pytest.approx(0.0722, abs=5e-5),
        "reference vref": pytest.approx(0.0397, abs=5e-5),
        "total error adc": pytest.approx(0.00775, abs=5e-6),
    }
    assert result.combined[0] == pytest.approx(0.1098, abs=5e-5)
    assert result.expanded[0] == pytest.approx(0.2196, abs=5e-5)
    # To first order; the exact ends are +0.3363 and -0.3282 V, to either side of it.
    assert result.worst_case[0] == pytest.approx((0.3363 + 0.3282) / 2, abs=5e-4)


@given(
    st.integers(1, 4095),
    st.floats(1, 1e5),
    st.floats(1, 1e5),
    st.sampled_from([0.1, 1, 5]),
    st.sampled_from([0.1, 1, 5]),
)
def test_the_budget_agrees_with_an_independent_program(
    code: int, top: float, bottom: float, top_percent: float, bottom_percent: float
) -> None:
    """The package `uncertainties` combines the same rectangular tolerances to the same u."""
    stages = (
        f"{{ kind='divider', top='{top:.3f} ohm {top_percent}%', "
        f"bottom='{bottom:.3f} ohm {bottom_percent}%' }},"
        "{ kind='amplifier', gain='11 2%', offset='20 mV ± 5 mV' }"
    )
    result = budget(channel(stages, supplies=REFERENCE), np.array([code]), Fraction(2))
    upper = ufloat(round(top, 3), round(top, 3) * top_percent / 100 / sqrt(3))
    lower = ufloat(round(bottom, 3), round(bottom, 3) * bottom_percent / 100 / sqrt(3))
    gain, offset = ufloat(11, 0.22 / sqrt(3)), ufloat(0.02, 0.005 / sqrt(3))
    volts = ufloat(2.5, 0.0125 / sqrt(3)) * code / 4096
    expected = ((volts - offset) / gain) * (upper + lower) / lower
    assert result.combined[0] == pytest.approx(expected.std_dev, rel=1e-6)


def test_one_part_named_twice_is_one_contribution() -> None:
    """R1 in two places cancels where its effects are opposite: a divider of equal parts."""
    twice = channel("{ kind='divider', top='R1 10k 1%', bottom='R1 10k 1%' }")
    result = budget(twice, np.array([1000]), Fraction(2))
    names = [one.name for one in result.contributions]
    assert names == ["reference vref", "R1"]
    assert abs(result.contributions[1].effect[0]) < 1e-9


def test_a_ratiometric_sensor_cancels_its_supply() -> None:
    """Sensor and reference on one supply: its tolerance does not reach the reading."""
    made = channel(
        "{kind='linear', sensitivity='10 mV/kPa 1%', offset='v33 / 10', ratiometric='v33'}",
        converter='bits = 12\nreference = "ratio"',
        supplies='[supply.v33]\nvoltage = "3.3 V 5%"\n[reference.ratio]\nsupply = "v33"\n',
    )
    result = budget(made, np.array([3000]), Fraction(2))
    effects = {one.name: abs(float(one.effect[0])) for one in result.contributions}
    assert effects["sensitivity"] > 0.5
    assert effects["reference ratio"] < 1e-9


def test_an_offset_of_its_own_follows_too() -> None:
    """An offset stated in volts follows the supply of its ratiometric stage."""
    made = channel(
        "{kind='linear', sensitivity='10 mV/kPa', offset='330 mV', ratiometric='v33'}",
        converter='bits = 12\nreference = "ratio"',
        supplies='[supply.v33]\nvoltage = "3.3 V 5%"\n[reference.ratio]\nsupply = "v33"\n',
    )
    result = budget(made, np.array([0, 3000]), Fraction(2))
    assert np.abs(result.combined).max() < 1e-9


def test_exact_parts_leave_no_uncertainty() -> None:
    """A chain without tolerances has a budget of nothing."""
    made = channel(supplies='[reference.vref]\nvoltage = "2.5 V"\n')
    result = budget(made, np.array([0, 4095]), Fraction(2))
    assert result.contributions == ()
    assert result.expanded.tolist() == [0, 0]


def test_a_total_error_in_volts_counts_in_lsb() -> None:
    """2.5 mV of 2.5 V at 10 bits and a count of 1.024 LSB are the same error."""
    volts = channel(converter="bits = 10\ntotal_error = '2.5 mV'", supplies=REFERENCE)
    counts = channel(converter="bits = 10\ntotal_error = '1.024 LSB'", supplies=REFERENCE)
    codes = np.array([0])
    one, other = (budget(made, codes, Fraction(2)).combined[0] for made in (volts, counts))
    assert one == pytest.approx(other)
    assert one == pytest.approx(0.0025 / sqrt(3))


@given(st.integers(1, 9))
def test_coverage_scales_the_expanded_uncertainty(coverage: int) -> None:
    """U = k * u_c (JCGM 100, 6.2.1)."""
    made = channel(DIVIDER, supplies=REFERENCE)
    result = budget(made, np.array([100, 4000]), Fraction(coverage))
    assert result.expanded == pytest.approx(result.combined * coverage)
