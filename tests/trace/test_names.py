"""What names mean: locals, enumerators, objects, functions, registers."""

import pytest

from tracing_cases import Expected, check, entry


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("", "int v = adc(); mv = v * 3;", (300, 12000)),
        ("static int v = 5;", "int v = adc(); { int v = 3; mv = v; } mv += v;", (103, 4003)),
        ("", "int i = adc(); for (int i = 0; i < 3; i++) { } mv = i;", (100, 4000)),
        ("enum { A = 3, B, C = B * 2, D };", "mv = adc() * D + C + B;", (912, 36012)),
        ("enum { FIRST, SECOND };", "mv = adc() * SECOND + FIRST;", (100, 4000)),
        ("static const uint16_t K = 7;", "mv = adc() * K;", (700, 28000)),
        ("extern const int K; const int K = 9;", "mv = adc() * K;", (900, 36000)),
        ("static uint16_t gain = 7;", "mv = adc() * gain;", (700, 28000)),
        ("", "mv = adc() * true + false;", (100, 4000)),
        ("", "mv = adc() * ELSEWHERE;", "ELSEWHERE is not defined in the given sources"),
        ("uint16_t cal;", "mv = adc() * cal;", "nothing in the sources writes cal"),
        ("extern uint16_t cal;", "mv = adc() * cal;", "cal is not defined in the given sources"),
    ],
)
def test_a_name_means_what_is_nearest(before: str, body: str, expected: Expected) -> None:
    """The innermost local, then an enumerator, an object, a well-known name, a register."""
    check(entry(body, before), expected)


def test_names_of_a_header_are_those_of_every_unit() -> None:
    """An enumerator and an object that another unit defines are found."""
    check(
        {
            "board.h": "enum { GAIN = 6 };\nextern const int offset;\nextern int mv;\n",
            "board.c": '#include "board.h"\nconst int offset = 11;\nint mv;\n',
            "main.c": '#include "board.h"\nuint16_t adc(void);\n'
            "void entry(void) { mv = adc() * GAIN + offset; }\n",
        },
        (611, 24011),
    )


def test_a_static_object_belongs_to_its_file() -> None:
    """Two files may each have an object of one name; each function sees its own."""
    check(
        {
            "a.c": "static int gain = 2;\nint other(void) { return gain; }\n",
            "main.c": "uint16_t adc(void);\nint mv;\nstatic int gain = 5;\n"
            "void entry(void) { mv = adc() * gain; }\n",
        },
        (500, 20000),
    )


def test_a_negative_enumerator_makes_the_type_signed() -> None:
    """gcc gives an enum with a negative enumerator the type int, else unsigned int."""
    signed = "typedef enum { LOW = -1, HIGH = 1 } level;\nstatic int f(level l)"
    text = "{ return l < 0 ? 2 * (int)adc() : 3 * (int)adc(); }"
    check(entry("mv = f(LOW);", signed + text), (200, 8000))
