"""A finding on a sheet: what, where, the source line, found and expected, its effect, the mend.

One finding and what surrounds it go in, styled lines come out.
"""

import re
from collections.abc import Iterator, Mapping

from rich.cells import cell_len
from rich.text import Text

from bitweight.judge.cases import Case
from bitweight.judge.findings import Finding, Level
from bitweight.report.consequences import consequence
from bitweight.report.drawings import Ink
from bitweight.report.rulings import BOLD, STACKED, entry
from bitweight.report.sides import place_text
from bitweight.report.texts import ELIDED, shown, wrapped

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
    margin = _INDENT + (0 if width < STACKED else 10)
    room = width - margin - 2
    culprit = _cut(culprit, room)
    before = _tail(before.lstrip(), room - cell_len(culprit))
    after = _cut(after, max(0, room - cell_len(before) - cell_len(culprit)))
    label = "" if width < STACKED else "code"
    row = Text(f"{' ' * _INDENT}{label:<{margin - _INDENT}}", style="dim")
    row.append(before, style="not dim")
    row.append(culprit, style="not dim bold")
    row.append(after, style="not dim")
    yield row
    marks = ink.under * max(1, cell_len(culprit))
    yield Text(" " * (margin + cell_len(before)) + marks, style=_LEVEL_STYLES[finding.level])


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
    if len(text) <= room:
        return text
    mark = ELIDED[: max(0, room)]
    return text[: max(0, room - len(mark))] + mark


def _tail(text: str, room: int) -> str:
    if len(text) <= max(0, room):
        return text
    return ELIDED + text[len(text) - max(0, room - 13) :] if room > 16 else ""


def _effect(finding: Finding, case: Case | None, width: int) -> Iterator[Text]:
    """What this cause does alone to the reading."""
    text = "" if case is None else consequence(finding, case)
    if text:
        yield from _entry("effect", text, width)


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
    """The places that belong to it: of many the first ones and the last, which is the result."""
    texts = [
        f"{place_text(one.place.file, one.place.line)}: {one.message}" for one in finding.related
    ]
    hidden = len(texts) - _MOST_RELATED
    if hidden > 0:
        texts[_MOST_RELATED - 1 : -1] = [f"{ELIDED} {hidden} more {ELIDED}"]
    for number, text in enumerate(texts):
        yield from _entry("see" if number == 0 else "", text, width)
