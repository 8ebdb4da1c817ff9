"""Accepted departures: what they cover and when they are at fault themselves."""

from datetime import date
from typing import Any

import pytest

from bitweight.judge.deviations import Remark, apply_deviations, remarks_in
from bitweight.judge.findings import Finding
from facts import HEADER, at, deviation, finding

TODAY = date(2026, 12, 1)


def _applied(
    *findings: Finding, given: tuple[Any, ...] = (), remarks: tuple[Remark, ...] = ()
) -> tuple[Finding, ...]:
    return apply_deviations(findings, given, remarks, TODAY)


@pytest.mark.parametrize("where", ["tank", HEADER, "board_config.h", "src/*.h", "ADC_MAX"])
def test_board_deviation_covers(where: str) -> None:
    """A channel, a file, a pattern of files or a symbol names the finding."""
    (found,) = _applied(finding(), given=(deviation("full-scale", where, "ratiometric"),))
    assert found.deviation == "ratiometric"


@pytest.mark.parametrize(
    ("rule", "where"), [("full-scale", "pump"), ("sign", "tank"), ("full-scale", "ADC")]
)
def test_board_deviation_matches_nothing(rule: str, where: str) -> None:
    """One that covers no finding is a warning at its place, and the finding stays."""
    found, fault = _applied(finding(), given=(deviation(rule, where),))
    assert found.deviation is None
    assert (fault.rule, fault.place.line, fault.channels) == ("deviation", 40, ())
    assert "matches no" in fault.message


@pytest.mark.parametrize(
    ("until", "accepted"),
    [(date(2026, 11, 30), False), (date(2026, 12, 1), True), (date(2027, 6, 30), True)],
)
def test_until(until: date, accepted: bool) -> None:
    """A deviation holds up to its last day; afterwards it is a warning of its own."""
    found, *faults = _applied(finding(), given=(deviation("full-scale", "tank", until=until),))
    assert (found.deviation is not None) == accepted
    assert [fault.message for fault in faults] == (
        [] if accepted else ["this deviation from full-scale expired on 2026-11-30"]
    )


@pytest.mark.parametrize("reason", ["", "  "])
def test_no_reason(reason: str) -> None:
    """A deviation without a reason accepts nothing."""
    found, fault = _applied(finding(), given=(deviation("full-scale", "tank", reason),))
    assert found.deviation is None
    assert "no reason" in fault.message


COMMENTS = [
    ("#define ADC_MAX 1023 /* deviation(full-scale): ratiometric sensor */", "ratiometric sensor"),
    ("// deviation(full-scale): by agreement with the maker", "by agreement with the maker"),
    ("    /* deviation(full-scale) : spaced */", "spaced"),
    ("// deviation(full-scale)", ""),
    (" * deviation(full-scale): inside a block comment", "inside a block comment"),
]


@pytest.mark.parametrize(("line", "reason"), COMMENTS)
def test_remark(line: str, reason: str) -> None:
    """A comment of either kind holds a deviation at the column of its word."""
    (remark,) = remarks_in("a.c", f"int x;\n{line}\n")
    assert (remark.rule, remark.reason, remark.place.line) == ("full-scale", reason, 2)
    assert line[remark.place.column - 1 :].startswith("deviation(")


@pytest.mark.parametrize("line", ["int deviation(full);", 'x = "deviation(full-scale): no";', ""])
def test_no_remark(line: str) -> None:
    """Code that only looks like one is none."""
    assert remarks_in("a.c", line) == ()


@pytest.mark.parametrize(("line", "covered"), [(1, False), (2, True), (3, True), (4, False)])
def test_remark_covers_its_line_and_the_next(line: int, covered: bool) -> None:
    """A comment covers a finding on its own line or the one below, in its own file."""
    remark = Remark(place=at(line, 22, HEADER), rule="full-scale", reason="known")
    other = Remark(place=at(line, 22), rule="full-scale", reason="known")
    assert (_applied(finding(), remarks=(remark,))[0].deviation is not None) == covered
    assert _applied(finding(), remarks=(other,))[0].deviation is None
