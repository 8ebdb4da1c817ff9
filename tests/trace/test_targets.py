"""Where results are taken from."""

import pytest

from tracing_cases import CODES, Expected, Sources, at_codes, check, entry, outcome, traced

CONVERT = "static int tank_mv(uint16_t raw) { return raw * 2; }\n"


@pytest.mark.parametrize(
    ("value", "before", "body", "expected"),
    [
        ("mv", "", "mv = adc() * 2;", (200, 8000)),
        ("t", "", "int t = adc() * 2; mv = t + 1;", (200, 8000)),
        ("tank_mv", CONVERT, "mv = tank_mv(adc()) + 1;", (200, 8000)),
        ("tank_mv(adc())", CONVERT, "mv = tank_mv(adc()) + 1;", (200, 8000)),
        ("g.level", "struct { int level, raw; } g;", "g.raw = adc(); g.level = g.raw * 2;",
         (200, 8000)),
        ("level", "struct { int level, raw; } g;", "g.raw = adc(); g.level = g.raw * 2;",
         (200, 8000)),
        ("g[1].level", "struct { int level; } g[2];", "g[1].level = adc() * 2; g[0].level = 3;",
         (200, 8000)),
        ("p->level", "struct s { int level; };\nvoid f(struct s *p) { p->level = adc() * 2; }", "",
         (200, 8000)),
        ("MV", "#define MV (adc() * 2)", "mv = MV + 1;", (200, 8000)),
        ("TO_MV($code)", "#define TO_MV(x) ((x) * 2)", "mv = TO_MV(adc()) + 1;", (200, 8000)),
        ("tank_mv($code)", CONVERT, "mv = adc();", (200, 8000)),
        ("TO_MV(adc())", "#define TO_MV(x) ((x) * 2)", "mv = adc();", (200, 8000)),
        ("mv @ entry", "void other(void) { mv = adc() * 3; }", "mv = adc() * 2;", (200, 8000)),
        ("mv @ main.c", "", "mv = adc() * 2;", (200, 8000)),
        ("mv @ other.c", "", "mv = adc() * 2;", "mv is not found"),
        ("nowhere", "", "mv = adc() * 2;", "the reading adc() is found, but nowhere is not found"),
        ("flag_mv", "int flag_mv;", "flag_mv = 3; mv = adc();", "flag_mv is not computed from it"),
        ("scaled(3)", "int scaled(int);", "mv = scaled(3) + adc();", "scaled"),
    ],
)  # fmt: skip
def test_a_value_names_its_end(value: str, before: str, body: str, expected: Expected) -> None:
    """Variables, members, functions, macros and calls, limited to a place if asked."""
    check(entry(body, before), expected, value=value)


def test_calls_are_told_apart_by_their_arguments() -> None:
    """A call as value means the calls with equal constant arguments."""
    source = (
        "uint16_t adc(void);\n#define IDX 2\nint mv;\n"
        "static int temp(int i) { return i == 2 ? adc() * 2 : adc() * 3; }\n"
        "void entry(void) { mv = temp(1) + temp(2); }\n"
    )
    check(source, (200, 8000), value="temp(IDX)")
    check(source, (300, 12000), value="temp(1)")


def test_a_list_of_values_gives_each() -> None:
    """Each value of a list is an end of its own."""
    source = entry("mv = adc() * 2; cv = adc() * 20;", "int cv;")
    assert outcome(source, value=("mv", "cv")) == [(200, 8000), (2000, 80000)]


@pytest.mark.parametrize(
    ("sources", "results"),
    [
        (entry("mv = adc() * 2;"), {"mv": (200, 8000)}),
        (entry("int t = adc() * 2; mv = t;"), {"mv": (200, 8000)}),
        (entry("raw = adc(); mv = raw * 2;", "uint16_t raw;"), {"mv": (200, 8000)}),
        ("uint16_t adc(void);\nint level(void) { return adc() * 2; }", {"level": (200, 8000)}),
        (entry("send(adc() * 2);", "void send(int);"), {"argument 1 of send()": (200, 8000)}),
        (entry("mv = adc() * 2; send(mv);", "void send(int);"), {"mv": (200, 8000)}),
        (entry("raw = adc();", "uint16_t raw;"), {"raw": (100, 4000)}),
    ],
)
def test_without_a_value_every_end_counts(
    sources: Sources, results: dict[str, tuple[int, int]]
) -> None:
    """Objects that outlive, results and arguments that leave; bare copies beside none."""
    trace = traced(sources)
    found = {one.result: tuple(at_codes(one.expression, CODES)) for one in trace.conversions}
    assert found == results
