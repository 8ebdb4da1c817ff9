"""What a value is made from."""

import pytest

from bitweight.arithmetic.expressions import Unknown
from bitweight.trace.measures import measures
from tracing_cases import BOARD, INT32, entry, traced


@pytest.mark.parametrize(
    ("text", "channels"),
    [
        ("adc() * 2", {"tank"}),
        ("adc() + aux()", {"tank", "sump"}),
        ("adc() > 5 ? 3 : aux()", {"sump"}),
        ("adc() > 5 ? adc() : 0", {"tank"}),
        ("(adc() > 5) + aux()", {"sump"}),
        ("!adc() + aux()", {"sump"}),
        ("(adc() && 1) + aux()", {"sump"}),
        ("-(uint8_t)adc()", {"tank"}),
    ],
)
def test_only_what_goes_into_the_value_counts(text: str, channels: set[str]) -> None:
    """A code that merely decides between values is not what the value is made from."""
    source = entry(f"mv = {text};", "uint16_t aux(void);")
    trace = traced(source, value="mv", others={"sump": "aux()"})
    assert measures(trace.conversions[0].expression, {}) == channels


def test_an_unknown_carries_what_it_was_made_from() -> None:
    """An unknown that was made from a code still belongs to its channel."""
    lost = Unknown(reason="lost", type=INT32.int_, place=BOARD)
    assert measures(lost, {}) == frozenset()
    assert measures(lost, {id(lost): frozenset({"tank"})}) == {"tank"}
