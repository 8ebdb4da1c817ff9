"""Loops with constant bounds, of unknown length, and endless ones."""

import pytest

from tracing_cases import HEAD, Expected, check, entry

TABLES = "static const int xs[] = {0, 1000, 2000, 4096};\nstatic const int ys[] = {0, 10, 40, 100};"


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("", "uint32_t s = 0; for (int i = 0; i < 16; i++) s += adc(); mv = s >> 4;",
         (100, 4000)),
        ("", "int n = 8; uint32_t s = 0; while (n--) s += adc(); mv = s / 8;", (100, 4000)),
        ("", "int n = 4; uint32_t s = 0; do { s += adc(); } while (--n > 0); mv = s;",
         (400, 16000)),
        ("", "int i = 4, s = 0; while (--i) s += adc(); mv = s;", (300, 12000)),
        ("", "int s, i; for (s = 0, i = 0; i < 4; s += adc(), i++) ; mv = s;", (400, 16000)),
        ("", "uint32_t s = 0; for (int i = 0; i < 8; i++) { if (i & 1) continue; s += adc(); }"
         " mv = s;", (400, 16000)),
        ("", "int s = 0; for (int i = 0; i < 4; i++) { for (int j = 0; j < 4; j++) {"
         " if (j == 2) break; s += adc(); } } mv = s;", (800, 32000)),
        ("", "uint32_t s = 0; for (int i = 0;; i++) { if (i == 4) break; s += adc(); } mv = s;",
         (400, 16000)),
        ("static int f(void) { int n = 0; while (1) { n++; if (n == 3) return adc() * n; } }",
         "mv = f();", (300, 12000)),
        ("", "int v = 0; for (int i = 0; i < 8; i++) { v = adc() + i; if (v > 2000) break; }"
         " mv = v;", (107, 4000)),
        (TABLES, "int v = adc(), r = 0; for (int i = 0; i < 3; i++) {"
         " if (v >= xs[i] && v < xs[i + 1]) { r = ys[i] + (v - xs[i]) * (ys[i + 1] - ys[i])"
         " / (xs[i + 1] - xs[i]); break; } } mv = r;", (1, 97)),
        ("", "int m = 4095, M = 0; long s = 0; for (int i = 0; i < 6; i++) { int v = adc();"
         " if (v < m) m = v; if (v > M) M = v; s += v; } mv = (s - m - M) / 4;", (100, 4000)),
        ("", "do { mv = adc() * 2; } while (0);", (200, 8000)),
        ("", "int v = adc(); do { if (v < 500) break; v = 500; } while (0); mv = v;",
         (100, 500)),
    ],
)  # fmt: skip
def test_loops_with_constant_bounds(before: str, body: str, expected: Expected) -> None:
    """Turn by turn, with break, continue and return."""
    check(entry(body, before), expected)


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        ("int v; do { v = adc(); } while (flag()); mv = v * 2;", (200, 8000)),
        ("while (flag()) { } mv = adc() * 2;", (200, 8000)),
        ("int n = 0; while (flag()) n++; mv = adc() * 2;", (200, 8000)),
        ("uint32_t s = 0; for (int i = 0; i < flag(); i++) s += adc(); mv = s;",
         "s changes from turn to turn of the loop at line 7, whose number of turns"),
        ("int r = adc(), n = 0; while (r > 100) { r -= 100; n++; } mv = n * 1000 + r;",
         "changes from turn to turn"),
        ("int x = 1, y = 0, n = 0; while (flag()) { y = x; if (n > 0) x = 7; n++; }"
         " mv = y * adc();", "changes from turn to turn"),
        ("int a[4] = {1, 2, 3, 4}; int *p = a; while (flag()) p++; mv = *p * adc();", "p"),
    ],
)  # fmt: skip
def test_loops_of_unknown_length(body: str, expected: Expected) -> None:
    """What a turn changes is unknown when the next one starts, however indirectly."""
    check(entry(body), expected)


def test_a_main_loop_is_steady() -> None:
    """What an endless loop computes from one turn to the next is its result."""
    check(HEAD + "int main(void) { for (;;) { int v = adc(); mv = v * 2; } }", (200, 8000))
    check(
        HEAD + "static int raw;\nint main(void) { while (1) { mv = raw * 2; raw = adc(); } }",
        (200, 8000),
    )


def test_a_filter_is_not_followed() -> None:
    """A value made from its own earlier value says so, with or without an initialiser."""
    for start in ("static int acc;", "static int acc = 0;"):
        check(entry(f"{start} acc += (adc() - acc) / 8; mv = acc;"), "acc is computed from its own")


def test_a_loop_over_everything_is_bounded() -> None:
    """A loop of more turns than are followed counts as one of unknown length."""
    check(entry("long s = 0; for (long i = 0; i < 9999999; i++) s += adc(); mv = s;"), "loop")
