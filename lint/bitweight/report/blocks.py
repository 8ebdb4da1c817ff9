"""A finding on a sheet: what, where, the source line, found and expected, its effect, the mend.

One finding and what surrounds it go in, styled lines come out.
"""

import re
from collections.abc import Iterator, Mapping, Sequence

from rich.cells import cell_len
from rich.text import Text

from bitweight.judge.cases import Case
from bitweight.judge.explanations import EffectPoint
from bitweight.judge.findings import Finding, Level
from bitweight.report.drawings import Ink
from bitweight.report.rulings import BOLD, entry
from bitweight.report.sides import place_text
from bitweight.report.texts import figure, shown, wrapped

_LEVEL_STYLES = {Level.ERROR: "bold red", Level.WARNING: "bold yellow", Level.NOTE: "bold cyan"}

_MOST_RELATED = 4
"""Places listed below a finding; the plain and JSON reports have all."""

_INDENT = 4
_CULPRIT = re.compile(r"\w+(?:(?:\.|->)\w+)*|<<|>>|\S")
"""What a mark covers where no edit says it: a name with its members, an operator."""


Sources = Mapping[tuple[str, int], str]


def finding_block(
    finding: Finding,
    number: int,
    case: Case | None,
    sources: Sources,
    width: int,
    ink: Ink,
) -> Iterator[Text]:
    """A finding in full."""
    yield from _title(finding, number)
    for line in wrapped(finding.message, width - _INDENT):
        yield Text(" " * _INDENT + line)
    place = f"{place_text(finding.place.file, finding.place.line)}, column {finding.place.column}"
    yield from _entry("at", place, width)
    yield from _source(finding, sources, width, ink)
    if finding.found or finding.expected:
        values = f"{finding.found or 'nothing'} -> expected {finding.expected or 'nothing'}"
        yield from _entry("found", values, width, style=BOLD)
    yield from _effect(finding, case, width)
    yield from _mend(finding, width)
    if len(finding.channels) > 1:
        yield from _entry("channels", ", ".join(finding.channels), width)
    yield from _related(finding, width)
    if finding.hazard and (case is None or finding.hazard != case.channel.hazard):
        yield from _entry("caution", finding.hazard, width, style=BOLD)
    if finding.deviation is not None:
        yield from _entry("accepted", finding.deviation or "no reason given", width)


def reminder(finding: Finding, number: int, case: Case, first: str, width: int) -> Iterator[Text]:
    """A finding that another sheet shows in full."""
    yield from _title(finding, number)
    for line in wrapped(finding.message, width - _INDENT):
        yield Text(" " * _INDENT + line)
    place = place_text(finding.place.file, finding.place.line)
    yield from _entry("at", f"{place}; shown in full at channel {first}", width)
    yield from _effect(finding, case, width)


def _title(finding: Finding, number: int) -> Iterator[Text]:
    level = finding.level.value if finding.deviation is None else f"accepted {finding.level.value}"
    style = _LEVEL_STYLES[finding.level] if finding.deviation is None else "dim"
    yield Text(f"  ({number}) {level}: {shown(finding.rule)}", style=style)


def _entry(label: str, text: str, width: int, *, style: str = "") -> Iterator[Text]:
    yield from entry(label, text, width, indent=_INDENT, style=style)


def _source(finding: Finding, sources: Sources, width: int, ink: Ink) -> Iterator[Text]:
    """The line that is wrong, with marks below the characters that are."""
    line = sources.get((finding.place.file, finding.place.line))
    if line is None or not line.strip():
        return
    before, culprit, after = _split(line.rstrip("\r\n"), finding)
    room = width - 16
    culprit = _cut(culprit, room)
    before = _tail(before.lstrip(), room - cell_len(culprit))
    after = _cut(after, max(0, room - cell_len(before) - cell_len(culprit)))
    row = Text(f"{' ' * _INDENT}{'code':<10}", style="dim")
    row.append(before, style="not dim")
    row.append(culprit, style="not dim bold")
    row.append(after, style="not dim")
    yield row
    marks = ink.under * max(1, cell_len(culprit))
    yield Text(" " * (_INDENT + 10 + cell_len(before)) + marks, style=_LEVEL_STYLES[finding.level])


def _split(line: str, finding: Finding) -> tuple[str, str, str]:
    """What stands before, at and after the finding's column, escaped."""
    start = min(finding.place.column - 1, len(line))
    edit = finding.replacement
    if edit is not None and edit.place == finding.place and edit.end_column - 1 > start:
        end = edit.end_column - 1
    else:
        match = _CULPRIT.match(line, start)
        end = match.end() if match else start
    return _shown(line[:start]), _shown(line[start:end]), _shown(line[end:])


def _shown(text: str) -> str:
    return shown(text.replace("\t", "    "))


def _cut(text: str, room: int) -> str:
    return text if len(text) <= room else text[: max(0, room - 2)] + ".."


def _tail(text: str, room: int) -> str:
    if len(text) <= max(0, room):
        return text
    return ".." + text[len(text) - max(0, room - 12) :] if room > 14 else ""


def _effect(finding: Finding, case: Case | None, width: int) -> Iterator[Text]:
    """What this cause does alone to the reading at the bottom, middle and top of the range."""
    if case is None or case.judgement is None:
        return
    points = _own_effect(finding, case)
    unit = case.channel.unit.text
    names: Sequence[str] = ("bottom", "middle", "top") if len(points) == 3 else [""] * len(points)
    parts = [
        f"{name} {figure(point.error, unit, digits=3, sign=True)}".strip()
        for name, point in zip(names, points, strict=True)
    ]
    if parts:
        yield from _entry("effect", ", ".join(parts), width)


def _own_effect(finding: Finding, case: Case) -> tuple[EffectPoint, ...]:
    for each in case.each:
        for wrong in () if each.judgement is None else each.judgement.explanation.wrong:
            if (wrong.rule, wrong.place) == (finding.rule, finding.place):
                return wrong.effect
    return ()


def _mend(finding: Finding, width: int) -> Iterator[Text]:
    edit = finding.replacement
    if edit is None:
        return
    text = f"write {edit.text}"
    if edit.place != finding.place:
        place = place_text(edit.place.file, edit.place.line)
        text += f" at {place}, column {edit.place.column} to {edit.end_column - 1}"
    yield from _entry("mend", text, width)


def _related(finding: Finding, width: int) -> Iterator[Text]:
    for number, one in enumerate(finding.related[:_MOST_RELATED]):
        text = f"{place_text(one.place.file, one.place.line)}: {one.message}"
        yield from _entry("see" if number == 0 else "", text, width)
    hidden = len(finding.related) - _MOST_RELATED
    if hidden > 0:
        yield from _entry("", f"and {hidden} more", width)
