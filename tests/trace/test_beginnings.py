"""Initialisers, of static and of automatic objects."""

import pytest

from tracing_cases import Expected, check, entry

NESTED = "struct in { int x, y; };\nstruct out { struct in a, b; };\n"


@pytest.mark.parametrize(
    ("declared", "used", "expected"),
    [
        ("int t[] = {[2] = 7, 8, [0] = 1};", "adc() * t[3] + t[0] + t[1] + t[2]", (808, 32008)),
        ("int t[4] = {5};", "adc() * t[0] + t[3]", (500, 20000)),
        ("int m[2][2] = {1, 2, 3, 4};", "adc() * m[1][1] + m[0][1]", (402, 16002)),
        ("int m[2][3] = {{1, 2}, {3, 4, 5}};", "adc() * m[1][2] + m[0][1] + m[0][2]",
         (502, 20002)),
        ("struct in o[2] = {1, 2, 3, 4};", "adc() * o[1].x + o[0].y", (302, 12002)),
        ("struct out o = {.b.y = 4, .a = {1, 2}, .b.x = 3};",
         "adc() * o.b.y + o.b.x * 10 + o.a.y + o.a.x", (433, 16033)),
        ("struct out o = {1, 2, 3, 4};", "adc() * o.b.x + o.a.y", (302, 12002)),
        ("struct out o = {.a = {.y = 2}};", "adc() * o.a.y + o.b.x", (200, 8000)),
        ("struct { int a; struct { int b, c; }; int d; } o = {1, 2, 3, 4};",
         "adc() * o.c + o.d", (304, 12004)),
        ("struct { int a; struct { int b, c; }; int d; } o = {.c = 5, 6};",
         "adc() * o.c + o.d + o.b", (506, 20006)),
        ("int v = {6};", "adc() * v", (600, 24000)),
        ("uint8_t v = 300;", "adc() * v", (4400, 176000)),
        ("float f = 0.5f;", "(int)(adc() * f)", (50, 2000)),
        ("int t[2] = {5, 6, 7};", "adc() * t[0]", "t[0]"),
        ("int t[3] = {[0 ... 2] = 4};", "adc() * t[1]", "t[1]"),
        ("int t[2] = {5, 6};", "adc() * t[2]", "t[2]"),
    ],
)  # fmt: skip
@pytest.mark.parametrize("where", ["static const ", "static ", "automatic"])
def test_each_part_gets_its_initialiser(
    declared: str, used: str, expected: Expected, where: str
) -> None:
    """Designators, nested and missing braces, and the zero of what is left out (C11 6.7.9)."""
    if where == "automatic":
        source = entry(f"{declared} mv = {used};", NESTED)
    else:
        source = entry(f"mv = {used};", f"{NESTED}{where}{declared}")
    check(source, expected)


@pytest.mark.parametrize(
    ("before", "body", "expected"),
    [
        ("", "static const int t[] = {2, 3, 4}; mv = adc() * t[1];", (300, 12000)),
        ("struct p { int x, y; };",
         "struct p a = {1, 2}; struct p b[2] = {a, {3, 4}}; mv = adc() * b[1].x + b[0].y;",
         (302, 12002)),
        ("struct s { int a, b; };\nstatic int f(struct s *p) { return p->a * p->b; }",
         "mv = f(&(struct s){.a = adc(), .b = 4});", (400, 16000)),
        ("struct s { int a; struct { int b; } c; int d[3]; };",
         "struct s x = {.a = 2}; mv = adc() * x.a + x.c.b + x.d[1];", (200, 8000)),
        ("#define SCALE {3300, 4096}\nstruct sc { int n, d; };\nstatic const struct sc s = SCALE;",
         "mv = adc() * s.n / s.d;", (80, 3222)),
        ("static const struct { const char *name; int k; } t[] = {{\"tank\", 3}, {\"sump\", 5}};",
         "mv = adc() * t[1].k;", (500, 20000)),
        ("static const int a = 4;\nstatic const int b = a * 2;", "mv = adc() * b;", (800, 32000)),
        ("extern const int a, b;\nconst int a = b;\nconst int b = a;", "mv = adc() * b;", "b"),
    ],
)  # fmt: skip
def test_initialisers_are_evaluated_where_they_stand(
    before: str, body: str, expected: Expected
) -> None:
    """Expressions, structs and macros in a list have the meaning of their place."""
    check(entry(body, before), expected)
