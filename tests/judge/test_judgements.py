"""A conversion judged for every code of its converter."""

from fractions import Fraction

import numpy as np
import pytest

import facts
from bitweight.arithmetic.expressions import Expression, Unknown
from bitweight.arithmetic.values import FaultKind
from bitweight.board.hardware import Channel
from bitweight.judge.cases import Judgement
from facts import C


def _judged(expression: Expression, of: Channel | None = None) -> Judgement:
    judgement = facts.case(expression, of=of).judgement
    assert judgement is not None
    return judgement


def _scaled(c: C, volts: str = "5000", count: str = "1024") -> Expression:
    return c.op(c.op(c.code(), "*", volts), "/", count)


def test_truncation_is_inside() -> None:
    """Truncated millivolts are at most one below the ideal, and inside the default."""
    judgement = _judged(_scaled(C()))
    assert -0.001 < judgement.error[judgement.worst_index] < 0
    assert judgement.worst_ratio < 1
    assert judgement.allowed_from == "resolution"


@pytest.mark.parametrize(
    ("volts", "count", "code", "error"),
    # 5 V of 10 bits: 1023 for 1024 reads 1 LSB high at the top; 4900 mV for 5000 reads 2 % low
    [("5000", "1023", 1023, 5 / 1024), ("4900", "1024", 1023, -0.1), ("5100", "1024", 1021, 0.1)],
)
def test_worst_error(volts: str, count: str, code: int, error: float) -> None:
    """The largest error in range is found, signed, at the lowest code that has it."""
    judgement = _judged(_scaled(C(), volts, count))
    assert abs(int(judgement.codes[judgement.worst_index]) - code) <= 3
    assert judgement.error[judgement.worst_index] == pytest.approx(error, abs=0.0015)


def test_tie_goes_to_lowest_code() -> None:
    """Of equal errors that of the lowest code is shown."""
    c = C()
    judgement = _judged(c.op(c.op(c.code(), "*", "5.0f"), "/", "1024.0f"), facts.channel(count="V"))
    assert int(judgement.codes[judgement.worst_index]) == 0


def test_points_run_from_bottom_to_top() -> None:
    """Bottom, middle and top follow the quantity, also where the chain falls."""
    falling = facts.channel(chain=(facts.amplifier("-1", "5 V"),))
    c = C()
    judgement = _judged(c.op("5000", "-", _scaled(c)), falling)
    assert [point.at_count for point in judgement.points] == [1023, 511, 0]
    assert judgement.points[2].hardware == pytest.approx(5.0)


def test_only_codes_in_range_count() -> None:
    """Codes outside the range belong to no error and no line."""
    judgement = _judged(_scaled(C()), facts.channel(ends=("1 V", "2 V")))
    inside = judgement.codes[judgement.in_range]
    assert (inside[0], inside[-1]) == (205, 409)
    assert judgement.in_range[judgement.worst_index]


def test_range_without_codes() -> None:
    """A range that no code stands for leaves nothing to judge."""
    case = facts.case(_scaled(C()), of=facts.channel(ends=("8 V", "9 V")))
    assert case.judgement is None
    assert "no code" in (case.reason or "")


def test_gain_and_offset() -> None:
    """The firmware's line is fitted through its values, the board's is exact."""
    judgement = _judged(_scaled(C(), "4900"))
    assert judgement.hardware.gain == 5 / 1024
    assert judgement.firmware.gain == pytest.approx(4.9 / 1024, rel=1e-4)
    assert judgement.firmware.offset == pytest.approx(-0.0005, abs=0.0002)


def test_curve_is_no_line() -> None:
    """A square has neither gain nor offset."""
    c = C()
    code = c.code()
    square = c.op(c.op(c.op(code, "*", code), "*", "5"), "/", "1048")
    judgement = _judged(square)
    assert (judgement.firmware.gain, judgement.firmware.offset) == (None, None)


def test_clamped_line_is_a_line() -> None:
    """A clamp at an end leaves the gain what it is."""
    c = C()
    scaled = _scaled(c)
    clamp = c.choose(c.op(scaled, ">", "3000"), "3000", scaled)
    assert _judged(clamp).firmware.gain == pytest.approx(5 / 1024, rel=1e-4)


def test_other_readings_stand_still() -> None:
    """A ratio to the supply is judged with the supply's reading at its nominal code."""
    supply = facts.channel("supply", nominal=facts.parse_quantity("2.5 V"))
    c = C()
    ratio = c.op(c.op(c.code(), "*", "2500"), "/", c.code("uint16_t", "supply"))
    judgement = facts.case(ratio, among=(supply,)).judgement
    assert judgement is not None
    assert judgement.worst_ratio < 1


def test_sum_of_samples() -> None:
    """With a reading gain the code's sum is scaled as such."""
    tank = facts.channel(firmware=facts.firmware("mV", reading_gain=Fraction(16)))
    assert _judged(_scaled(C(facts.INT32), "5000", "16384"), tank).worst_ratio < 1


def test_left_justified_word() -> None:
    """A word with six empty bits below is read as it comes."""
    tank = facts.channel(converter=facts.converter(shift=6))
    c = C()
    scaled = c.op(c.op(c.op(c.code(), ">>", "6"), "*", "5000"), "/", "1024")
    assert _judged(scaled, tank).worst_ratio < 1


@pytest.mark.parametrize("reading", ["int16_t", "int"])
def test_signed_readings(reading: str) -> None:
    """A two's-complement code comes as a 16-bit word or as a negative int: either is right."""
    both = facts.converter(12, coding=facts.Coding.TWOS_COMPLEMENT)
    tank = facts.channel(converter=both, ends=("-5 V", "5 V"))
    c = C()
    scaled = c.op(c.op(c.code(reading), "*", "5000"), "/", "2048")
    assert _judged(scaled, tank).worst_ratio < 1


def test_accepted_full_scale_counts() -> None:
    """Where two counts are accepted the board's line is that by which the firmware is right."""
    either = facts.converter(12, full_scale_counts=(4096, 4095))
    c = C()
    exact = c.op(c.op(c.code(), "*", "5.0"), "/", "4095.0")
    judgement = _judged(exact, facts.channel(converter=either, count="V"))
    assert judgement.error[judgement.worst_index] == pytest.approx(0, abs=1e-9)


def test_inferred_unit() -> None:
    """Without a unit the nearest power of ten stands."""
    judgement = _judged(_scaled(C()), facts.channel(count=None))
    assert (judgement.scale, judgement.unit_from) == (pytest.approx(0.001), "inferred")


def _unknown(c: C) -> Unknown:
    return Unknown(reason="CAL comes from flash", type=c.type("int"), place=facts.at(7))


def test_unknown_in_range_is_the_reason() -> None:
    """A value that is not known for codes in range is no judgement, for its own reason."""
    c = C()
    code = c.code()
    choice = c.choose(c.op(code, ">", "500"), _unknown(c), c.op(code, "*", "5"))
    case = facts.case(choice)
    assert (case.judgement, case.reason) == (None, "CAL comes from flash")


def test_unknown_outside_range_is_left_out() -> None:
    """A value that is not known only outside the range leaves the range judged."""
    c = C()
    code = c.code()
    choice = c.choose(c.op(code, ">", "900"), _unknown(c), _scaled(c))
    judgement = _judged(choice, facts.channel(ends=("0 V", "4 V")))
    assert np.isnan(judgement.value[1000])
    assert judgement.worst_ratio < 1


@pytest.mark.parametrize("shift", ["40", "4000000000u"])
def test_an_oversized_shift_is_no_curve(shift: str) -> None:
    """A constant that no type has is told at its operator, and no curve is made of it."""
    c = C()
    code = c.op(c.op(c.code(), "*", "5000UL"), "/", c.op(c.number("1"), "<<", c.number(shift)))
    judgement = facts.case(code).judgement
    assert judgement is not None
    assert [one.kind for one in judgement.operations][:1] == [FaultKind.SHIFT]
    assert judgement.explanation.residual != "curve"


def test_an_overflow_that_the_wrong_constant_makes_is_not_told() -> None:
    """A product that overflows only because its factor is ten times the board's is one fault."""
    c = C(facts.AVR)
    code = c.op(c.op(c.code("uint32_t"), "*", "50000000UL"), "/", "1024")
    judgement = facts.case(code, model=facts.AVR).judgement
    assert judgement is not None
    assert judgement.explanation.wrong
    assert judgement.operations == ()


@pytest.mark.parametrize(
    ("limit", "other"), [("200", "0"), ("900", "77"), ("512", "4095"), ("1", "1000")]
)
def test_nothing_leaves_the_allowed_error_in_silence(limit: str, other: str) -> None:
    """Whatever a branch does to the reading, something is told where the error leaves the limit."""
    c = C()
    code = c.code()
    odd = c.op(c.op(c.choose(c.op(code, "<", limit), other, code), "*", "5000"), "/", "1024")
    judgement = facts.case(odd).judgement
    assert judgement is not None
    assert judgement.worst_ratio > 1
    told = (judgement.explanation.wrong, judgement.operations, judgement.clamps)
    assert any(told) or judgement.explanation.residual or judgement.loss
