"""Tracing as a whole: what a trace says, and its reasons."""

import pytest

from bitweight.limits import Deadline
from bitweight.places import Place
from bitweight.trace.tracing import Aim, Tracer
from tracing_cases import BOARD, HEAD, at_codes, context_of, entry, traced


def test_a_conversion_says_how_it_came_about() -> None:
    """Result, place, formula, function and the steps in order are part of the conversion."""
    trace = traced(
        "#define FULL 4096\nuint16_t adc(void);\nint mv;\n"
        "static int scale(int raw) { return raw * 3300 / FULL; }\n"
        "void entry(void)\n{\n    uint16_t raw = adc();\n    mv = scale(raw);\n}\n",
        value="mv",
    )
    (found,) = trace.conversions
    assert (found.result, found.function, found.formula) == (
        "mv",
        "entry",
        "adc() * 3300 / FULL",
    )
    assert found.place == Place("main.c", 8, 5)
    assert [(one.place.line, one.message) for one in found.steps] == [
        (7, "the code is read: adc()"),
        (8, "passed as int"),
        (8, "the result: mv"),
    ]


@pytest.mark.parametrize(
    ("reading", "value", "reason"),
    [
        ("missing()", "mv", "the reading missing() is nowhere in the code that was followed"),
        ("adc()", "absent", "the reading adc() is found, but absent is not found"),
        ("adc()", "other", "the reading adc() is found, but other is not computed from it"),
        ("adc()", "shown", "show() is not defined in the given sources"),
    ],
)
def test_reasons_name_what_is_missing(reading: str, value: str, reason: str) -> None:
    """Nothing found, nothing made from the reading, or what is not followed on the way."""
    before = "int other, shown;\nint show(int);\n"
    trace = traced(entry("mv = adc(); other = 3; shown = show(adc());", before), reading, value)
    assert trace.conversions == ()
    assert trace.reason == reason


def test_nothing_that_outlives() -> None:
    """A reading that only decides something has no end."""
    trace = traced(HEAD + "void entry(void) { int t = adc() * 2; (void)t; }")
    assert trace.reason is not None
    assert "nothing that outlives the function is made from it" in trace.reason


def test_a_channel_without_a_reading_says_so() -> None:
    """Without a reading there is nothing to trace."""
    tracer = Tracer(context=context_of(entry("")), deadline=Deadline(60.0))
    aim = Aim(channel="tank", readings=(), values=(), place=BOARD)
    (trace,) = tracer.trace((aim,), lambda *_: None)
    assert trace.reason == "no reading is given: say which C expression yields the raw code"


def test_a_value_made_from_another_reading_is_shown() -> None:
    """A value that is computed from another channel's reading is a conversion of that one."""
    trace = traced(
        entry("raw = adc(); mv = aux() * 2;", "uint16_t aux(void); uint16_t raw;"),
        value="mv",
        others={"sump": "aux()"},
    )
    (found,) = trace.conversions
    assert found.other_readings == ("sump",)
    assert at_codes(found.expression, (7,), {"sump": 50}) == [100]


def test_a_second_reading_in_a_conversion_is_named() -> None:
    """A conversion that uses two readings carries both."""
    trace = traced(
        entry("mv = adc() * aux();", "uint16_t aux(void);"), value="mv", others={"sump": "aux()"}
    )
    (found,) = trace.conversions
    assert found.other_readings == ("sump",)
    assert at_codes(found.expression, (7,), {"sump": 50}) == [350]


def test_the_order_of_files_changes_nothing() -> None:
    """The same sources give the same trace however they are listed."""
    texts = {
        "b.c": "uint16_t adc(void);\nuint16_t raw;\nvoid isr(void) { raw = adc(); }\n",
        "a.c": "extern uint16_t raw;\nint mv;\nvoid entry(void) { mv = raw * 2; }\n",
    }
    one, two = (traced(dict(items)) for items in (texts.items(), reversed(texts.items())))
    assert [c.formula for c in one.conversions] == [c.formula for c in two.conversions]
    assert one.conversions[0].steps == two.conversions[0].steps
