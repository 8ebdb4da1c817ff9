"""Expressions of every kind, and what is not followed."""

import pytest

from tracing_cases import HEAD, Expected, check, entry, traced


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("", "mv = adc() + 'A';", (165, 4065)),
        ("", "mv = adc() * 010 + 0x1F;", (831, 32031)),
        ("", "mv = (adc() * 0x1F4UL) >> 10;", (48, 1953)),
        ("#define CLAMP(x) ({ int t_ = (x); t_ > 4000 ? 4000 : t_; })", "mv = CLAMP(adc() * 2);",
         (200, 4000)),
        ("#define SQ(x) ((x) * (x))", "mv = SQ(adc() + 1);", (10201, 16008001)),
        ("#define RD(d) do { (d) = adc(); (d) &= 0xF0; } while (0)", "int v; RD(v); mv = v * 2;",
         (192, 320)),
        ("", 'mv = adc() * "x";', "a string is not a number"),
        ("struct s { int a; };\nstatic struct s g;", "mv = adc() * g;",
         "a struct is used as a number"),
        ("", "int v; mv = adc() * (int)(&v);", "an address as a number"),
    ],
)  # fmt: skip
def test_expressions(before: str, body: str, expected: Expected) -> None:
    """Constants, macros and statement expressions give their C value; the rest a reason."""
    check(entry(body, before), expected)


@pytest.mark.parametrize(
    "body",
    [
        "mv = adc() SCALE;",
        "int v = adc() SCALE; mv = v;",
        "int v = adc(); v = v * 2 SCALE; mv = v;",
        "mv = scaled(3 adc());",
        "mv = (adc() SCALE);",
        "mv = adc() > 5 ? adc() SCALE : 0;",
        "int v; v = adc(); v = v @ 2; mv = v;",
    ],
)
def test_an_unknown_macro_beside_a_value_leaves_no_number(body: str) -> None:
    """`adc() SCALE` with a header missing may be anything: it is never taken for `adc()`."""
    check(entry(body), "broken C")


def test_a_result_beside_an_unknown_macro_is_unknown() -> None:
    """The value of `return` is not taken without what stands behind it."""
    check(entry("mv = f();", "static int f(void) { return adc() SCALE; }"), "broken C")


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        ('int v = adc(); __asm__ volatile ("lsl %0" : "+r"(v)); mv = v;', "asm"),
        ('int v = adc(); int *p = &v; asm("str" :: "r"(p)); mv = v;', "asm"),
        ('int v = adc(); asm("nop v"); mv = v;', (100, 4000)),
        ("int v = adc(); WITH_LOCK(1) { v = v * 2; } mv = v;", "a macro that is not defined"),
        ("int v = adc(); WITH_LOCK(irq) { v = v * 2; } mv = v;", "a macro that is not defined"),
        ("int v = adc(); UNLESS_TEST { v = v * 2; } mv = v;", "a macro that is not defined"),
        ("int v = adc(); if (flag()) NEVER { v = v * 2; } mv = v;", "broken C"),
        ("int v = adc(); ALIGNED(4) w = v * 2; mv = w;", "w is not defined"),
        ("int v = adc(); FOR_ALL(i) v = v * 2; mv = v;", "v has the type FOR_ALL(i)"),
        ("int v = adc(); ATOMIC_BLOCK(ATOMIC_FORCEON) { v = v * 2; } mv = v;", (200, 8000)),
    ],
)
def test_what_is_not_followed_spoils_what_it_mentions(body: str, expected: Expected) -> None:
    """Assembly and unknown block macros make the objects unknown that their text names."""
    check(entry(body), expected)


def test_deep_nesting_is_refused() -> None:
    """An expression nested beyond the limit gives a reason, in bounded time."""
    deep = "(" * 5000 + "adc()" + ")" * 5000
    trace = traced(f"{HEAD}void entry(void) {{ mv = {deep} + 1; }}", value="mv")
    assert trace.reason is not None
    assert not trace.conversions
