"""Rule `early-division`."""

import pytest

import facts
from bitweight.arithmetic.expressions import Expression
from bitweight.board.hardware import Channel
from bitweight.judge.findings import Finding, Level
from bitweight_rules.early_division import RULE
from facts import C, findings_of


def _found(expression: Expression, of: Channel | None = None) -> tuple[Finding, ...]:
    return findings_of(RULE.check, facts.case(expression, of=of))


def _early(c: C, by: str = "16", left: str = "64") -> tuple[Expression, Expression]:
    divided = c.op(c.code(), "/", by)
    return divided, c.op(c.op(divided, "*", "5000"), "/", left)


def test_finding_stands_on_the_division() -> None:
    """The operator that loses the digits is named, with the loss against one LSB."""
    c = C()
    divided, scaled = _early(c)
    (found,) = _found(scaled)
    assert found.message == (
        "dividing here loses up to 74 mV, at code 127, where one LSB is 4.883 mV"
    )
    assert found.place == divided.place  # type: ignore[union-attr]
    assert (found.level, found.expected) == (Level.WARNING, "multiply before dividing")
    assert [one.message for one in found.related] == ["the reading"]


@pytest.mark.parametrize(
    ("allowed", "level"),
    [("20 mV", Level.ERROR), ("70 mV", Level.ERROR), ("100 mV", Level.NOTE), ("4 %", Level.NOTE)],
)
def test_level_by_stated_error(allowed: str, level: Level) -> None:
    """A stated allowed error makes it an error where the loss leaves it, else a note."""
    _, scaled = _early(C())
    (found,) = _found(scaled, facts.channel(allowed=allowed))
    assert found.level is level


@pytest.mark.parametrize(("by", "left"), [("8", "128"), ("64", "16"), ("1024", "1")])
def test_magnitudes(by: str, left: str) -> None:
    """Eight counts lost or all of them: found all the same."""
    _, scaled = _early(C(), by, left)
    assert len(_found(scaled)) == 1


def test_shift() -> None:
    """A shift that comes too early is told as a shift."""
    c = C()
    shifted = c.op(c.code(), ">>", "4")
    (found,) = _found(c.op(c.op(shifted, "*", "5000"), ">>", "6"))
    assert found.message.startswith("shifting right here loses")


def test_conversion_to_an_integer() -> None:
    """A float cut to whole volts before it is scaled loses as well."""
    c = C()
    volts = c.store("int", c.op(c.code(), "*", "0.0048828125f"))
    (found,) = _found(c.op(volts, "*", "1000"))
    assert found.message.startswith("converting to an integer here loses")


@pytest.mark.parametrize("count", ["1 V", "100 mV"])
def test_coarse_result_is_silent(count: str) -> None:
    """A result in coarse counts is cut once, at the end."""
    c = C()
    by = "5" if count == "1 V" else "50"
    assert _found(c.op(c.op(c.code(), "*", by), "/", "1024"), facts.channel(count=count)) == ()


@pytest.mark.parametrize("term", ["0", "512"])
def test_multiplication_first_is_silent(term: str) -> None:
    """Multiplied first, with half the divisor added or not, nothing is lost."""
    c = C()
    assert _found(c.op(c.op(c.op(c.code(), "*", "5000"), "+", term), "/", "1024")) == ()


def test_wrong_product_is_not_its_matter() -> None:
    """Codes at which arithmetic overflows are overflow's."""
    c = C(facts.AVR)
    scaled = c.op(c.op(c.code("int16_t"), "*", "5000"), "/", "1024")
    assert findings_of(RULE.check, facts.case(scaled, model=facts.AVR)) == ()


def test_counts_too_coarse_for_the_stated_error() -> None:
    """A result cut to whole volts leaves a stated 10 mV by itself."""
    c = C()
    scaled = c.op(c.op(c.code(), "*", "5"), "/", "1024")
    (found,) = _found(scaled, facts.channel(count="1 V", allowed="10 mV"))
    assert found.message == (
        "dividing here cuts tank_held to whole counts: up to 999 mV lost, at code 819, leaves the "
        "allowed error by itself"
    )
    assert (found.level, found.expected) == (Level.ERROR, "finer counts of the result")
