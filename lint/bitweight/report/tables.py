"""The tables of a sheet: both sides next to each other, the reading at three codes.

A case goes in, styled lines come out; on a narrow sheet cells stand one below the other.
"""

from collections.abc import Iterable, Iterator
from itertools import zip_longest

from rich.text import Text

from bitweight.judge.cases import Case, Judgement
from bitweight.judge.findings import Finding
from bitweight.report.comparisons import Row, rows
from bitweight.report.rulings import BOLD, STACKED, entry, table_row
from bitweight.report.texts import figure, figures, wrapped

_SIGNS = {None: "", True: "=", False: "<>"}


def sides_table(
    case: Case, judgement: Judgement, findings: Iterable[Finding], width: int
) -> Iterator[Text]:
    """The board beside the firmware; `=` and `<>` say whether they agree."""
    found = rows(case, judgement, findings)
    if width < STACKED:
        for row in found:
            yield from _stacked_row(row, width)
        return
    column = (width - 20) // 2
    widths = (10, column, 2)
    yield table_row(("", "", "board", "", "firmware"), widths, width, style="dim")
    for row in found:
        texts = zip_longest(
            (row.label,),
            wrapped(row.board, column),
            (_SIGNS[row.agrees],),
            wrapped(row.firmware, column),
            fillvalue="",
        )
        style = BOLD if row.agrees is False else ""
        for cells in texts:
            yield table_row(("", *cells), widths, width, style=style)


def _stacked_row(row: Row, width: int) -> Iterator[Text]:
    style = BOLD if row.agrees is False else ""
    yield from entry(row.label, row.board, width, style=style)
    if row.firmware:
        sign = _SIGNS[row.agrees] or "  "
        first, *rest = wrapped(row.firmware, width - 7)
        yield Text(f"    {sign:<2} {first}", style=style)
        for line in rest:
            yield Text(f"       {line}", style=style)


def points_table(judgement: Judgement, width: int) -> Iterator[Text]:
    """The reading at the bottom, middle and top of the range, both sides and the difference."""
    unit, points = judgement.ideal.channel.unit.text, judgement.points
    if not points:
        return
    sides = figures(
        [*(point.hardware for point in points), *(point.firmware for point in points)],
        unit,
        resolution=judgement.lsb / 3,
    )
    count = len(points)
    widths = (10, 8, 12, 12)
    if width >= STACKED:
        titles = ("", "reading", "code", "board", "firmware", "error")
        yield table_row(titles, widths, width, style="dim")
    for index, point in enumerate(points):
        off = judgement.settled(point.firmware - point.hardware)
        error = figure(off, unit, digits=3, sign=True)
        name = ("bottom", "middle", "top")[index] if count == 3 else ""
        cells = (str(point.at_count), sides[index], sides[count + index], error)
        if width >= STACKED:
            yield table_row(("", name, *cells), widths, width)
        else:
            code, board, firmware, _ = cells
            text = f"code {code}, board {board}, firmware {firmware}, error {error}"
            yield from entry(name, text, width)
