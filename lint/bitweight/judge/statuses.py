"""From the findings of the rules to what a run says: levels, deviations, statuses, counts."""

from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from datetime import date

from bitweight.judge.cases import Case, Facts, Status
from bitweight.judge.deviations import Remark, apply_deviations
from bitweight.judge.findings import Finding, Level
from bitweight.judge.levels import with_hazards
from bitweight.judge.merging import merge

UNTRACED = "untraced"


def settle(
    findings: Iterable[Finding], facts: Facts, remarks: Sequence[Remark], today: date
) -> tuple[Finding, ...]:
    """The findings as reported: hazards and deviations applied, one a cause, in order."""
    hazards = {one.name: one.hazard for one in facts.board.channels if one.hazard}
    raised = [with_hazards(finding, hazards) for finding in findings]
    accepted = apply_deviations(raised, facts.board.deviations, remarks, today)
    return merge(accepted, [channel.name for channel in facts.board.channels])


def statuses_of(cases: Iterable[Case], findings: Sequence[Finding]) -> dict[str, Status]:
    """The verdict on every channel; accepted deviations count as what they are."""
    at_fault = {
        name
        for finding in findings
        if finding.level is not Level.NOTE and finding.rule != UNTRACED
        for name in finding.channels
    }
    return {case.channel.name: _status(case, at_fault) for case in cases}


def reasons_of(cases: Iterable[Case]) -> dict[str, str]:
    """Why each channel without a judgement has none."""
    return {case.channel.name: case.reason for case in cases if case.reason is not None}


def counts(findings: Iterable[Finding], statuses: Mapping[str, Status]) -> dict[str, int]:
    """Findings by level, accepted ones left out, and channels by status."""
    levels = Counter(finding.level for finding in findings if finding.deviation is None)
    verdicts = Counter(statuses.values())
    return {
        **{level.value: levels[level] for level in (Level.ERROR, Level.WARNING, Level.NOTE)},
        **{status.value: verdicts[status] for status in Status},
    }


def _status(case: Case, at_fault: set[str]) -> Status:
    if case.channel.name in at_fault:
        return Status.MISMATCHED
    return Status.UNTRACED if case.judgement is None else Status.VERIFIED
