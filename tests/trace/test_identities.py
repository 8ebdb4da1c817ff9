"""Which object, function or reading is meant, whatever way leads to it."""

import pytest

from tracing_cases import Expected, check, entry, outcome, traced

RING = "extern volatile uint16_t ring[4];\nextern uint16_t adc(void);\nint mv;\n"
ROWS = "#define LIST(X) X(batt, 0, 11) X(solar, 1, 21)\nuint16_t buf[2];\n"


@pytest.mark.parametrize(
    ("code", "expected"),
    [
        ("void f(void) { uint32_t s = 0; const volatile uint16_t *p = ring;"
         " for (int i = 0; i < 4; i++) s += *p++; mv = s; }", (400, 16000)),
        ("void f(void) { uint32_t s = 0; const volatile uint16_t *p = ring;"
         " for (int i = 0; i < 4; i++) s += p[i]; mv = s >> 2; }", (100, 4000)),
        ("void f(void) { uint32_t s = 0; const volatile uint16_t *p;"
         " for (p = ring; p < ring + 4; p++) s += *p; mv = s >> 1; }", (200, 8000)),
        ("void f(void) { uint32_t s = 0; const volatile uint16_t *p = ring, *e = &ring[4];"
         " while (p != e) s += *p++; mv = s / (e - ring); }", (100, 4000)),
        ("static int sum(const volatile uint16_t *p, int n) { int s = 0; while (n--) s += p[n];"
         " return s; }\nvoid f(void) { mv = sum(ring, 4); }", (400, 16000)),
        ("struct s { const volatile uint16_t *src; int mul; };\n"
         "static const struct s all[] = { { &ring[2], 3 } };\n"
         "void f(void) { for (unsigned i = 0; i < sizeof all / sizeof *all; i++)"
         " mv = *all[i].src * all[i].mul; }", (300, 12000)),
    ],
)  # fmt: skip
def test_elements_are_recognised_where_a_pointer_leads_to_them(
    code: str, expected: Expected
) -> None:
    """A reading that names an object is met through any pointer to it."""
    check(RING + code, expected, "ring[$any]")


def test_another_element_is_not_the_reading() -> None:
    """A pointer to the element beside the one named reads something else."""
    code = "void f(void) { const volatile uint16_t *p = ring; mv = p[1] * 2; }"
    assert isinstance(outcome(RING + code, "ring[2]"), str)


@pytest.mark.parametrize(
    ("reading", "value", "expected"),
    [("buf[0]", "batt_mv", (1100, 44000)), ("buf[1]", "solar_mv", (2100, 84000))],
)
def test_functions_of_one_macro_use_are_told_apart(
    reading: str, value: str, expected: Expected
) -> None:
    """An X-macro makes a function a row; each is followed with its own constants."""
    rows = "#define FN(n, i, k) int n##_mv(void) { return buf[i] * k; }\nLIST(FN)\n"
    check(ROWS + rows, expected, reading, value)


@pytest.mark.parametrize("value", ["out[FLOW]", "out[LAST]", "out[1]", "out[FLOW + 0]"])
def test_a_value_may_have_an_enumerator_for_its_subscript(value: str) -> None:
    """Subscripts of a value are constants as those of a reading are."""
    before = "#define LAST 1\nenum { TEMP, FLOW };\nint out[2];"
    check(entry("out[FLOW] = adc() * 3; out[TEMP] = 1;", before), (300, 12000), value=value)


def test_two_readings_with_one_formula_are_one_way() -> None:
    """The halves of a buffer that are converted alike are one conversion."""
    code = "uint16_t b[4];\nstatic uint16_t raw;\nint mv;\n" + (
        "void half(void) { raw = b[0]; }\nvoid full(void) { raw = b[2]; }\n"
        "void turn(void) { mv = raw * {}; }\n"
    )
    check(code.replace("{}", "3"), (300, 12000), "b[$any]")


def test_two_readings_with_two_formulas_are_two_ways() -> None:
    """Halves that are converted differently are not taken for each other."""
    code = "uint16_t b[4];\nstatic int raw;\nint mv;\n" + (
        "void half(void) { raw = b[0] * 2; }\nvoid full(void) { raw = b[2] * 3; }\n"
        "void turn(void) { mv = raw; }\n"
    )
    found = outcome(code, "b[$any]")
    assert isinstance(found, str)
    assert "is computed in 2 ways" in found


def test_an_object_with_two_types_has_none() -> None:
    """Files that declare one object differently leave its width open."""
    sources = {
        "a.c": "unsigned short raw;\n",
        "b.c": "extern unsigned char raw;\nint mv;\nvoid f(void) { mv = raw * 2; }\n",
    }
    reason = traced(sources, "raw", "mv").reason
    assert reason == "raw is declared as unsigned char and, in another file, unsigned short"


def test_a_result_that_another_function_changes_again_is_not_the_first_one() -> None:
    """What a second function makes of the result is not passed over."""
    code = entry("mv = adc() * 3;") + "void again(void) { mv = mv * 102 / 100; }\n"
    found = outcome(code)
    assert isinstance(found, str)
    assert "mv is computed from its own earlier value" in found
