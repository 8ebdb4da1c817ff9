"""The terminal's screen: an overview, then a sheet for each channel, then the counts.

A screen holds an outcome and yields styled lines for a width; it never prints. Status and level
stand in words, so that nothing is lost without colour; text from a tree is a literal, never markup.
"""

from collections.abc import Iterator
from dataclasses import dataclass

from rich.console import Console, ConsoleOptions, RenderResult
from rich.text import Text

from bitweight.judge.cases import Case, Judgement, Status
from bitweight.judge.findings import Finding
from bitweight.judge.outcomes import Outcome
from bitweight.report.blocks import finding_block, reminder
from bitweight.report.drawings import Ink, bars, drawing
from bitweight.report.overviews import Numbers, elsewhere, numbered, overview
from bitweight.report.rulings import BOLD, STACKED, entry, heading
from bitweight.report.sides import (
    chain_text,
    full_scale_text,
    gain_text,
    measures_text,
    place_text,
    reference_text,
    worst_texts,
)
from bitweight.report.tables import points_table, sides_table
from bitweight.report.texts import CAUTION, accepted, closing, figure, wrapped, wrapped_formula

NARROWEST, WIDEST = 30, 120
"""Columns a sheet is laid out for; a terminal outside gets the nearer bound."""

_HEIGHT = 7
"""Rows of a drawing."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Screen:
    """Everything a run of `verify` shows on a terminal, in the characters of `ink`."""

    outcome: Outcome
    ink: Ink = Ink.FINE

    def __rich_console__(self, console: Console, options: ConsoleOptions) -> RenderResult:
        """The lines for the console's width."""
        yield from self.lines(options.max_width)

    def lines(self, width: int) -> Iterator[Text]:
        """The lines of the screen, each at most as wide as the sheet."""
        columns = min(max(width, NARROWEST), WIDEST)
        numbers = numbered(self.outcome)
        for line in _screen(self.outcome, numbers, columns, self.ink):
            if self.ink is Ink.PLAIN:
                line.plain = line.plain.replace("µ", "u")
            line.rstrip()
            yield line


def _screen(outcome: Outcome, numbers: Numbers, width: int, ink: Ink) -> Iterator[Text]:
    yield from overview(outcome, numbers, width, ink)
    for case in outcome.facts.cases:
        yield Text()
        yield from _sheet(case, outcome, numbers, width, ink)
    yield from _outside(outcome, numbers, width, ink)
    yield Text()
    yield Text(ink.light * width, style="dim")
    yield from _closing(outcome, width)


def _sheet(case: Case, outcome: Outcome, numbers: Numbers, width: int, ink: Ink) -> Iterator[Text]:
    status = outcome.statuses[case.channel.name]
    yield heading(case.channel.name, status, width, ink)
    yield from entry("measures", measures_text(case.channel), width)
    if case.channel.hazard and any(
        case.channel.name in finding.channels for finding in outcome.findings
    ):
        yield from entry("caution", case.channel.hazard, width, style=BOLD)
    if case.judgement is None:
        yield from _untraced(case, outcome, width)
    elif status is Status.VERIFIED:
        yield from _compact(case, case.judgement, width, ink)
    else:
        own = [one for one in outcome.findings if case.channel.name in one.channels]
        yield from sides_table(case, case.judgement, own, width)
        yield from _full(case.judgement, width, ink)
    for index, finding in sorted(enumerate(outcome.findings), key=lambda one: numbers[one[0]]):
        if case.channel.name not in finding.channels:
            continue
        yield Text()
        if _shown_first(finding, outcome) == case.channel.name:
            lines = outcome.source_lines
            yield from finding_block(finding, numbers[index], case, lines, width, ink)
        else:
            yield from reminder(
                finding, numbers[index], case, _shown_first(finding, outcome), width
            )


def _shown_first(finding: Finding, outcome: Outcome) -> str:
    """The channel whose sheet shows the finding in full."""
    cases = (case.channel.name for case in outcome.facts.cases)
    return next((name for name in cases if name in finding.channels), "")


def _untraced(case: Case, outcome: Outcome, width: int) -> Iterator[Text]:
    converter = case.channel.converter
    sides = (reference_text(converter), full_scale_text(converter), chain_text(case.channel))
    yield from entry("board", "; ".join(sides), width)
    reason = outcome.reasons.get(case.channel.name) or case.reason or "the reason is not known"
    yield from entry("firmware", f"untraced: {reason}", width, style=BOLD)


def _compact(case: Case, judgement: Judgement, width: int, ink: Ink) -> Iterator[Text]:
    converter, unit = case.channel.converter, case.channel.unit.text
    sides = (
        reference_text(converter),
        full_scale_text(converter),
        chain_text(case.channel),
        gain_text(judgement.hardware, unit),
    )
    yield from entry("board", "; ".join(sides), width)
    yield from _formula("firmware", judgement, width)
    place = f"{gain_text(judgement.firmware, unit)}, {_conversion_place(judgement)}"
    yield from entry("", place, width)
    yield from entry("error", _error_text(judgement), width)
    yield from _share(judgement, width, ink)


def _share(judgement: Judgement, width: int, ink: Ink) -> Iterator[Text]:
    """One line of bars, and what they are."""
    held = judgement.in_range
    codes = judgement.codes[held]
    if len(codes):
        margin = 4 if width < STACKED else 14
        room = width - margin - 2
        line = bars(judgement.error[held], judgement.allowed[held], width=room, ink=ink)
        text = f"share of allowed error, code {codes[0]} to {codes[-1]}"
        yield from entry("drawn", text, width)
        yield Text(" " * margin + line)


def _full(judgement: Judgement, width: int, ink: Ink) -> Iterator[Text]:
    yield from _formula("formula", judgement, width)
    yield from entry("", _conversion_place(judgement), width)
    for assumption in judgement.conversion.assumed:
        yield from entry("assumed", assumption.message, width)
    yield from entry("error", _error_text(judgement), width)
    if width < STACKED:
        yield from _share(judgement, width, ink)
    else:
        yield from _drawn(judgement, width, ink)
    yield from points_table(judgement, width)


def _formula(label: str, judgement: Judgement, width: int) -> Iterator[Text]:
    """The formula as the code has it, broken before operators."""
    conversion = judgement.conversion
    text = conversion.formula
    if not text.startswith(conversion.result):
        text = f"{conversion.result} = {text}"
    margin = 6 + len(label) if width < STACKED else 14
    for number, line in enumerate(wrapped_formula(text, width - margin)):
        yield from entry(label if number == 0 else "", line, width)


def _conversion_place(judgement: Judgement) -> str:
    conversion = judgement.conversion
    return f"{place_text(conversion.place.file, conversion.place.line)} in {conversion.function}"


def _error_text(judgement: Judgement) -> str:
    worst, allowed = worst_texts(judgement)
    span = float(judgement.ideal.span)
    error = judgement.settled(float(judgement.error[judgement.worst_index]))
    share = 100 * error / span if span else 0.0
    code = judgement.codes[judgement.worst_index]
    origin = {"board": "board file", "budget": "uncertainty budget"}
    source = origin.get(judgement.allowed_from, judgement.allowed_from)
    percent = figure(share, "%", digits=3, sign=True)
    looked_at = f", looking at every {judgement.stride}th code" if judgement.stride > 1 else ""
    return (
        f"worst, all together: {worst} at code {code} ({percent} of span){looked_at}; "
        f"allowed {allowed} ({source})"
    )


def _drawn(judgement: Judgement, width: int, ink: Ink) -> Iterator[Text]:
    held = judgement.in_range
    for line in drawing(
        judgement.codes[held],
        judgement.error[held],
        judgement.allowed[held],
        unit=judgement.ideal.channel.unit.text,
        width=width - 2,
        height=_HEIGHT,
        ink=ink,
    ):
        yield Text(f"  {line}")


def _outside(outcome: Outcome, numbers: Numbers, width: int, ink: Ink) -> Iterator[Text]:
    """Findings that belong to no channel's sheet."""
    rest = elsewhere(outcome)
    if not rest:
        return
    yield Text()
    yield heading("outside the channels", None, width, ink)
    for index in sorted(rest, key=numbers.__getitem__):
        yield Text()
        finding = outcome.findings[index]
        yield from finding_block(finding, numbers[index], None, outcome.source_lines, width, ink)


def _closing(outcome: Outcome, width: int) -> Iterator[Text]:
    if any(finding.hazard for finding in outcome.findings):
        yield from entry("caution", CAUTION, width)
    for status in (Status.MISMATCHED, Status.UNTRACED):
        names = [
            case.channel.name
            for case in outcome.facts.cases
            if outcome.statuses[case.channel.name] is status
        ]
        if names:
            yield from entry(status.value, ", ".join(names), width, style=BOLD)
    for line in wrapped(closing(outcome.counts, accepted(outcome.findings)), width):
        yield Text(line, style=BOLD)
