"""One finding a line in the GNU form, `file:line:column: level: text [rule]`.

An outcome goes in, text comes out; for pipes, editors and build logs.
"""

from bitweight.judge.findings import Finding
from bitweight.judge.outcomes import Outcome
from bitweight.report.texts import accepted, closing, shown


def plain_report(outcome: Outcome) -> str:
    """Every finding in order and a last line of counts."""
    lines = [finding_line(finding) for finding in outcome.findings]
    lines.append(closing(outcome.counts, accepted(outcome.findings)))
    return "".join(f"{line}\n" for line in lines)


def finding_line(finding: Finding) -> str:
    """One finding; whatever the text holds, it stays one line."""
    place = finding.place
    text = "; ".join(part for part in _parts(finding) if part)
    return (
        f"{shown(place.file)}:{place.line}:{place.column}: {finding.level.value}: "
        f"{shown(text)} [{shown(finding.rule)}]"
    )


def _parts(finding: Finding) -> tuple[str, ...]:
    message = finding.message.removesuffix(".")
    return (
        message,
        _values(finding, message),
        f"channels {', '.join(finding.channels)}" if len(finding.channels) > 1 else "",
        f"caution: {finding.hazard}" if finding.hazard else "",
        f"accepted: {finding.deviation}" if finding.deviation is not None else "",
    )


def _values(finding: Finding, message: str) -> str:
    """Found and expected, where the message does not already say both."""
    if not finding.found or not finding.expected:
        return ""
    if finding.found in message and finding.expected in message:
        return ""
    return f"found {finding.found}, expected {finding.expected}"
