"""Calls: into the sources, out of them, and through pointers."""

import pytest

from tracing_cases import HEAD, Expected, check, entry

TWO = "static int dbl(int x) { return 2 * x; }\nstatic int tri(int x) { return 3 * x; }\n"
OPS = (
    "typedef struct { uint16_t (*read)(void); int gain; } ops_t;\n"
    "static uint16_t rd(void) { return adc(); }\n"
    "static const ops_t ops[] = { { rd, 3 }, { .read = rd, .gain = 5 } };\n"
)


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        (OPS, "mv = ops[1].read() * ops[1].gain;", (500, 20000)),
        (OPS, "const ops_t *o = &ops[0]; mv = o->read() * o->gain;", (300, 12000)),
        (TWO + "static int (*const f)(int) = dbl;", "mv = f(adc());", (200, 8000)),
        (TWO, "int (*f)(int) = &dbl; mv = (*f)(adc());", (200, 8000)),
        (TWO + "static int app(int (*f)(int), int x) { return f(x); }",
         "mv = app(dbl, adc()) + app(&tri, 1);", (203, 8003)),
        (TWO + "typedef int (*fn)(int);\nstatic const fn tab[] = { dbl, tri };",
         "int s = 0; for (unsigned i = 0; i < sizeof tab / sizeof *tab; i++) s += tab[i](adc());"
         " mv = s;", (500, 20000)),
        (TWO, "int (*f)(int) = flag() ? dbl : tri; mv = f(adc());",
         "a call through a pointer that is not constant"),
        (TWO + "static int (*f)(int) = dbl;\nvoid setf(void) { f = tri; }", "mv = f(adc());",
         "a call through a pointer that is not constant"),
        ("", "mv = other(adc());", "other() is not defined in the given sources"),
        ("int twice(int);", "mv = twice(adc());", "twice() is not defined in the given sources"),
        ("static int f(int n) { return n ? f(n - 1) + adc() : 0; }", "mv = f(3);",
         "f() calls itself"),
        ("", "mv = abs((int)adc() - 2048);", (1948, 1952)),
        ("", "mv = __builtin_expect(adc() > 2000, 0) ? 1 : adc();", (100, 1)),
        ("static const uint16_t t[] = {2, 3};", "mv = adc() * pgm_read_word(&t[1]);",
         (300, 12000)),
        ("", "mv = adc() * _BV(3);", (800, 32000)),
    ],
)  # fmt: skip
def test_calls(before: str, body: str, expected: Expected) -> None:
    """A call is followed where one function is meant, else the reason says what is missing."""
    check(entry(body, before), expected)


def test_a_call_that_two_files_define_is_not_followed() -> None:
    """Which of two definitions is linked is not known; what both write is doubtful."""
    two = "int k = 1;\nint scale(int x) { k = 2; return x * 2; }\n"
    check(
        {
            "a.c": two,
            "b.c": "int scale(int x) { return x * 3; }\n",
            "main.c": HEAD + "int scale(int);\nvoid entry(void) { mv = scale(adc()); }\n",
        },
        "scale() is defined 2 times in the sources; exclude all but one",
    )


def test_a_weak_function_gives_way() -> None:
    """A strong definition of the same name is the one that is linked."""
    check(
        {
            "weak.c": "__attribute__((weak)) int scale(int x) { return x; }\n",
            "strong.c": "int scale(int x) { return x * 3; }\n",
            "main.c": HEAD + "int scale(int);\nvoid entry(void) { mv = scale(adc()); }\n",
        },
        (300, 12000),
    )


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("", "int v = adc(); refine(&v); mv = v * 2;", "v is filled by a call: refine()"),
        ("", "int v[2]; v[1] = adc(); refine(v); mv = v[1];", "v"),
        ("struct s { int a; };\nstatic void f(struct s *p) { p->a = adc(); refine(&p->a);"
         " mv = p->a; }\nstruct s g;", "f(&g);", "refine() is not defined"),
        ("void show(const int *);", "int v = adc(); show(&v); mv = v * 2;", (200, 8000)),
        ("static int k;\nstatic void r(int n) { k = 5; if (n) r(n - 1); }",
         "mv = adc(); k = 1; r(2); mv = mv * k;", "r() calls itself"),
        ("", "uint16_t v = adc(); refine((uint8_t *)&v); mv = v;", "v is filled by a call"),
    ],
)  # fmt: skip
def test_what_a_call_may_change_is_unknown(before: str, body: str, expected: Expected) -> None:
    """An object whose address leaves the sources is doubtful, unless it is only read."""
    check(entry(body, before), expected)


def test_a_struct_that_is_handed_out_is_an_end() -> None:
    """What an object held when a function outside got its address is a result of its own."""
    before = "struct report { int level; int raw; } report;\nvoid send(struct report *);\n"
    body = "report.raw = adc(); report.level = report.raw * 2; send(&report);"
    check(entry(body, before), (200, 8000), value="report.level")
