"""A channel's case: judged, or the reason why not."""

import pytest

import facts
from bitweight.board.hardware import Channel
from bitweight.board.stages import Side, Thermistor
from bitweight.judge.cases import Case, reads_another
from bitweight.trace.conversions import Trace
from facts import C


def _thermistor() -> Thermistor:
    return Thermistor(
        r25=facts.part("r25", "10k"),
        beta=facts.part("beta", "3950 K"),
        steinhart_hart=(),
        companion=facts.part("R1", "10k"),
        side=Side.TOP,
        supply=facts.reference(),
        place=facts.at(18),
    )


REASONS: list[tuple[Channel, Trace, str]] = [
    (
        facts.channel(),
        Trace(channel="tank", reason="adc_read(3) is not in the sources"),
        "adc_read(3) is not in the sources",
    ),
    (facts.channel(), Trace(channel="tank"), "no conversion of tank was found"),
    (
        facts.channel(chain=(_thermistor(),), ends=None),
        facts.trace(C().code()),
        "thermistor stages are not computed yet",
    ),
    (facts.channel(), facts.trace(C().number("7")), "tank_held does not depend on the reading"),
    (
        facts.channel(),
        facts.trace(C().code("int", "pump")),
        "tank_held is computed from another channel's reading",
    ),
]


@pytest.mark.parametrize(("channel", "trace", "reason"), REASONS)
def test_reason(channel: Channel, trace: Trace, reason: str) -> None:
    """Where nothing can be compared the case says why, in words for the user."""
    case = facts.case(of=channel, traced=trace)
    assert (case.judgement, case.reason) == (None, reason)
    assert case.place == channel.place


def test_each_without_judgement() -> None:
    """A case that was not judged is seen once."""
    case: Case = facts.case(traced=Trace(channel="tank"))
    assert case.each == (case,)


def test_listed_ends_are_each_judged() -> None:
    """Ends that the board file lists need not agree."""
    c = C()
    one = c.op(c.op(c.code(), "*", "5000"), "/", "1024")
    other = c.op(c.op(c.code(), "*", "100"), "/", "1024")
    case = facts.case(one, other)
    assert case.judgement is not None
    assert len(case.others) == 1


def test_reads_another() -> None:
    """A conversion with no reading of its own channel reads another."""
    c = C()
    pump = c.code("int", "pump")
    assert reads_another(facts.conversion(pump)) == (pump,)
    assert reads_another(facts.conversion(c.op(pump, "+", c.code()))) == ()
    assert reads_another(facts.conversion(c.number("1"))) == ()
