"""A code that the firmware reads in another coding than the converter's."""

from typing import Any

import pytest

import facts
from bitweight.arithmetic.expressions import Expression
from bitweight.board.converters import Coding
from bitweight.judge.cases import Judgement
from facts import C

CODINGS = list(Coding)


def _judged(expression: Expression, coding: Coding, bits: int, **changes: Any) -> Judgement:
    tank = facts.channel(
        converter=facts.converter(bits, coding=coding, **changes), ends=None, count="mV"
    )
    judgement = facts.case(expression, of=tank).judgement
    assert judgement is not None
    return judgement


def _decoded(c: C, read_as: Coding, bits: int) -> Expression:
    """A code decoded as firmware for this coding does it."""
    word, half, top = c.code(), str(1 << (bits - 1)), str((1 << bits) - 1)
    match read_as:
        case Coding.UNSIGNED:
            return word
        case Coding.TWOS_COMPLEMENT:
            bare = c.op(word, "&", top)
            return c.op(c.op(bare, "^", half), "-", half)
        case Coding.OFFSET_BINARY:
            return c.op(word, "-", half)
        case Coding.COMPLEMENTARY:
            return c.op(top, "-", word)


def _scaled(c: C, read_as: Coding, coding: Coding, bits: int) -> Expression:
    count = 1 << (bits - coding.signed)
    return c.op(c.op(_decoded(c, read_as, bits), "*", "5000"), "/", str(count))


@pytest.mark.parametrize("bits", [8, 10, 12])
@pytest.mark.parametrize("coding", CODINGS)
def test_own_coding_is_clean(coding: Coding, bits: int) -> None:
    """Each coding, decoded as it should be, is right for every code."""
    judgement = _judged(_scaled(C(), coding, coding, bits), coding, bits)
    assert judgement.coding is None
    assert judgement.worst_ratio <= 1


@pytest.mark.parametrize("bits", [8, 12])
@pytest.mark.parametrize(
    ("coding", "read_as"), [(one, other) for one in CODINGS for other in CODINGS if one != other]
)
def test_other_coding_is_told(coding: Coding, read_as: Coding, bits: int) -> None:
    """A code decoded as any other coding is told as that one, and no constant is blamed."""
    judgement = _judged(_scaled(C(), read_as, coding, bits), coding, bits)
    assert judgement.coding is read_as
    assert (judgement.explanation.wrong, judgement.explanation.residual) == ((), None)
    assert judgement.operations == ()


def test_decoded_code_that_goes_wrong_later() -> None:
    """A code held with its sign whose product is wrong is no matter of coding."""
    c = C()
    scaled = c.op(c.op(c.code("int16_t"), "*", "5000u"), "/", "2048")
    assert _judged(scaled, Coding.TWOS_COMPLEMENT, 12).coding is None


def test_wide_constant_error_is_no_coding() -> None:
    """A wrong reference is wrong under every coding."""
    c = C()
    scaled = c.op(c.op(c.code(), "*", "3300"), "/", "4096")
    assert _judged(scaled, Coding.UNSIGNED, 12).coding is None


def test_sign_extended_sixteen_bits() -> None:
    """A plain code as wide as its word, read into a signed word, is told as two's complement."""
    c = C()
    scaled = c.op(c.op(c.code("int16_t"), "*", "5000"), "/", "65536")
    judgement = _judged(scaled, Coding.UNSIGNED, 16)
    assert judgement.coding is Coding.TWOS_COMPLEMENT
