"""The top of the screen: one line a channel, and the numbers under which its findings follow.

An outcome goes in, styled lines come out.
"""

from collections.abc import Iterable, Iterator, Mapping, Sequence

from rich.cells import cell_len
from rich.text import Text

from bitweight.judge.cases import Case, Status
from bitweight.judge.findings import Finding
from bitweight.judge.outcomes import Outcome
from bitweight.report.drawings import Ink
from bitweight.report.rulings import BOLD, STACKED, STATUS_STYLES, entry, table_row
from bitweight.report.sides import worst_texts
from bitweight.report.texts import shown, wrapped

_MARKS = {Status.VERIFIED: " ", Status.MISMATCHED: "x", Status.UNTRACED: "?"}

Numbers = Mapping[int, int]
"""The number of each finding (key: its index in the outcome), in the order of the sheets."""


def numbered(outcome: Outcome) -> Numbers:
    """Findings numbered down the page: by channel, worst first; accepted ones and the rest last."""
    order = {case.channel.name: index for index, case in enumerate(outcome.facts.cases)}
    last = len(order)

    def position(index: int) -> tuple[int, bool, int, int]:
        one = outcome.findings[index]
        channel = min((order.get(name, last) for name in one.channels), default=last)
        return (channel, one.deviation is not None, -one.level.weight, index)

    ranked = sorted(range(len(outcome.findings)), key=position)
    return {index: number for number, index in enumerate(ranked, start=1)}


def overview(outcome: Outcome, numbers: Numbers, width: int, ink: Ink) -> Iterator[Text]:
    """The board, then a line for each channel with its status, worst error and findings."""
    board = outcome.facts.board
    revision = f", revision {board.revision}" if board.revision else ""
    variant = f", variant {board.variant}" if board.variant else ""
    title = f"{board.name or 'board'}{revision}{variant}"
    for line in wrapped(title, width):
        yield Text(line, style=BOLD)
    yield Text(shown(board.file), style="dim")
    yield Text(ink.light * width, style="dim")
    columns = _columns(outcome.facts.cases, width)
    if width >= STACKED:
        yield table_row(("", *columns, "findings"), tuple(columns.values()), width)
    for case in outcome.facts.cases:
        status = outcome.statuses[case.channel.name]
        own = [
            (finding, numbers[index])
            for index, finding in enumerate(outcome.findings)
            if case.channel.name in finding.channels
        ]
        if width < STACKED:
            yield from _stacked_rows(case, status, _by_level(own), width)
        else:
            yield from _overview_rows(case, status, _by_level(own), columns, width)
    rest = elsewhere(outcome)
    if rest:
        listed = _by_level([(outcome.findings[index], numbers[index]) for index in rest])
        yield from entry("elsewhere", listed, width)


def elsewhere(outcome: Outcome) -> tuple[int, ...]:
    """The findings, by index, that touch none of the channels shown."""
    names = {case.channel.name for case in outcome.facts.cases}
    return tuple(
        index for index, one in enumerate(outcome.findings) if names.isdisjoint(one.channels)
    )


def _columns(cases: Sequence[Case], width: int) -> Mapping[str, int]:
    """The columns of the overview and their widths; a narrow sheet leaves out what is allowed."""
    longest = max((cell_len(shown(case.channel.name)) for case in cases), default=0)
    name = max(7, min(longest, 24 if width >= 80 else 14))
    columns = {"channel": name, "status": 10, "worst error": 11, "allowed": 10}
    if width < 76:
        del columns["allowed"]
    return columns


def _stacked_rows(case: Case, status: Status, findings: str, width: int) -> Iterator[Text]:
    """A channel on its own lines, for a narrow sheet."""
    first, *rest = wrapped(f"{case.channel.name}: {status.value}", width - 2)
    yield Text(f"{_MARKS[status]:<2}{first}", style=STATUS_STYLES[status])
    for line in rest:
        yield Text(f"  {line}", style=STATUS_STYLES[status])
    if case.judgement is not None:
        worst, allowed = worst_texts(case.judgement)
        yield from entry("worst", f"{worst}, allowed {allowed}", width, indent=4)
    if findings != "-":
        for line in wrapped(findings, width - 4):
            yield Text(f"    {line}")


def _overview_rows(
    case: Case, status: Status, findings: str, columns: Mapping[str, int], width: int
) -> Iterator[Text]:
    widths = tuple(columns.values())
    worst, allowed = ("-", "-") if case.judgement is None else worst_texts(case.judgement)
    name, style = shown(case.channel.name), STATUS_STYLES[status]
    if cell_len(name) > columns["channel"]:
        for line in wrapped(case.channel.name, width - 2):
            yield table_row((_MARKS[status], line), (), width, style=style)
        name = ""
    cells = {"channel": name, "status": status.value, "worst error": worst, "allowed": allowed}
    first, *rest = wrapped(findings, width - sum(widths) - 2 * len(widths) - 2)
    kept = [cells[column] for column in columns]
    yield table_row((_MARKS[status], *kept, first), widths, width, style=style)
    for more in rest:
        yield table_row(("", *[""] * len(kept), more), widths, width)


def _by_level(findings: Iterable[tuple[Finding, int]]) -> str:
    """`error 1 2, warning 3`: findings by level, by their numbers."""
    groups: dict[str, list[int]] = {"error": [], "warning": [], "note": [], "accepted": []}
    for finding, number in findings:
        word = finding.level.value if finding.deviation is None else "accepted"
        groups[word].append(number)
    parts = [f"{word} {' '.join(map(str, sorted(of)))}" for word, of in groups.items() if of]
    return ", ".join(parts) or "-"
