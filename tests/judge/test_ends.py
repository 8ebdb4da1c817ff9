"""Where a reading ends more than once."""

import pytest

import facts
from bitweight.arithmetic.expressions import Expression
from bitweight.board.hardware import Channel
from bitweight.judge.cases import Case
from bitweight.trace.conversions import Conversion
from facts import C


def _open_end(**changes: object) -> Channel:
    return facts.channel(firmware=facts.firmware(None, value=()), **changes)


def _case(*expressions: Expression) -> Case:
    results = ("tank_mv", "tank_pct", "tank_dv")
    trace = facts.Trace(
        channel="tank",
        conversions=tuple(
            facts.conversion(expression, result=result)
            for expression, result in zip(expressions, results, strict=False)
        ),
    )
    return facts.case(of=_open_end(), traced=trace)


def _copy(result: str) -> Conversion:
    c = C()
    return facts.conversion(c.store("int", c.code()), result=result)


def _scaled(c: C, by: str, count: str = "1024") -> Expression:
    return c.op(c.op(c.code(), "*", by), "/", count)


@pytest.mark.parametrize("by", ["50", "500", "50000"])
def test_power_of_ten_agrees(by: str) -> None:
    """Ends that hold tens or tenths of each other are judged together."""
    c = C()
    case = _case(_scaled(c, "5000"), _scaled(c, by))
    assert case.judgement is not None
    assert len(case.others) == 1


@pytest.mark.parametrize("by", ["100", "9000", "55000"])
def test_other_quantities_disagree(by: str) -> None:
    """A percentage, degrees Fahrenheit or a voltage before a divider is another quantity."""
    c = C()
    case = _case(_scaled(c, "5000"), _scaled(c, by))
    assert case.judgement is None
    assert case.reason == "the reading ends in tank_mv, tank_pct: name one with value = ..."


def test_bare_copies_are_left_out() -> None:
    """A copy of the code does not count beside a scaled end, and is no conversion alone."""
    c = C()
    both = _case(_scaled(c, "5000"), c.store("int", c.code()))
    assert both.judgement is not None
    assert both.others == ()
    alone = facts.case(
        of=_open_end(), traced=facts.Trace(channel="tank", conversions=(_copy("spare"),))
    )
    assert alone.judgement is None
    assert alone.reason == ("only the raw code leaves (spare), no conversion of tank was found")


def test_a_bare_copy_with_a_unit_is_a_conversion() -> None:
    """A name that says millivolts makes a bare copy of the code a claim that can be judged."""
    traced = facts.Trace(channel="tank", conversions=(_copy("tank_mv"),))
    assert facts.case(of=_open_end(), traced=traced).judgement is not None


def test_overflow_in_one_end_does_not_hide_that_they_agree() -> None:
    """An end that wraps above some code still agrees where it does not."""
    c = C()
    wrapped = c.op(c.cast("uint16_t", c.op(c.code(), "*", "100")), "/", "20")
    case = _case(_scaled(c, "5000"), c.op(wrapped, "*", "1"))
    assert case.judgement is not None
    assert case.judgement.operations


def test_worst_is_shown() -> None:
    """Of several ends the one with the largest error is shown, the others are kept."""
    c = C()
    case = _case(_scaled(c, "5000"), _scaled(c, "490"))
    assert case.judgement is not None
    assert case.judgement.conversion.result == "tank_pct"
    assert [view.judgement and view.judgement.conversion.result for view in case.each] == [
        "tank_pct",
        "tank_mv",
    ]
