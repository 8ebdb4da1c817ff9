"""Rule `full-scale`: the count that stands for the reference."""

from dataclasses import replace

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight.judge.findings import Level
from bitweight_rules.full_scale import RULE
from facts import C, case, channel, converter, findings_of


def millivolts(count: str, name: str | None = "ADC_MAX") -> Expression:
    """raw * VREF_MV / count."""
    c = C()
    return c.op(c.op(c.code(), "*", c.number("5000UL", "VREF_MV")), "/", c.number(count, name))


@pytest.mark.parametrize(
    ("bits", "count", "expected"),
    [(8, "255", "256"), (10, "1023", "1024"), (10, "0x3FF", "0x400"), (12, "4095u", "4096u")],
)
def test_a_count_less_one_is_found(bits: int, count: str, expected: str) -> None:
    """2**N - 1 for 2**N is found at any width, with a replacement in the constant's own style."""
    (found,) = findings_of(RULE.check, case(millivolts(count), of=of_bits(bits)))
    assert found.rule == "full-scale"
    assert found.replacement is not None
    assert found.replacement.text == expected
    assert found.level is Level.WARNING


def of_bits(bits: int, **changes: object):  # type: ignore[no-untyped-def]
    """The tank on a converter of other bits."""
    return channel(converter=converter(bits, **changes))


@pytest.mark.parametrize(("bits", "count"), [(8, "256"), (10, "1024"), (12, "4096")])
def test_the_right_count_is_silent(bits: int, count: str) -> None:
    """The converter's own count is no fault."""
    assert not findings_of(RULE.check, case(millivolts(count), of=of_bits(bits)))


def test_a_converter_of_2n_less_one_wants_that() -> None:
    """Where the data sheet defines 2**N - 1, 2**N is the fault."""
    judged = of_bits(12, full_scale_counts=(4095,))
    assert not findings_of(RULE.check, case(millivolts("4095"), of=judged))
    (found,) = findings_of(RULE.check, case(millivolts("4096"), of=judged))
    assert (found.found, found.expected) == ("4096", "4095")


def test_either_accepted_count_is_silent() -> None:
    """Where the maker's documents disagree, both counts are accepted."""
    judged = of_bits(12, full_scale_counts=(4096, 4095))
    for count in ("4096", "4095"):
        assert not findings_of(RULE.check, case(millivolts(count), of=judged))


def test_an_assumed_convention_is_said() -> None:
    """Where the board file states no count the message says which is assumed."""
    judged = of_bits(10, full_scale_stated=False)
    (found,) = findings_of(RULE.check, case(millivolts("1023"), of=judged))
    assert "2**10 is assumed" in found.message


def test_a_mask_and_a_twos_complement_constant_are_no_counts() -> None:
    """2**N - 1 as a mask of the word is no full-scale count."""
    c = C()
    masked = c.op(c.code(), "&", c.number("0x3FF", "ADC_MASK"))
    value = c.op(c.op(masked, "*", "5000UL"), "/", "1024")
    assert not findings_of(RULE.check, case(value))


def test_it_stands_on_the_definition_and_names_the_effect() -> None:
    """The finding stands on the constant's spelling; where it bites is related."""
    (found,) = findings_of(RULE.check, case(millivolts("1023")))
    assert found.place.file.endswith("board_config.h")
    assert found.related[0].message == "used here"
    assert "up to 5 mV high (code 1023)" in found.message


def test_a_name_says_nothing_without_a_line() -> None:
    """A case without a judgement yields nothing."""
    judged = replace(case(millivolts("1023")), judgement=None)
    assert not findings_of(RULE.check, judged)
