"""What configuration code selects."""

import pytest

from bitweight.arithmetic.expressions import Literal
from bitweight.limits import Deadline
from bitweight.trace.families import Family, family_from_text
from bitweight.trace.settings import Bits, Setting, collect, known_bits
from bitweight.trace.targets import Aim
from bitweight.trace.tracing import Tracer
from tracing_cases import BOARD, INT32, context_of

FAMILY: Family = family_from_text(
    "own",
    """
document = "invented"
[names]
REF1 = 7
REF0 = 6
LEFT = 5
[types]
MUX = "uint8_t"
[[field]]
register = "MUX"
mask = 0xC0
subject = "reference"
choices = { 0 = "external", 1 = "supply", 3 = "internal" }
[[field]]
register = "MUX"
mask = 0x20
subject = "justification"
choices = { 0 = "right", 1 = "left" }
[[field]]
register = "MUX"
mask = 0x0F
subject = "input"
""",
)


def settings(text: str, reading: str = "adc_read(2)") -> list[Setting]:
    """The settings of a text in which `adc_read(2)` is the channel's reading."""
    context = context_of(
        f"extern volatile uint8_t MUX;\nuint16_t DATA;\n{text}",
        readings={"tank": (reading,)},
        families=(FAMILY,),
    )
    tracer = Tracer(context=context, deadline=Deadline(60.0))
    aim = Aim(channel="tank", readings=context.readings, values=(), place=BOARD)
    tracer.trace((aim,), lambda *_: None)
    return list(collect(context, tracer.runner, tracer.resolver, (FAMILY,)))


def selected(found: list[Setting]) -> set[tuple[str, str]]:
    """What is selected, by subject."""
    return {(one.subject, one.value) for one in found}


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("void init(void) { MUX = (1 << REF0); }",
         {("reference", "supply"), ("justification", "right")}),
        ("void init(void) { MUX = _BV(REF1) | _BV(REF0) | _BV(LEFT); }",
         {("reference", "internal"), ("justification", "left")}),
        ("void init(void) { MUX = 0x40; MUX |= 0x20; }",
         {("reference", "supply"), ("justification", "left")}),
        ("void init(uint8_t n) { MUX = 0x40 | (n & 0x0F); }",
         {("reference", "supply"), ("justification", "right")}),
        ("void init(uint8_t n) { MUX = (MUX & 0xF0) | n; }", set()),
        ("void init(void) { MUX = 0x80; }", {("justification", "right")}),
        ("void other(void) { DATA = 0x40; }", set()),
    ],
)  # fmt: skip
def test_bits_that_are_certain_select(text: str, expected: set[tuple[str, str]]) -> None:
    """What a write leaves open, or takes from a parameter, selects nothing."""
    assert selected(settings(text)) == expected


def test_the_input_is_that_at_the_reading() -> None:
    """An input selection holds for the reading that is taken under it."""
    found = settings(
        "uint16_t adc_read(uint8_t n) { MUX = 0x40 | n; return DATA; }\n"
        "int mv;\nvoid tank(void) { mv = adc_read(2) * 2; }\n"
    )
    assert [(one.value, one.channels) for one in found if one.subject == "input"] == [
        ("2", ("tank",))
    ]


def test_bits_of_constants_are_all_known() -> None:
    """A constant is known bit by bit."""
    context = context_of("int f(void) { return 0; }\n")
    found = known_bits(Literal(value=0x25, type=INT32.int_), context)
    assert found == Bits((1 << 64) - 1, 0x25)
