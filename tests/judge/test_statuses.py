"""From findings to statuses and counts."""

from datetime import date

import pytest

import facts
from bitweight.judge.cases import Status
from bitweight.judge.findings import Level
from bitweight.judge.statuses import counts, reasons_of, settle, statuses_of
from bitweight.trace.conversions import Trace
from facts import C, finding

TODAY = date(2026, 12, 1)
TRACED = facts.case(C().op(C().op(C().code(), "*", "5000"), "/", "1024"))
LOST = facts.case(traced=Trace(channel="tank", reason="not there"))

STATUSES = [
    (TRACED, [], Status.VERIFIED),
    (TRACED, [finding(level=Level.NOTE)], Status.VERIFIED),
    (TRACED, [finding()], Status.MISMATCHED),
    (TRACED, [finding(level=Level.ERROR)], Status.MISMATCHED),
    (TRACED, [finding(deviation="known")], Status.MISMATCHED),
    (TRACED, [finding(channels=("pump",))], Status.VERIFIED),
    (TRACED, [finding("untraced")], Status.VERIFIED),
    (LOST, [finding("untraced")], Status.UNTRACED),
    (LOST, [finding("untraced"), finding("input-range")], Status.MISMATCHED),
]


@pytest.mark.parametrize(("case", "findings", "status"), STATUSES)
def test_status(case: facts.Case, findings: list[facts.Finding], status: Status) -> None:
    """Any error or warning but untraced is a mismatch, accepted ones included."""
    assert statuses_of([case], findings) == {"tank": status}


def test_reasons() -> None:
    """Only a case without a judgement has a reason."""
    assert reasons_of([LOST, TRACED]) == {"tank": "not there"}


def test_counts() -> None:
    """Accepted deviations are not counted, every status is."""
    found = [finding(), finding(level=Level.ERROR), finding(level=Level.ERROR, deviation="known")]
    assert counts(found, {"a": Status.VERIFIED, "b": Status.UNTRACED, "c": Status.UNTRACED}) == {
        "error": 1,
        "warning": 1,
        "note": 0,
        "verified": 1,
        "mismatched": 0,
        "untraced": 2,
    }


def test_settle() -> None:
    """Hazards raise, deviations are applied to single channels, equal causes are merged."""
    tank = facts.channel(hazard="the tank overflows")
    pump = facts.channel("pump")
    board = facts.board(
        pump, tank, deviations=(facts.deviation("full-scale", "pump", "a spare input"),)
    )
    run = facts.facts(board=board)
    found = [finding(), finding(channels=("pump",)), finding("sign")]
    settled = settle(found, run, (), TODAY)
    assert [(one.rule, one.channels, one.level, one.hazard, one.deviation) for one in settled] == [
        ("full-scale", ("pump",), Level.WARNING, None, "a spare input"),
        ("full-scale", ("tank",), Level.ERROR, "the tank overflows", None),
        ("sign", ("tank",), Level.ERROR, "the tank overflows", None),
    ]
