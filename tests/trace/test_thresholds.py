"""Limit constants as the firmware has them."""

import pytest

from bitweight.trace.patterns import pattern
from bitweight.trace.resolution import Resolver
from bitweight.trace.runs import Runner
from bitweight.trace.thresholds import LimitAim, Threshold, collect
from tracing_cases import BOARD, context_of

TEXT = """#define RELIEF 2458
#define MARGIN 10
#define BOTH (RELIEF - MARGIN)
#define CALLED read_limit()
static const unsigned alarm = 3000;
unsigned tuned = 7;
void tune(void) { tuned = read_limit(); }
enum { TRIP = 1200 };
int f(int v) { return v > RELIEF || v > alarm || v > TRIP || v > BOTH || v > tuned || CALLED; }
"""


def threshold(constant: str) -> Threshold:
    """The limit of one constant."""
    context = context_of(TEXT)
    resolver = Resolver(context=context, runner=Runner(context=context))
    aim = LimitAim(channel="tank", name="relief", pattern=pattern(constant, BOARD))
    (found,) = collect(context, resolver, [aim])
    return found


@pytest.mark.parametrize(
    ("constant", "value", "line"),
    [
        ("RELIEF", 2458, 1),
        ("BOTH", 2448, 3),
        ("alarm", 3000, 5),
        ("TRIP", 1200, 8),
        ("RELIEF - 8", 2450, None),
        ("2 * TRIP", 2400, None),
    ],
)
def test_a_limit_has_the_value_of_the_code(constant: str, value: int, line: int | None) -> None:
    """Macros, constants, enumerators and expressions of them, with their place."""
    found = threshold(constant)
    assert found.value == value
    assert found.reason is None
    assert found.place is not None
    if line is not None:
        assert found.place.line == line


def test_a_single_constant_can_be_replaced() -> None:
    """The spelling is known where one constant alone is the limit."""
    leaf = threshold("RELIEF").leaf
    assert leaf is not None
    assert leaf.text == "2458"
    assert threshold("BOTH").leaf is None


@pytest.mark.parametrize(
    ("constant", "reason"),
    [
        ("CALLED", "CALLED is not a constant in the code"),
        ("ABSENT", "ABSENT is not found in the code"),
        ("1 +", "1 + is not found in the code"),
    ],
)
def test_a_limit_without_a_value_says_why(constant: str, reason: str) -> None:
    """What is no constant, or not there, has a reason in place of a value."""
    found = threshold(constant)
    assert found.value is None
    assert found.reason == reason
