"""Members that keep their initialiser although the address of their object is handed on."""

import pytest

from bitweight.arithmetic.expressions import Default, walk
from tracing_cases import Expected, check, traced

HEAD = (
    "uint16_t adc(void);\nvoid unseen(void *p);\nvoid reads(const struct dev *p);\nint mv;\n"
    "struct cfg { int mv; int bits; };\n"
    "struct dev { const struct cfg *cfg; int gain; int last; };\n"
    "static const struct cfg c0 = { .bits = 12, .mv = 3300 };\n"
    "static struct dev d0 = { .cfg = &c0, .gain = 2 };\n"
)
CONV = "static int conv(struct dev *d, int r) { d->last = r; return r * d->gain; }\n"
USED = "void entry(void) { mv = conv(&d0, adc()); }\n"


@pytest.mark.parametrize(
    ("code", "expected"),
    [
        (CONV + USED, (200, 8000)),
        (CONV + USED + "void t(void) { reads(&d0); }", (200, 8000)),
        (CONV + USED + "void t(void) { struct dev *p = &d0; p->last = 3; }", (200, 8000)),
        ("static int conv(const struct dev *d, int r) { return r * d->cfg->mv >> d->cfg->bits; }\n"
         + USED, (80, 3222)),
        (CONV + USED + "void t(void) { struct dev *p; p = &d0; p->last = 3; }", (200, 8000)),
        (CONV + USED + "int t(void) { return d0.gain == 2 && &d0 != 0; }", (200, 8000)),
    ],
)  # fmt: skip
def test_a_member_that_nothing_writes_is_constant(code: str, expected: Expected) -> None:
    """The initialiser holds where every use of the address is seen and none writes the member."""
    check(HEAD + code, expected)


@pytest.mark.parametrize(
    "use",
    [
        "static void set(struct dev *d, int g) { d->gain = g; }\nvoid t(int g) { set(&d0, g); }",
        "void t(void) { unseen(&d0); }",
        "struct dev *now;\nvoid t(void) { now = &d0; }",
        "void t(struct dev o) { d0 = o; }",
        "static void set(struct dev *d, struct dev o) { *d = o; }\n"
        "void t(struct dev o) { set(&d0, o); }",
        "struct dev *t(void) { return &d0; }",
        "void t(int *o) { int *g = &d0.gain; *g = *o; }",
        "static struct dev *const list[1] = { &d0 };\nvoid t(int g) { list[0]->gain = g; }",
        "void t(struct dev *o) { memcpy(&d0, o, sizeof d0); }",
    ],
)  # fmt: skip
def test_a_member_that_may_be_written_is_a_default_at_best(use: str) -> None:
    """As soon as a write is possible, the initialiser is no constant of the program."""
    found = traced(f"{HEAD}{CONV}{USED}{use}\n", value="mv")
    assert found.reason or found.conversions
    for one in found.conversions:
        assert any(isinstance(node, Default) for node in walk(one.expression))


RUNTIME = (
    "uint16_t adc(void);\nstruct dev { uint16_t ref; uint8_t bits; int out; };\n"
    "static struct dev d;\n"
    "static void init(struct dev *p, int r, int n) { p->ref = r; p->bits = n; }\n"
    "static void run(struct dev *p) { p->out = (adc() * p->ref) >> p->bits; }\n"
)


@pytest.mark.parametrize(
    "callers",
    [
        "int main(void) { init(&d, 2500, 12); for (;;) run(&d); }",
        "void setup(void) { init(&d, 2500, 12); }\nvoid turn(void) { run(&d); }",
    ],
)
def test_what_an_initialising_function_writes_through_its_parameter(callers: str) -> None:
    """The callers say which object a parameter points to, in the reader as in the writer."""
    check(RUNTIME + callers, (61, 2441), value="d.out")
