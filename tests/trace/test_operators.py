"""Operators on numbers and pointers, assignments, casts, sizeof."""

import pytest

from tracing_cases import Expected, check, entry

TYPES = "typedef uint16_t u16;\ntypedef uint8_t u8;\n"


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        ("mv = (u16)(adc() * 40) + 1;", (4001, 28929)),
        ("int x = adc(); mv = (u16)-x;", (65436, 61536)),
        ("int x = adc(); mv = (u8)-x * 2;", (312, 192)),
        ("int x = adc(); mv = (u8)+x - 1 - 2;", (97, 157)),
        ("int x = adc(); int *p = &x; mv = (u8)*p + 1;", (101, 161)),
        ("mv = (u8)(3, adc());", (100, 160)),
        ("mv = (int16_t)(adc() << 4);", (1600, -1536)),
        ("mv = -(int32_t)adc() + +5;", (-95, -3995)),
        ("mv = (~adc() & 0xff) + !adc();", (155, 95)),
    ],
)
def test_casts_and_signs(body: str, expected: Expected) -> None:
    """A name in parentheses is a cast where it is a type, before signs and lists as well."""
    check(entry(body, TYPES), expected)


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        ("uint8_t v = adc(); v += 200; v <<= 1; mv = v;", (88, 208)),
        ("uint16_t v = adc(); v <<= 4; v >>= 2; v |= 1; v &= ~2u; v ^= 0x10; mv = v;",
         (385, 16017)),
        ("int v = adc(); v *= 3; v -= 5; v /= 2; v %= 1000; mv = v;", (147, 997)),
        ("int a, b; a = b = adc(); mv = a + b;", (200, 8000)),
        ("int a; uint8_t b; a = b = adc(); mv = a;", (100, 160)),
        ("int x = adc(); int y = x++ + 1; mv = y * 10 + x;", (1111, 44011)),
        ("int x = adc(); int y = ++x + 1; mv = y - x--; mv += x;", (101, 4001)),
        ("uint8_t n = 255; n++; mv = adc() + n;", (100, 4000)),
        ("int v; if ((v = adc()) > 200) mv = v * 2; else mv = v;", (100, 8000)),
        ("int x = (flag(), adc()); mv = (x++, x * 2);", (202, 8002)),
    ],
)  # fmt: skip
def test_assignments_convert_to_their_object(body: str, expected: Expected) -> None:
    """Compound assignments, increments and chains give what the object then holds."""
    check(entry(body), expected)


@pytest.mark.parametrize(
    ("body", "expected"),
    [
        ("uint16_t r = adc(); mv = r > 3000 ? 3000 : r * 2;", (200, 3000)),
        ("int v = adc(); mv = v - 100 ?: 7;", (7, 3900)),
        ("mv = (adc() > 10 ? -1 : 1u) > 5 ? adc() : 0;", (100, 4000)),
        ("mv = 1 ? adc() : 5;", (100, 4000)),
        ("int v = adc(), k = 0; if (v > 2000 && (k = 5)) { } mv = v + k;", (100, 4005)),
        ("int v = adc(), k = 0; if (v > 2000 || (k = 5)) { } mv = v + k;", (105, 4000)),
        ("int k = 0; if (0 && (k = 5)) { } mv = adc() + k;", (100, 4000)),
        ("int k = 0; if (1 && (k = 5)) { } mv = adc() + k;", (105, 4005)),
        ("mv = adc() % 7 - (adc() ^ 5);", (-95, -4002)),
        ("mv = ((int)adc() - 2048) / 3 % 5;", (-4, 0)),
        ("uint8_t a = adc() >> 4, b = 200; mv = a + b; uint8_t c = a + b; mv = mv * 10 + c;",
         (2266, 4694)),
        ("mv = (uint32_t)((uint64_t)adc() * 3300000u >> 12);", (80566, 3222656)),
        ("float v = adc() * 0.001f; if (v > 2.5f) v = 2.5f; mv = v * 1000;", (100, 2500)),
    ],
)  # fmt: skip
def test_choices_and_arithmetic(body: str, expected: Expected) -> None:
    """Both arms take their common type; && and || evaluate their right side only if needed."""
    check(entry(body), expected)


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("static uint16_t buf[8];", "mv = adc() * (int)(sizeof buf / sizeof buf[0]);",
         (800, 32000)),
        ("", "mv = adc() * (int)sizeof(uint32_t);", (400, 16000)),
        (TYPES, "mv = adc() * (int)sizeof(u16);", (200, 8000)),
        ("", "mv = adc() * (int)sizeof(char *);", (400, 16000)),
        ("struct s { uint16_t a; uint32_t b; };", "mv = adc() * (int)sizeof(struct s);",
         "the size of a type that is not known"),
    ],
)  # fmt: skip
def test_sizeof(before: str, body: str, expected: Expected) -> None:
    """Sizes are those of the target; how a struct is padded is not assumed."""
    check(entry(body, before), expected)
