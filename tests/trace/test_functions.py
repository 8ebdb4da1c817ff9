"""Functions followed from their arguments to their result."""

import pytest

from bitweight.limits import Limits
from tracing_cases import HEAD, UNKNOWN, Expected, at_codes, check, entry, traced


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("static int f(uint16_t r) { return r * 3300 / 4096; }", "mv = f(adc());", (80, 3222)),
        ("static int f(uint8_t r) { return r * 2; }", "mv = f(adc());", (200, 320)),
        ("static uint8_t f(int r) { return r; }", "mv = f(adc());", (100, 160)),
        ("static int f(int v) { v *= 3; return v; }", "int v = adc(); mv = f(v) + v;",
         (400, 16000)),
        ("int f(r, k) int r; uint8_t k; { return r * k; }", "mv = f(adc(), 3);", (300, 12000)),
        ("f(r) { return r * 2; }", "mv = f(adc());", (200, 8000)),
        ("f(r, k) { return r * k; }", "mv = f(adc(), 3);", (300, 12000)),
        ("f() { return adc() + 1; }", "mv = f();", (101, 4001)),
        ("static int g(int x) { return x + 1; }\nstatic int f(int x) { return g(x) * 2; }",
         "mv = f(g(adc()));", (204, 8004)),
        ("static void rd(uint16_t b[2]) { b[0] = adc(); b[1] = 5; }",
         "uint16_t b[2]; rd(b); mv = b[1] * b[0];", (500, 20000)),
        ("static int f(void) { uint16_t r = adc(); if (r < 500) return 7; if (r > 4090) return -1;"
         " return r * 2; }", "mv = f();", (7, 8000)),
        ("static int out;\nstatic void f(void) { uint16_t r = adc(); out = 1; if (r < 500) return;"
         " out = r * 2; }", "f(); mv = out;", (1, 8000)),
        ("static int f(int *out) { if (!out) return -1; *out = adc(); return 0; }",
         "int v; if (f(&v) == 0) mv = v * 2; else mv = 0;", (200, 8000)),
        ("static int f(int x) { if (x > 5) return x; }", "mv = f(adc());", (100, 4000)),
        ("static int f(int x) { if (x > 500) return x; }", "mv = f(adc());", (UNKNOWN, 4000)),
        ("static void f(int x) { }", "mv = f(adc());", "f() returns nothing here"),
    ],
)  # fmt: skip
def test_arguments_and_results_are_converted(before: str, body: str, expected: Expected) -> None:
    """Parameters, returns and their order are those of C; every way out is followed."""
    check(entry(body, before), expected)


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        ("int v = adc(); if (v > 2000) goto out; v = v * 2; out: mv = v;", (200, 4000)),
        ("mv = adc(); if (adc() > 2000) goto out; mv = mv * 2; out: mv = mv + 1;", (201, 4001)),
        ("int i, v = 0; for (i = 0; i < 4; i++) { v += adc(); if (i == 2) goto out; } v = 0;"
         " out: mv = v;", (300, 12000)),
        ("int n = 3, s = 0; again: s += adc(); if (--n) goto again; mv = s;",
         "jumps back or into a block with goto"),
        ("int v = adc(); if (v > 10) goto in; if (v) { v = 3; in: v += 1; } mv = v;",
         "jumps back or into a block with goto"),
        ("mv = adc(); again: mv = mv + 1; if (mv < 10) goto again;", "goto"),
    ],
)  # fmt: skip
def test_goto(body: str, expected: Expected) -> None:
    """A jump forward to a label of the same or an outer block is followed, no other is."""
    check(entry(body), expected)


LEAVES_EARLY = (
    "int f(void) { int t; uint16_t r = adc(); if (r > 4090) return -1; t = r * 3; return t; }"
)


def test_a_local_is_taken_where_it_is_set() -> None:
    """A way out before a wanted local is set takes nothing from its value."""
    check(HEAD + LEAVES_EARLY, (300, 12000), value="t")


def test_a_function_that_takes_too_long_leaves_no_value() -> None:
    """What a function had written when its steps ran out is unknown, not half a sum."""
    source = entry("mv = 0; for (int i = 0; i < 4000; i++) mv += adc();")
    trace = traced(source, value="mv", limits=Limits(steps=500))
    assert trace.reason == "entry(): the code is too long to follow (500 steps)"
    short = traced(entry("mv = 0; for (int i = 0; i < 10; i++) mv += adc();"), value="mv")
    assert at_codes(short.conversions[0].expression, [7]) == [70]
