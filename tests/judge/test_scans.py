"""Converters of 24 bits: every code is looked at."""

import pytest

import facts
from bitweight.board.hardware import Channel
from bitweight.judge.scans import stride
from facts import C


def _wide(**changes: object) -> Channel:
    return facts.channel(
        converter=facts.converter(20, **changes), count="uV", allowed="1 mV", ends=("0 V", "5 V")
    )


def test_clean_conversion() -> None:
    """A right conversion of 20 bits is right at every code."""
    c = C()
    scaled = c.op(c.op(c.code("uint32_t"), "*", "5000000ULL"), "/", "1048576")
    judgement = facts.case(scaled, of=_wide()).judgement
    assert judgement is not None
    assert judgement.worst_ratio < 1
    assert judgement.operations == ()


def test_single_wrong_code_is_found() -> None:
    """One wrong code off the grid is the worst."""
    c = C()
    code = c.code("uint32_t")
    scaled = c.op(c.op(code, "*", "5000000ULL"), "/", "1048576")
    spoiled = c.choose(c.op(code, "==", "500002"), "0ULL", scaled)
    judgement = facts.case(spoiled, of=_wide()).judgement
    assert judgement is not None
    assert int(judgement.codes[judgement.worst_index]) == 500002


def test_first_overflow_is_exact() -> None:
    """The first code that overflows is that code, not the next of a grid."""
    c = C()
    scaled = c.op(c.op(c.code("uint32_t"), "*", "5000UL"), "/", "1049")
    judgement = facts.case(scaled, of=_wide()).judgement
    assert judgement is not None
    (wrong,) = judgement.operations
    assert int(judgement.codes[wrong.index]) == (1 << 32) // 5000 + 1


@pytest.mark.parametrize(("bits", "every"), [(16, 1), (24, 1), (25, 9), (32, 1025)])
def test_stride(bits: int, every: int) -> None:
    """Up to 24 bits every code is looked at; beyond, every so many, an odd number."""
    assert stride(facts.converter(bits)) == every


@pytest.mark.parametrize("spot", [(1 << 31) - 1, 1 << 27, (1 << 32) - 1])
def test_breaking_codes_are_looked_at_beyond_24_bits(spot: int) -> None:
    """A single wrong code beside a power of two or at an end is found among 2**32."""
    c = C()
    code = c.code("uint32_t")
    scaled = c.op(c.op(code, "*", "5000000ULL"), ">>", "32")
    of = facts.channel(converter=facts.converter(32), count="uV", allowed="1 mV")
    spoiled = c.choose(c.op(code, "==", f"{spot}u"), "77ULL", scaled)
    judgement = facts.case(spoiled, of=of).judgement
    assert judgement is not None
    assert judgement.stride == 1025
    assert int(judgement.codes[judgement.worst_index]) == spot
