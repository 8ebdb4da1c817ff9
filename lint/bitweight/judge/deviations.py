"""Accepted departures, from the board file and from comments in the C, applied to findings.

Findings of single channels and what was accepted go in; the same findings come out, some carrying
the accepted reason, followed by a warning for each deviation that is expired, has no reason or
matches nothing.
"""

import re
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, replace
from datetime import date
from fnmatch import fnmatchcase

from bitweight.board.hardware import Deviation
from bitweight.judge.findings import Finding, Level
from bitweight.places import Place

RULE = "deviation"

_REMARK = re.compile(
    r"(?:/\*|//|^\s*\*).*?\bdeviation\(\s*([A-Za-z-]+)\s*\)\s*:?\s*(.*?)\s*(?:\*/|$)"
)
_WORD = re.compile(r"[A-Za-z_]\w*")


@dataclass(frozen=True, slots=True, kw_only=True)
class Remark:
    """A deviation in a C comment; `place` is the word `deviation`, `reason` may be empty."""

    place: Place
    rule: str
    reason: str


def remarks_in(file: str, text: str) -> tuple[Remark, ...]:
    """Every deviation comment of a source text, in order."""
    found: list[Remark] = []
    for number, line in enumerate(text.splitlines(), start=1):
        found.extend(
            Remark(
                place=Place(file, number, line.index("deviation(", match.start()) + 1),
                rule=match[1],
                reason=match[2],
            )
            for match in _REMARK.finditer(line)
        )
    return tuple(found)


def apply_deviations(
    findings: Iterable[Finding],
    deviations: Sequence[Deviation],
    remarks: Sequence[Remark],
    today: date,
) -> tuple[Finding, ...]:
    """The findings with accepted reasons filled in, then one warning for each faulty deviation.

    `until` is the last day on which a deviation holds. Give findings before they are merged, so
    that what is accepted for one channel is not accepted for another.
    """
    given = [*map(_from_board, deviations), *map(_from_remark, remarks)]
    judged = tuple(findings)
    faults = [fault for one in given if (fault := _fault(one, judged, today)) is not None]
    valid = [one for one in given if one.reason and not _expired(one, today)]
    return (*(_accepted(finding, valid) for finding in judged), *faults)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Accepted:
    """A deviation from either source; `covers` says whether a finding stands where it holds."""

    rule: str
    where: str
    reason: str
    until: date | None
    place: Place
    covers: Callable[[Finding], bool]


def _from_board(deviation: Deviation) -> _Accepted:
    where = deviation.where
    return _Accepted(
        rule=deviation.rule,
        where=where,
        reason=deviation.reason.strip(),
        until=deviation.until,
        place=deviation.place,
        covers=lambda finding: _names(finding, where),
    )


def _from_remark(remark: Remark) -> _Accepted:
    here = remark.place
    return _Accepted(
        rule=remark.rule,
        where=f"line {here.line}",
        reason=remark.reason,
        until=None,
        place=here,
        covers=lambda finding: (
            finding.place.file == here.file and finding.place.line in (here.line, here.line + 1)
        ),
    )


def _names(finding: Finding, where: str) -> bool:
    """Whether a finding belongs to a channel, stands in a file or speaks of a symbol."""
    file = finding.place.file
    return (
        where in finding.channels
        or fnmatchcase(file, where)
        or fnmatchcase(file, f"*/{where}")
        or where in _WORD.findall(finding.message)
    )


def _covers(accepted: _Accepted, finding: Finding) -> bool:
    return accepted.rule == finding.rule and accepted.covers(finding)


def _accepted(finding: Finding, valid: Sequence[_Accepted]) -> Finding:
    reason = next((one.reason for one in valid if _covers(one, finding)), None)
    return finding if reason is None else replace(finding, deviation=reason)


def _expired(accepted: _Accepted, today: date) -> bool:
    return accepted.until is not None and accepted.until < today


def _fault(accepted: _Accepted, findings: Sequence[Finding], today: date) -> Finding | None:
    if not accepted.reason:
        message = f"this deviation from {accepted.rule} gives no reason, so it is not accepted"
    elif _expired(accepted, today):
        message = f"this deviation from {accepted.rule} expired on {accepted.until}"
    elif not any(_covers(accepted, finding) for finding in findings):
        message = f"this deviation matches no {accepted.rule} finding at {accepted.where}"
    else:
        return None
    return Finding(
        rule=RULE, level=Level.WARNING, channels=(), message=message, place=accepted.place
    )
