"""States after a fork."""

import pytest

from tracing_cases import UNKNOWN, Expected, check, entry

PAIR = "struct pair { int a, b; };\nstatic const struct pair lo = {1, 2}, hi = {3, 4};\n"


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("", "int v = adc(); if (v > 2000) v = v * 2; mv = v;", (100, 8000)),
        ("", "int v; if (adc() > 2000) v = adc() * 2; else v = 7; mv = v;", (7, 8000)),
        ("static int out = 1;", "if (adc() > 2000) out = 2; mv = out * adc();", (100, 8000)),
        (PAIR, "struct pair t; if (adc() > 2000) t = hi; else t = lo; mv = t.a * adc();",
         (100, 12000)),
        (PAIR, "struct pair t = lo; if (adc() > 2000) t.a = 9; mv = t.a * adc() + t.b;",
         (102, 36002)),
        (PAIR + "struct pair g;",
         "g.a = 2; if (adc() > 2000) g = hi; else { g.b = 5; } mv = g.a * adc();", (200, 12000)),
        (PAIR, "struct pair x = adc() > 2000 ? hi : lo; mv = adc() * x.a + x.b;", (102, 12004)),
        (PAIR + "static struct pair f(void) { if (adc() > 2000) return hi;"
         " struct pair y = {adc(), 5}; return y; }",
         "struct pair z = f(); mv = z.a * 10 + z.b;", (1005, 34)),
        ("", "int a[2] = {1, 2}; if (adc() > 2000) a[1] = 5; mv = a[1] * adc() + a[0];",
         (201, 20001)),
    ],
)  # fmt: skip
def test_each_object_has_the_value_of_the_arm_taken(
    before: str, body: str, expected: Expected
) -> None:
    """A struct copied from one of two objects is joined member by member."""
    check(entry(body, before), expected)


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("", "int v; if (adc() > 2000) v = 3; mv = v * adc();", (UNKNOWN, 12000)),
        (PAIR, "const struct pair *p = adc() > 2000 ? &hi : &lo; mv = adc() * p->a;", "p"),
        ("static int a = 3, b = 5;",
         "int *p; if (adc() > 2000) p = &a; else p = &b; mv = adc() * *p;", "p"),
        ("", "int a[2] = {1, 2}; if (adc() > 2000) a[flag()] = 5; mv = a[1] * adc();",
         (200, UNKNOWN)),
        ("union u { int i; unsigned w; };",
         "union u x; if (adc() > 2000) x.i = 1; else x.w = 2; mv = x.w * adc();",
         (200, UNKNOWN)),
    ],
)  # fmt: skip
def test_a_value_of_one_arm_alone_is_unknown(before: str, body: str, expected: Expected) -> None:
    """Pointers that differ between the arms, and objects that one arm sets, give no number."""
    check(entry(body, before), expected)
