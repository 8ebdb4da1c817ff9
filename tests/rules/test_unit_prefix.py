"""Rule `unit-prefix`: powers of ten between the result and its stated unit."""

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight_rules.unit_prefix import RULE
from facts import C, case, channel, findings_of


def volts(reference: str, name: str = "VREF") -> Expression:
    """raw * reference / 1024, in float."""
    c = C()
    product = c.op(c.cast("float", c.code()), "*", c.number(reference, name))
    return c.op(product, "/", "1024.0f")


@pytest.mark.parametrize(
    ("count", "reference"), [("mV", "5.0f"), ("V", "5000.0f"), ("uV", "5000.0f"), ("kV", "5.0f")]
)
def test_a_power_of_ten_is_found(count: str, reference: str) -> None:
    """A result in another prefix than stated is found, and no constant is blamed for it."""
    (one,) = findings_of(RULE.check, case(volts(reference), of=channel(count=count)))
    assert one.replacement is None
    assert one.place.file == "src/tank.c"


def test_a_name_that_says_millivolts_but_holds_volts_is_the_place() -> None:
    """The constant whose own unit word contradicts its value is named and mended."""
    (one,) = findings_of(RULE.check, case(volts("5.0f", "VREF_MV")))
    assert one.place.file == "src/board_config.h"
    assert one.replacement is not None
    assert one.replacement.text == "5000.0f"


@pytest.mark.parametrize(("count", "reference"), [("mV", "5000.0f"), ("V", "5.0f")])
def test_the_stated_prefix_is_silent(count: str, reference: str) -> None:
    """A result in its stated unit is no fault."""
    assert not findings_of(RULE.check, case(volts(reference), of=channel(count=count)))


def test_an_inferred_unit_switches_it_off() -> None:
    """Where no unit is stated any power of ten is as good."""
    judged = channel(count=None)
    for reference in ("5.0f", "5000.0f"):
        assert not findings_of(RULE.check, case(volts(reference), of=judged))
