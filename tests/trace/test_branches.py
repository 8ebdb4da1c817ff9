"""Sequences and forks."""

import pytest

from tracing_cases import Expected, check, entry

MODES = (
    "enum mode { A, B, C };\nstatic int f(enum mode m, int x) { switch (m) { case A: return x;"
    " case B: { x *= 2; break; } case C: x *= 3; } return x + 1; }"
)


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        ("uint16_t r = adc(); if (r < 500) mv = 0; else if (r < 2000) mv = r * 2;"
         " else mv = r * 3;", (0, 12000)),
        ("int v = adc(); if (v > 3000) v = 3000; if (v < 500) v = 500; mv = v;", (500, 3000)),
        ("if (1) mv = adc(); else mv = 7;", (100, 4000)),
        ("mv = adc(); if (0) { mv = 7; }", (100, 4000)),
        ("int v = adc(); if (v > 2000) { int w = v * 2; v = w; } mv = v;", (100, 8000)),
    ],
)  # fmt: skip
def test_if(body: str, expected: Expected) -> None:
    """Both arms are followed, one where the condition is constant."""
    check(entry(body), expected)


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        (MODES, "mv = f(A, adc());", (100, 4000)),
        (MODES, "mv = f(B, adc()) + f(C, adc());", (502, 20002)),
        ("static int f(int m) { switch (m) { default: return 7; case 1: return adc(); } }",
         "mv = f(1);", (100, 4000)),
        ("static int f(int m) { switch (m) { default: return adc(); case 1: return 7; } }",
         "mv = f(5);", (100, 4000)),
        ("static int f(int m) { switch (m) { case 1: return 7; } return adc(); }",
         "mv = f(5);", (100, 4000)),
    ],
)  # fmt: skip
def test_switch_on_a_constant(before: str, body: str, expected: Expected) -> None:
    """The case that is selected is followed, with what it falls through to."""
    check(entry(body, before), expected)


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        ("int r = adc(); switch (r >> 10) { case 0: r = r * 2; case 1: r += 1; break;"
         " case 3: r = r * 4; break; default: r = 9; } mv = r;", (201, 16000)),
        ("int r = adc(); switch (r) { default: r = r + 5; break; case 100: r = r + 6; break;"
         " case 3000 ... 4095: r += 7; } mv = r;", (106, 4007)),
        ("int r = adc(); switch (r > 2000) { case 1: mv = r; break; case 0: mv = r * 2; break;"
         " default: mv = r; }", (200, 4000)),
        ("int s = 0; for (int i = 0; i < 4; i++) { switch (i) { case 1: continue;"
         " case 2: s += 10; break; default: s += adc(); } s += 1; } mv = s;", (213, 8013)),
    ],
)  # fmt: skip
def test_switch_by_code(body: str, expected: Expected) -> None:
    """Each case is followed from the same state and holds for its own codes."""
    check(entry(body), expected)


def test_a_decision_at_run_time_leaves_two_ways() -> None:
    """Two conversions that something unknown decides between are not chosen from."""
    body = "if (flag()) mv = adc() * 2; else mv = adc() * 3;"
    check(entry(body), "mv is computed in 2 ways, decided at run time: adc() * 2 or adc() * 3")


def test_a_way_without_the_reading_drops_out() -> None:
    """Beside a conversion, a constant that something unknown selects is no way of its own."""
    check(entry("mv = -1; if (flag()) mv = adc() * 2;"), (200, 8000))
