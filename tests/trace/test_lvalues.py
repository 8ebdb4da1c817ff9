"""Objects found by expression, and where pointers point."""

import pytest

from bitweight.firmware.objects import Arithmetic, Location, Root
from bitweight.trace.lvalues import shifted
from bitweight.trace.memory import Address
from tracing_cases import INT32, Expected, check, entry

LINKED = "struct n { int v; struct n *next; };\n"


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("static const int t[] = {1, 2, 3, 4};",
         "const int *p = t; p += 2; mv = *p++ * adc(); mv += *p;", (304, 12004)),
        ("", "int b[4]; int *p = b; for (int i = 0; i < 4; i++) *p++ = adc() + i; mv = b[3];",
         (103, 4003)),
        ("", "int a[3] = {1, 2, 3}; int *p = &a[2]; mv = p[-1] * adc();", (200, 8000)),
        ("", "int a[2] = {1, 2}; mv = 1[a] * adc();", (200, 8000)),
        ("struct s { int a, b; };",
         "struct s x = {1, 2}; int *p = &x.b; *p = adc(); mv = x.b * x.a;", (100, 4000)),
        (LINKED, "struct n b = {3, 0}, a = {0, &b}; a.v = adc(); a.next->v += a.v; mv = b.v;",
         (103, 4003)),
        ("", "int x = adc(), y = 2; int *p = &x, *q = &y, *t = p; p = q; q = t;"
         "mv = *p * 10 + *q;", (120, 4020)),
        ("static void get(uint16_t **out) { **out = adc(); }",
         "uint16_t r; uint16_t *p = &r; get(&p); mv = r * 3;", (300, 12000)),
        ("static int sum(const uint16_t *a, int n) { int s = 0; while (n--) s += *a++; return s; }",
         "uint16_t b[3]; b[0] = adc(); b[1] = 1; b[2] = 2; mv = sum(b, 3);", (103, 4003)),
        ("static struct { int v[2]; } g;", "int *p = g.v; p[1] = adc(); mv = g.v[1] * 2;",
         (200, 8000)),
        ("", "mv = (&*&mv == 0) + adc();", (100, 4000)),
        ("", "uint16_t *p = (uint16_t *)0x40001000; mv = *p * adc();", "0x40001000"),
    ],
)  # fmt: skip
def test_pointers_lead_to_their_objects(before: str, body: str, expected: Expected) -> None:
    """Steps, members, elements and pointers to pointers; each side effect happens once."""
    check(entry(body, before), expected)


ELEMENT = Arithmetic(type=INT32.int_)
ARRAY = Location(Root("object", "a"))


@pytest.mark.parametrize(
    ("path", "step", "moved"),
    [
        ((2,), 0, (2,)),
        ((2,), 3, (5,)),
        ((2,), -1, (1,)),
        ((2,), None, ("*",)),
        (("*",), 1, ("*",)),
        ((), 1, (1,)),
        ((), 0, ()),
        (("m",), 2, ("m", 2)),
    ],
)
def test_a_pointer_is_shifted_among_elements(
    path: tuple[str | int, ...], step: int | None, moved: tuple[str | int, ...]
) -> None:
    """An unknown step, or a step from an unknown element, may lead to any element."""
    base = Address(target=Location(ARRAY.root, path), type=ELEMENT)
    assert shifted(base, step) == (Location(ARRAY.root, moved), ELEMENT)
