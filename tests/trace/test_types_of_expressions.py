"""`typeof`, `__auto_type` and the macros that are written with them."""

import pytest

from tracing_cases import Expected, check, entry

MIN = (
    "#define min(a, b) ({ typeof(a) _a = (a); typeof(b) _b = (b); (void)(&_a == &_b);"
    " _a < _b ? _a : _b; })"
)
MAX = "#define max(a, b) ({ __typeof__(a) _a = (a); __typeof__(b) _b = (b); _a > _b ? _a : _b; })"
CLAMP = f"{MIN}\n{MAX}\n#define clamp(v, lo, hi) min((typeof(v))max(v, lo), hi)"
CLOSEST = (
    "#define closest(x, d) ({ typeof(x) __x = x; typeof(d) __d = d;"
    " (((typeof(x))-1) > 0 || ((typeof(d))-1) > 0 || ((__x) > 0) == ((__d) > 0))"
    " ? (((__x) + ((__d) / 2)) / (__d)) : (((__x) - ((__d) / 2)) / (__d)); })"
)


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        (MIN, "int v = adc(); mv = min(6600, v * 6600 / 4096);", (161, 6445)),
        (MIN, "int v = adc(); mv = min(v, min(v * 2, 3000));", (100, 3000)),
        (f"{MIN}\n{MAX}", "int v = adc(); mv = max(500, min(3000, v));", (500, 3000)),
        (CLAMP, "int v = adc(); mv = clamp(v, 200, 3500);", (200, 3500)),
        (CLOSEST, "mv = closest(adc() * 3300, 4096);", (81, 3223)),
        ("", "int v = adc(); mv = ({ __typeof__(v * 2) q = v * 6600; q / 4096; });", (161, 6445)),
        ("", "uint8_t w; typeof(w) t = adc(); mv = t;", (100, 160)),
        ("", "uint8_t w; typeof (w + 0) t = adc(); mv = t;", (100, 4000)),
        ("", "typeof(unsigned char) t = adc(); mv = t;", (100, 160)),
        ("", "typeof(uint8_t) t = adc(); mv = t;", (100, 160)),
        ("", "int v = adc(); typeof(v) *p = &v; mv = *p * 2;", (200, 8000)),
        ("", "int v = adc(); mv = sizeof(typeof(v)) * v;", (400, 16000)),
        ("", "int v = 5; typeof(v++) w = adc(); mv = w + v;", (105, 4005)),
        ("", "__auto_type v = (uint8_t)adc(); mv = v * 2;", (200, 320)),
        ("", "__auto_type v = adc(); v *= 20; mv = v;", (2000, 14464)),
        ("typedef uint8_t byte;", "typeof(byte) t = adc(); mv = t;", (100, 160)),
    ],
)  # fmt: skip
def test_a_declaration_takes_the_type_of_an_expression(
    before: str, body: str, expected: Expected
) -> None:
    """The operand gives its type and nothing of it is evaluated."""
    check(entry(body, before), expected)
