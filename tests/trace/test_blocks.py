"""memcpy(), memmove() and memset()."""

import pytest

from tracing_cases import Expected, check, entry

RING = "static uint16_t ring[4];\nvoid isr(void) { for (int i = 0; i < 4; i++) ring[i] = adc(); }"
PAIR = "struct pair { int a; uint8_t b; };\n"


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        (RING, "uint16_t s[4]; memcpy(s, (const void *)ring, sizeof s); mv = s[1] + s[3];",
         (200, 8000)),
        ("", "uint16_t a[2] = { 3, adc() }, b[2]; memmove(b, a, 4); mv = b[0] * b[1];",
         (300, 12000)),
        ("", "uint16_t a[2]; memset(a, 0, sizeof a); a[0] += adc(); mv = a[0] + a[1];",
         (100, 4000)),
        (PAIR, "struct pair p, q; p.a = adc(); p.b = 2; memcpy(&q, &p, sizeof q); mv = q.a * q.b;",
         (200, 8000)),
        (PAIR, "struct pair p; memset(&p, 0, sizeof p); p.a += adc(); mv = p.a + p.b;",
         (100, 4000)),
        ("", "uint16_t a[2] = { 3, adc() }; uint8_t b[4]; memcpy(b, a, 4); mv = adc() * b[0];",
         "memcpy() with this size and these types is not followed"),
        ("", "uint16_t a[2] = { 3, adc() }, b[2]; memcpy(b, a, flag()); mv = adc() * b[0];",
         "memcpy() with this size and these types is not followed"),
        ("", "uint16_t a[2]; memset(a, 1, 4); mv = adc() * a[0];",
         "memset() with this size and these types is not followed"),
    ],
)  # fmt: skip
def test_blocks_are_copied_element_by_element(before: str, body: str, expected: Expected) -> None:
    """Equal types and a constant size are followed; anything else leaves the target unknown."""
    check(entry(body, before), expected)
