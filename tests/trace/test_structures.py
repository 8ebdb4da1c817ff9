"""Expressions that compute the same in the same way."""

import pytest

from bitweight.trace.structures import structure
from tracing_cases import entry, traced


def of(text: str) -> str:
    """The structure of an expression of C."""
    return structure(traced(entry(f"mv = {text};"), value="mv").conversions[0].expression)


@pytest.mark.parametrize(
    ("one", "other"),
    [
        ("adc() * 2", "adc() * 3"),
        ("adc() * 2", "adc() + 2"),
        ("adc() * 2", "adc() * 2u"),
        ("(uint8_t)adc()", "(int8_t)adc()"),
        ("adc() > 5 ? adc() : 1", "adc() > 5 ? 1 : adc()"),
        ("-adc()", "+adc()"),
    ],
)
def test_different_computations_differ(one: str, other: str) -> None:
    """Operators, types, constants and order all count."""
    assert of(one) != of(other)


def test_equal_computations_are_equal() -> None:
    """Two readings of the same text share their structure."""
    assert of("adc() * 2 + (adc() >> 1)") == of("adc() * 2 + (adc() >> 1)")


def test_shared_operands_stay_small() -> None:
    """A value used many times is written once: the text grows with the nodes, not the paths."""
    body = "int v = adc();" + "v = v + v;" * 60 + "mv = v;"
    expression = traced(entry(body), value="mv").conversions[0].expression
    assert len(structure(expression)) < 5_000
