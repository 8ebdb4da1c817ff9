"""Findings that share one cause become one, and all of them get their order."""

from collections.abc import Iterable, Sequence
from dataclasses import replace

from bitweight.judge.findings import Finding, Related, Replacement
from bitweight.places import Place

Cause = tuple[str, Place, str, str, str | None, str | None]


def merge(findings: Iterable[Finding], board_order: Sequence[str]) -> tuple[Finding, ...]:
    """One finding a cause, in order of file, line, column and rule.

    Findings of one rule on one place with the same found and expected values have one cause.
    The one of the highest level lends its words; channels follow the board file's order.
    """
    groups: dict[Cause, list[Finding]] = {}
    for finding in findings:
        groups.setdefault(_cause(finding), []).append(finding)
    return ordered(_joined(group, board_order) for group in groups.values())


def ordered(findings: Iterable[Finding]) -> tuple[Finding, ...]:
    """Findings by file, line, column and rule; what is equal there by its words."""
    return tuple(sorted(findings, key=_position))


def _cause(finding: Finding) -> Cause:
    return (
        finding.rule,
        finding.place,
        finding.found,
        finding.expected,
        finding.deviation,
        None if finding.channels else finding.message,
    )


def _position(finding: Finding) -> tuple[str, int, int, str, str, tuple[str, ...]]:
    place = finding.place
    return (place.file, place.line, place.column, finding.rule, finding.message, finding.channels)


def _joined(group: Sequence[Finding], board_order: Sequence[str]) -> Finding:
    if len(group) == 1:
        return group[0]
    rank = {name: index for index, name in enumerate(board_order)}
    by_channel = sorted(group, key=lambda finding: _rank(finding, rank))
    worst = max(by_channel, key=lambda finding: finding.level.weight)
    names = dict.fromkeys(name for finding in by_channel for name in finding.channels)
    return replace(
        worst,
        channels=tuple(sorted(names, key=lambda name: (rank.get(name, len(rank)), name))),
        related=_all_related(by_channel),
        hazard=next((finding.hazard for finding in by_channel if finding.hazard), None),
        replacement=_common_replacement(group),
    )


def _rank(finding: Finding, rank: dict[str, int]) -> tuple[int, tuple[str, ...]]:
    return (
        min((rank.get(name, len(rank)) for name in finding.channels), default=0),
        finding.channels,
    )


def _all_related(findings: Iterable[Finding]) -> tuple[Related, ...]:
    return tuple(dict.fromkeys(one for finding in findings for one in finding.related))


def _common_replacement(group: Sequence[Finding]) -> Replacement | None:
    """The edit all channels agree on; one that mends one channel and spoils another is none."""
    edits = {finding.replacement for finding in group}
    return edits.pop() if len(edits) == 1 else None
