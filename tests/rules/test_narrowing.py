"""Rule `narrowing`."""

import pytest

import facts
from bitweight.arithmetic.expressions import Expression
from bitweight.board.hardware import Channel
from bitweight.judge.findings import Finding, Level
from bitweight_rules.narrowing import RULE
from facts import C, findings_of


def _found(expression: Expression, of: Channel | None = None) -> tuple[Finding, ...]:
    return findings_of(RULE.check, facts.case(expression, of=of))


def _scaled(c: C, by: str = "5000") -> Expression:
    return c.op(c.op(c.code(), "*", by), "/", "1024")


@pytest.mark.parametrize(
    ("held", "by", "count", "furthest", "expected"),
    [
        ("uint8_t", "5000", "mV", "4995 (4.995 V)", "uint16_t, for 0 to 4995"),
        ("int8_t", "500", "10 mV", "499 (4.99 V)", "uint16_t, for 0 to 499"),
        ("uint16_t", "500000", "10 uV", "499511 (4.995 V)", "uint32_t, for 0 to 499511"),
    ],
)
def test_store_too_narrow(held: str, by: str, count: str, furthest: str, expected: str) -> None:
    """A type that cannot hold the top of the range is named with one that can."""
    c = C()
    stored = c.store(held, _scaled(c, by))
    (found,) = _found(stored, facts.channel(count=count))
    assert f"which cannot hold {furthest}" in found.message
    assert (found.level, found.expected) == (Level.ERROR, expected)
    assert found.place == stored.place  # type: ignore[union-attr]


def test_negative_result_in_an_unsigned_type() -> None:
    """A range below zero does not fit an unsigned result."""
    c = C()
    tank = facts.channel(chain=(facts.amplifier("1", "2.5 V"),), ends=("-2.5 V", "2.4 V"))
    (found,) = _found(c.store("uint16_t", c.op(_scaled(c), "-", "2500")), tank)
    assert "cannot hold -2500 (-2.5 V): first wrong at code 0" in found.message
    assert found.expected.startswith("int16_t")


@pytest.mark.parametrize(
    ("held", "count", "by", "ends"),
    [
        ("uint16_t", "mV", "5000", ("0 V", "5 V")),
        ("uint8_t", "100 mV", "50", ("0 V", "5 V")),
        ("uint8_t", "10 mV", "500", ("0 V", "2.5 V")),
    ],
)
def test_store_wide_enough_for_the_range(
    held: str, count: str, by: str, ends: tuple[str, str]
) -> None:
    """A type that holds the range is silent, whatever lies outside the range."""
    c = C()
    assert _found(c.store(held, _scaled(c, by)), facts.channel(count=count, ends=ends)) == ()


@pytest.mark.parametrize(("top", "first"), [("1000", 207), ("4000", 822)])
def test_clamp_inside_the_range(top: str, first: int) -> None:
    """A clamp inside the range stands on its limit."""
    c = C()
    scaled, limit = _scaled(c), c.number(top, "TANK_MAX")
    (found,) = _found(c.choose(c.op(scaled, ">", top), limit, scaled))
    held = int(top) // 1000
    assert found.message == (
        f"tank_held is held at {held} V from code {first} on, but the range goes up to 5 V"
    )
    assert found.place.file == facts.HEADER
    assert (found.found, found.expected) == (f"{top} ({held} V)", "at least 5 V")


def test_clamp_at_the_bottom() -> None:
    """A lower limit inside the range is told as such."""
    c = C()
    scaled = _scaled(c)
    (found,) = _found(c.choose(c.op(scaled, "<", "500"), "500", scaled))
    assert "the range goes down to 0 V" in found.message
    assert found.expected == "at most 0 V"


@pytest.mark.parametrize("top", ["5000", "65535"])
def test_clamp_above_the_range_is_silent(top: str) -> None:
    """A clamp at or above the top is what clamps are for."""
    c = C()
    scaled = _scaled(c)
    assert _found(c.choose(c.op(scaled, ">", top), top, scaled)) == ()


def test_clamp_in_both_is_two_findings() -> None:
    """Limits at both ends are two causes."""
    c = C()
    scaled = _scaled(c)
    low = c.choose(c.op(scaled, "<", "500"), "500", scaled)
    assert len(_found(c.choose(c.op(scaled, ">", "4000"), "4000", low))) == 2


def test_overflow_on_the_way_is_not_its_matter() -> None:
    """A product that overflows and then does not fit its store is one cause, and not this one."""
    c = C(facts.AVR)
    product = c.op(c.code("int16_t"), "*", "5000")
    case = facts.case(c.store("uint8_t", c.op(product, "/", "1024")), model=facts.AVR)
    assert findings_of(RULE.check, case) == ()
