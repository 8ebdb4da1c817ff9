"""Objects within a run: written, read, copied, and what cannot be told."""

import pytest

from tracing_cases import Expected, check, entry

PAIR = "struct pair { uint16_t a; int b; };\n"
WORD = "union word { uint16_t w; uint8_t b[2]; int16_t s; };\n"


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        (PAIR, "struct pair x; x.a = adc(); x.b = 5; mv = x.a * x.b;", (500, 20000)),
        (PAIR, "struct pair x = {1, 2}; x.a = adc(); struct pair y = x; x.a = 3; mv = y.a + y.b;",
         (102, 4002)),
        (PAIR + "static void f(struct pair *p) { p->a = adc(); p->b = p->a * 3; }",
         "struct pair x; f(&x); mv = x.b;", (300, 12000)),
        (PAIR + "static struct pair f(int v) { struct pair x = {v, 2}; x.b = x.a * 3; return x; }",
         "mv = f(adc()).b;", (300, 12000)),
        ("struct s { uint16_t v[3]; int n; };",
         "struct s a = {{1, 2, 3}, 4}; a.v[1] = adc(); struct s b = a; a.v[1] = 0;"
         "mv = b.v[1] * b.n + b.v[2];", (403, 16003)),
        ("", "int a[4]; a[0] = 1; a[1] = adc(); a[2] = a[1] * 2; mv = a[2] + a[0];", (201, 8001)),
        ("static int a[2] = {1, 3};", "a[0] = adc(); mv = a[0] * 2;", (200, 8000)),
        ("", "int m[2][3] = {{1, 2}, {3, 4, 5}}; m[1][0] = 6; mv = adc() * m[1][2] + m[1][0];",
         (506, 20006)),
        ("struct s { unsigned lo : 4; unsigned hi : 8; };",
         "struct s x; x.lo = adc(); x.hi = adc() >> 4; mv = x.lo + x.hi * 100;", (604, 25000)),
        ("static struct { int gain; } cfg = {4};", "mv = adc() * cfg.gain;", (400, 16000)),
    ],
)  # fmt: skip
def test_what_is_written_is_read(before: str, body: str, expected: Expected) -> None:
    """Members, elements and bit fields hold what was stored last, converted to their type."""
    check(entry(body, before), expected)


@pytest.mark.parametrize(
    ("before", "body", "reason"),
    [
        ("", "int v; mv = v * adc();", "v is read before it is set"),
        ("", "int a[2]; a[0] = adc(); a[flag()] = 5; mv = a[0];",
         "a is written at a subscript that is not constant"),
        ("static const int t[] = {1, 2};", "mv = t[flag()] * adc();",
         "t.* is read at a subscript that is not constant"),
        (WORD, "union word x; x.w = adc(); mv = x.b[0];", "x.b[0] is read as x.w was written"),
        (WORD, "union word x; x.s = 0; x.w = adc(); mv = x.s + x.w;",
         "x.s is read as x.w was written"),
        (WORD + "static union word g;", "g.s = 0; g.w = adc(); mv = g.s * 2 + adc();",
         "g.s is read as g.w was written"),
        (WORD, "union word x = {0}; x.w = adc(); mv = x.s + 1;", "x.s is read as x.w was written"),
        ("struct s { union { uint16_t w; uint8_t b[2]; }; int k; };",
         "struct s x; x.k = 3; x.w = adc(); mv = x.b[0] * x.k;", "x.b[0] is read as x.w was"),
        ("", "uint16_t x = adc(); mv = *(uint8_t *)&x;", "x is read as another type than its own"),
        ("", "uint16_t x = adc(); *(uint8_t *)&x = 0; mv = x;",
         "x is written as another type than its own"),
        ("", "uint16_t x[2]; x[0] = 1; x[1] = adc(); uint8_t *p = (uint8_t *)x; mv = p[1];",
         "x[0] is read as another type than its own"),
        ("struct a { int q, v; }; struct b { int v, q; };",
         "struct a x; x.q = adc(); x.v = 5; mv = ((struct b *)&x)->v;",
         "x is read as another type than its own"),
        ("static millivolts_t last;", "last = adc() * 2; mv = last;",
         "last has the type millivolts_t, which the given sources do not define"),
    ],
)  # fmt: skip
def test_what_cannot_be_told_is_no_number(before: str, body: str, reason: str) -> None:
    """Unions, casts between pointers, unknown subscripts and unknown types never give a value."""
    check(entry(body, before), reason)


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        (WORD, "union word x; x.b[0] = 1; x.w = adc(); mv = x.w;", (100, 4000)),
        ("struct s { union { uint16_t w; uint8_t b[2]; }; int k; };",
         "struct s x; x.k = 3; x.b[0] = 1; x.w = adc(); mv = x.w * x.k;", (300, 12000)),
        ("", "int a[2]; a[flag()] = 5; a[1] = adc(); mv = a[1];", (100, 4000)),
        ("", "uint16_t x = adc(); mv = *(int16_t *)&x;", (100, 4000)),
        ("struct s { float q; }; struct s g;\n"
         "static void f(void *c) { struct s *p = c; p->q = adc() * 0.5f; }",
         "f(&g); mv = g.q * 4;", (200, 8000)),
    ],
)  # fmt: skip
def test_the_member_written_last_is_known(before: str, body: str, expected: Expected) -> None:
    """The doubt ends with the next write; a pointer to void keeps the type of its object."""
    check(entry(body, before), expected)
