"""Expressions as C text."""

import pytest

from bitweight.trace.formulas import formula
from tracing_cases import entry, traced


@pytest.mark.parametrize(
    ("before", "text", "shown"),
    [
        ("", "adc() * 3300 / 4096", "adc() * 3300 / 4096"),
        ("", "adc() * (3300 / 4)", "adc() * (3300 / 4)"),
        ("", "(adc() + 1) * 2", "(adc() + 1) * 2"),
        ("", "adc() - (5 - 2)", "adc() - (5 - 2)"),
        ("", "adc() - 5 - 2", "adc() - 5 - 2"),
        ("", "-(adc() + 1)", "-(adc() + 1)"),
        ("", "(uint32_t)adc() << 2", "(unsigned int)adc() << 2"),
        ("", "(uint8_t)(adc() >> 4)", "(unsigned char)(adc() >> 4)"),
        ("", "adc() == 5 ? 1 : adc()", "adc() == 5 ? 1 : adc()"),
        ("#define FULL 4096", "adc() * 2 / FULL", "adc() * 2 / FULL"),
        ("#define FULL (1 << 12)", "adc() * 2 / FULL", "adc() * 2 / (1 << 12)"),
        ("static const int vref = 3300;", "adc() * vref", "adc() * vref"),
        ("", "~adc() & 0xFFF", "~adc() & 0xFFF"),
        ("", "adc() > 3000 ? 3000 : adc()", "min(adc(), 3000)"),
    ],
)
def test_formulas_are_c(before: str, text: str, shown: str) -> None:
    """Parentheses only where C needs them, casts as written, constants by name."""
    trace = traced(entry(f"mv = {text};", before), value="mv")
    assert formula(trace.conversions[0].expression) == shown


def test_a_long_formula_is_cut() -> None:
    """What does not fit a screen line or two ends in dots."""
    text = " + ".join(f"adc() * {n}" for n in range(100))
    found = formula(traced(entry(f"mv = {text};"), value="mv").conversions[0].expression)
    assert len(found) <= 240
    assert found.endswith("...")
