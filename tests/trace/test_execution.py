"""Statements of every kind, and names given from outside."""

import pytest

from bitweight.arithmetic.expressions import Literal
from bitweight.trace.execution import Execution
from bitweight.trace.patterns import CODE, excerpt
from tracing_cases import INT32, Expected, check, context_of, entry


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        ("static int last; last = adc() * 2; mv = last;", (200, 8000)),
        ("static int a[2] = {1, 2}; a[0] = adc(); mv = a[0] * a[1];", (200, 8000)),
        ("static int n; n++; if (n >= 8) n = 0; mv = adc() * 2;", (200, 8000)),
        ("extern int other; mv = adc() * other;", "other is not defined in the given sources"),
        ("int scaled(int); mv = adc();", (100, 4000)),
        ("enum { GAIN = 3 }; mv = adc() * GAIN;", (300, 12000)),
        ("struct s { int a, b; }; struct s x = {1, 2}; mv = adc() * x.b;", (200, 8000)),
        ("; { } int v = adc(); /* nothing */ mv = v; return;", (100, 4000)),
        ("int v[] = {1, 2, 3}; mv = adc() * (int)(sizeof v / sizeof v[0]);", (300, 12000)),
        ("mv = ({ int t = adc(); t * 2; });", (200, 8000)),
        ("mv = adc() + ({ return; 3; });", "a statement expression of this form"),
        ("out: mv = adc();", (100, 4000)),
    ],
)
def test_statements(body: str, expected: Expected) -> None:
    """Declarations in a block, empty statements, labels and statement expressions."""
    check(entry(body), expected)


def test_a_name_is_bound_from_outside() -> None:
    """What stands for the code in a `value` of the board file is a local of its own type."""
    context = context_of("#define MV(x) ((x) * 3)\nint unused(void) { return 0; }\n")
    context.program.load("unused")
    unit = excerpt("MV($code)", context.program.units["main.c"])
    execution = Execution(context, unit)
    execution.bind(CODE, Literal(value=14, type=INT32.int_))
    tree = unit.parser.expression()
    assert tree is not None
    assert execution.fixed(execution.value(tree)) == 42
