"""The stops on the way to a result."""

from bitweight.arithmetic.expressions import walk
from bitweight.places import Place
from bitweight.trace.steps import steps
from tracing_cases import entry, traced


def test_steps_follow_the_computation() -> None:
    """Reading, stores, arguments, returns and decisions, each place once, the result last."""
    source = entry(
        "    uint8_t low;\n    low = adc();\n    mv = pick(low);",
        "static int pick(long v)\n{\n    if (v > 9)\n        return 9;\n    return v;\n}",
    )
    (found,) = traced(source, value="mv").conversions
    messages = [(one.place.line, one.message) for one in found.steps]
    assert messages[0] == (13, "the code is read: adc()")
    assert (13, "stored as unsigned char") in messages
    assert (14, "passed as long") in messages
    assert any("returned as int" in text for _, text in messages)
    assert any("decided by a condition" in text for _, text in messages)
    assert len({one.place for one in found.steps}) == len(found.steps)


def test_a_long_way_is_cut() -> None:
    """A reader is shown a dozen stops at most."""
    body = "".join(f"uint8_t v{i} = {'adc()' if not i else f'v{i - 1} + 1'};\n" for i in range(30))
    expression = traced(entry(f"{body}mv = v29;"), value="mv").conversions[0].expression
    assert len(steps(walk(expression), "mv", Place("main.c", 99))) == 12
