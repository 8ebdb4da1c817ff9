"""Placeholders replaced by what the whole tree says."""

import pytest

from tracing_cases import HEAD, Expected, at_codes, check, entry, traced


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("static uint16_t a, b;\nvoid s1(void) { a = adc(); }\nvoid s2(void) { b = a * 2; }",
         "mv = b + 1;", (201, 8001)),
        ("static uint8_t last;\nvoid isr(void) { last = adc(); }", "mv = last * 2;", (200, 320)),
        ("static struct { int v[2]; } g;\nvoid isr(void) { g.v[1] = adc(); }", "mv = g.v[1] * 2;",
         (200, 8000)),
        ("static uint16_t raw;\nvoid isr(void) { raw = adc(); }\nvoid reset(void) { raw = 0; }",
         "mv = raw * 2;", (200, 8000)),
        ("static float k = 1.5f;", "mv = adc() * k;", (150, 6000)),
        ("static int gain = 3;\nvoid tune(void) { gain = eeprom_read(); }", "mv = adc() * gain;",
         (300, 12000)),
        ("static int gain;\nvoid tune(void) { gain = eeprom_read(); }", "mv = adc() * gain;",
         "gain is set at run time"),
        ("static int gain;\nvoid init(void) { gain = 4; }", "mv = adc() * gain;", (400, 16000)),
        ("static int a, b;\nvoid f(void) { a = b; }\nvoid g(void) { b = a; }", "mv = adc() * a;",
         "a is set at run time"),
        ("static int acc;\nvoid f(void) { acc = (acc * 7 + adc()) / 8; }", "mv = acc;",
         "acc is computed from its own earlier value"),
        ("static int lo, hi;\nvoid f(void) { lo = adc(); hi = lo + 5; }", "mv = hi - lo + adc();",
         (105, 4005)),
    ],
)  # fmt: skip
def test_objects_hold_what_the_tree_writes(before: str, body: str, expected: Expected) -> None:
    """An object has the value that some function writes; one that carries a reading comes first."""
    check(entry(body, before), expected)


def test_objects_of_other_files() -> None:
    """Values travel across files through globals, headers and results."""
    check(
        {
            "acq.h": "extern uint16_t acq_raw[2];\nuint16_t acq_get(int i);\n",
            "acq.c": '#include "acq.h"\nuint16_t adc(void);\nuint16_t acq_raw[2];\n'
            "void acq_isr(void) { acq_raw[1] = adc(); }\n"
            "uint16_t acq_get(int i) { return acq_raw[i]; }\n",
            "main.c": '#include "acq.h"\nint mv;\nvoid entry(void) { mv = acq_get(1) * 2; }\n',
        },
        (200, 8000),
    )


def test_a_default_that_something_overwrites_is_assumed() -> None:
    """A declared value that may change is used, and the conversion says so."""
    text = "static int gain = 3;\nvoid tune(int v) { gain = v; }\n"
    trace = traced(entry("mv = adc() * gain;", text), value="mv")
    (assumption,) = trace.conversions[0].assumed
    assert assumption.message == (
        "gain is judged at its declared value, which the program may overwrite"
    )
    assert at_codes(trace.conversions[0].expression, (100,)) == [300]


def test_a_pointer_kept_elsewhere_is_a_way_to_write() -> None:
    """An object whose address an initialiser takes may be overwritten through it."""
    text = "static int gain = 3;\nstatic int *where = &gain;\nvoid tune(int v) { *where = v; }\n"
    trace = traced(entry("mv = adc() * gain;", text), value="mv")
    assert len(trace.conversions[0].assumed) == 1


def test_values_that_are_equal_are_one_way() -> None:
    """Writers that agree leave one value, those that do not leave a reason."""
    two = "static int k;\nvoid a(void) {{ k = 2; }}\nvoid b(void) {{ k = {}; }}\n"
    check(entry("mv = adc() * k;", two.format(2)), (200, 8000))
    check(entry("mv = adc() * k;", two.format(3)), "mv is computed in 2 ways")


def test_a_parameter_that_nothing_gives_is_unknown() -> None:
    """A function that no source calls has unknown parameters."""
    check(
        HEAD + "void entry(int k) { mv = adc() * k; }",
        "k is a parameter of entry(), and no call that gives it is followed",
    )


def test_too_many_ways_are_none() -> None:
    """A value that depends on many things decided at run time is not enumerated."""
    names = [f"k{i}" for i in range(5)]
    text = "".join(
        f"static int {n};\nvoid a{n}(void) {{ {n} = 2; }}\nvoid b{n}(void) {{ {n} = 3; }}\n"
        for n in names
    )
    check(entry(f"mv = adc() * {' * '.join(names)};", text), "too many things")
