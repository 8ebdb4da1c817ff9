"""The suffix that mends an overflow."""

import pytest

import facts
from bitweight.arithmetic.types import DataModel
from facts import C

CASES = [
    ("uint16_t", "5000", facts.AVR, "5000UL"),
    ("int16_t", "5000", facts.AVR, "5000UL"),
    ("uint16_t", "5000u", facts.AVR, "5000UL"),
    ("uint16_t", "0x1388", facts.AVR, "0x1388UL"),
    ("uint32_t", "5000000", facts.INT32, "5000000ULL"),
]


@pytest.mark.parametrize(("reading", "factor", "model", "text"), CASES)
def test_constant_made_wide(reading: str, factor: str, model: DataModel, text: str) -> None:
    """The constant below the product is proposed with the narrowest suffix that mends it."""
    c = C(model)
    by = c.number("1024" if model is facts.AVR else "1024000")
    judgement = facts.case(c.op(c.op(c.code(reading), "*", factor), "/", by), model=model).judgement
    assert judgement is not None
    (wrong,) = judgement.operations
    assert wrong.suffix is not None
    assert wrong.suffix.text == text


def test_negative_codes_want_a_signed_constant() -> None:
    """With codes below zero unsigned long would go wrong: long is proposed."""
    c = C(facts.AVR)
    tank = facts.channel(
        converter=facts.converter(12, coding=facts.Coding.TWOS_COMPLEMENT), ends=("-5 V", "5 V")
    )
    scaled = c.op(c.op(c.code("int16_t"), "*", "5000"), "/", "2048")
    judgement = facts.case(scaled, of=tank, model=facts.AVR).judgement
    assert judgement is not None
    assert [one.suffix and one.suffix.text for one in judgement.operations] == ["5000L"]


def test_no_constant_no_suffix() -> None:
    """A product of the code with itself has no constant to mend."""
    c = C(facts.AVR)
    code = c.code()
    judgement = facts.case(c.op(c.op(code, "*", code), "/", code), model=facts.AVR).judgement
    assert judgement is not None
    on_the_way = [one for one in judgement.operations if not one.at_end]
    assert [one.suffix for one in on_the_way] == [None]
