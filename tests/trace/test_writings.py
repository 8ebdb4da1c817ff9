"""What functions write, and what their callers give."""

import pytest

from tracing_cases import HEAD, Expected, check, entry


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("static int stored;\nvoid set(int v) { stored = v; }\nvoid isr(void) { set(adc() * 3); }",
         "mv = stored;", (300, 12000)),
        ("static int stored;\nvoid set(uint8_t v) { stored = v; }\nvoid isr(void) { set(adc()); }",
         "mv = stored;", (100, 160)),
        ("static int stored;\nvoid set(int v) { stored = v; }\nvoid mid(int w) { set(w + 1); }\n"
         "void isr(void) { mid(adc()); }", "mv = stored;", (101, 4001)),
        ("static int stored;\nvoid set(int *p, int v) { *p = v; }\n"
         "void isr(void) { set(&stored, adc()); }", "mv = stored * 2;", (200, 8000)),
        ("struct s { int a, b; };\nstatic struct s g;\nvoid isr(void) { struct s t = {1, adc()};"
         " g = t; }", "mv = g.b * 2;", (200, 8000)),
        ("struct s { int a, b; };\nstatic struct s g, h;\nvoid isr(void) { h.b = adc(); g = h; }",
         "mv = g.b * 2;", (200, 8000)),
        ("static uint16_t buf[4];\nvoid isr(int i) { buf[i] = adc(); }", "mv = buf[2] * 2;",
         (200, 8000)),
        ("union u { int w; short s; };\nstatic union u g;\nvoid isr(void) { g.w = adc(); }\n"
         "void other(void) { g.s = 1; }", "mv = g.w;", "g.w is read as g.s was written"),
    ],
)  # fmt: skip
def test_values_are_those_of_the_writers(before: str, body: str, expected: Expected) -> None:
    """A setter writes what its callers give; structs, elements and unions are told apart."""
    check(entry(body, before), expected)


def test_a_setter_with_very_many_callers_is_doubtful() -> None:
    """Callers beyond the bound are not left out in silence."""
    calls = "".join(f"void c{i}(void) {{ set({i}); }}\n" for i in range(80))
    text = "static int k;\nvoid set(int v) { k = v; }\n" + calls
    check(HEAD + text + "void entry(void) { mv = adc() * k; }", "too many")
