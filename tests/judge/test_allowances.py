"""The allowed error at each code."""

from fractions import Fraction

import numpy as np
import pytest

import facts
from bitweight.board.chains import ideal
from bitweight.board.hardware import Channel
from bitweight.judge.allowances import Allowance, allowance


def _given(channel: Channel) -> Allowance:
    side = ideal(channel)
    return allowance(side, side.all_codes, Fraction(2))


@pytest.mark.parametrize(
    ("text", "bottom", "top"),
    [("50 mV", 0.05, 0.05), ("1 %", 0.05, 0.05), ("2 % of reading", 0.0, 0.1 * 1023 / 1024)],
)
def test_stated(text: str, bottom: float, top: float) -> None:
    """A stated error is absolute, a part of the span, or a part of the reading."""
    given = _given(facts.channel(allowed=text))
    limit = given.at_step(0.001)
    assert (limit[0], limit[-1]) == (pytest.approx(bottom), pytest.approx(top))
    assert given.says(0, 0.001) == "board"


def test_stated_parts_add_up() -> None:
    """A part of the reading and an absolute part add up."""
    stated = facts.allowed_error("20 mV", "V")
    both = type(stated)(
        absolute=stated.absolute,
        of_span=Fraction(0),
        of_reading=Fraction(1, 100),
        text="1 % of reading + 20 mV",
        place=stated.place,
    )
    limit = _given(facts.channel(allowed_error=both)).at_step(0.0)
    assert limit[512] == pytest.approx(0.02 + 0.025)


@pytest.mark.parametrize(("bits", "step"), [(8, 0.0), (10, 0.001), (12, 0.01)])
def test_resolution(bits: int, step: float) -> None:
    """Without tolerances one and a half LSB plus steps are allowed."""
    given = _given(facts.channel(converter=facts.converter(bits)))
    assert given.at_step(step)[7] == pytest.approx(1.5 * (5 / 2**bits + step))
    assert given.says(7, step) == "resolution"


def test_budget() -> None:
    """A tolerance of 10 % on the reference, rectangular, allows 2 * 10 % / sqrt(3) of the reading.

    JCGM 100, 4.3.7 (rectangular) and 6.2.1 (expanded uncertainty).
    """
    loose = facts.converter(reference=facts.reference("5 V 10%"))
    given = _given(facts.channel(converter=loose))
    assert given.at_step(0.001)[512] == pytest.approx(2 * 0.25 / np.sqrt(3), rel=1e-6)
    assert given.says(512, 0.001) == "budget"
    assert given.says(0, 0.001) == "resolution"
