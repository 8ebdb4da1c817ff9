"""Where a run departs from what a person expects of the case, in words."""

import re
from collections.abc import Iterator
from decimal import Decimal

from corpus.cases import Expectation, ExpectedChannel, ExpectedFinding
from corpus.runs import CaseRun, Record

GAIN_TOLERANCE = 1e-4
"""Relative: gains in `expect.toml` are written with seven digits, by hand."""

_NUMBER = re.compile(r"[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?")


def contradictions(wanted: Expectation, run: CaseRun) -> list[str]:
    """Everything that is not as expected; empty where run and expectation agree."""
    return [*_status(wanted, run), *_mistakes(wanted, run), *_report(wanted, run)]


def _status(wanted: Expectation, run: CaseRun) -> Iterator[str]:
    if run.exit != wanted.exit:
        yield f"exit status {run.exit}, expected {wanted.exit}: {'; '.join(run.problems[:3])}"


def _mistakes(wanted: Expectation, run: CaseRun) -> Iterator[str]:
    lines = sorted({one["line"] for one in run.mistakes})
    if wanted.mistake_lines is not None and lines != sorted(wanted.mistake_lines):
        yield f"mistakes on lines {lines}, expected {sorted(wanted.mistake_lines)}"


def _report(wanted: Expectation, run: CaseRun) -> Iterator[str]:
    if run.report is None:
        if wanted.channel or wanted.finding:
            yield "no report"
        return
    yield from _channels(wanted, run.report["channels"])
    yield from _findings(wanted, run.findings)


def _channels(wanted: Expectation, channels: list[Record]) -> Iterator[str]:
    found = {one["name"]: one for one in channels}
    if found.keys() != wanted.channel.keys():
        yield f"channels {sorted(found)}, expected {sorted(wanted.channel)}"
    for name in found.keys() & wanted.channel.keys():
        yield from _channel(found[name], wanted.channel[name])


def _channel(channel: Record, wanted: ExpectedChannel) -> Iterator[str]:
    if channel["status"] != wanted.status:
        reason = f" ({channel['reason']})" if channel["reason"] else ""
        yield f"{channel['name']} is {channel['status']}{reason}, expected {wanted.status}"
    gain = channel["firmware"]["gain"]
    if wanted.gain is not None and not _near(gain, wanted.gain):
        yield f"{channel['name']} has a gain of {gain}, expected {wanted.gain}"


def _near(gain: float | None, wanted: float) -> bool:
    return gain is not None and abs(gain - wanted) <= GAIN_TOLERANCE * abs(wanted)


def _findings(wanted: Expectation, findings: list[Record]) -> Iterator[str]:
    left = list(findings)
    for one in wanted.finding:
        match = next((found for found in left if _fits(found, one)), None)
        if match is None:
            yield f"missing: {_wish(one)}"
        else:
            left.remove(match)
    for found in left:
        if not (wanted.open and found["level"] == "note"):
            yield f"not expected: {_line(found)}"


def _fits(found: Record, wanted: ExpectedFinding) -> bool:
    return (
        found["rule"] == wanted.rule
        and wanted.level in (None, found["level"])
        and wanted.file in (None, found["file"])
        and wanted.line in (None, found["line"])
        and (wanted.channels is None or sorted(wanted.channels) == sorted(found["channels"]))
        and (wanted.found is None or _starts_with(found["found"], wanted.found))
        and (wanted.expected is None or _starts_with(found["expected"], wanted.expected))
    )


def _starts_with(text: str, number: str) -> bool:
    """Whether a text starts with this number, in whatever way it is written."""
    match = _NUMBER.match(text)
    return match is not None and Decimal(match[0]) == Decimal(number)


def _wish(wanted: ExpectedFinding) -> str:
    place = f"{wanted.file or 'anywhere'}:{wanted.line or '?'}"
    return (
        f"{place}: {wanted.level or 'any level'} of {wanted.rule} for {wanted.channels}, "
        f"{wanted.found} -> {wanted.expected}"
    )


def _line(found: Record) -> str:
    return (
        f"{found['file']}:{found['line']}: {found['level']} of {found['rule']} for "
        f"{found['channels']}, {found['found']} -> {found['expected']}: {found['message']}"
    )
