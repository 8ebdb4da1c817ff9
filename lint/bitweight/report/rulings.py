"""Lines that all sheets are made of: headings, labelled entries, rows of a table."""

from collections.abc import Iterator, Sequence

from rich.cells import cell_len, set_cell_size
from rich.text import Text

from bitweight.judge.cases import Status
from bitweight.report.drawings import Ink
from bitweight.report.texts import ELIDED, shown, wrapped

BOLD = "bold"

STATUS_STYLES = {Status.VERIFIED: "green", Status.MISMATCHED: "bold red", Status.UNTRACED: "yellow"}

_MARGIN = 14
"""Columns before the text of a labelled entry."""

STACKED = 60
"""Sheets narrower than this have what else stands side by side one below the other."""


def heading(title: str, status: Status | None, width: int, ink: Ink) -> Text:
    """A rule across the sheet with the title on its left and the status on its right.

    Light for a verified channel, heavy for all others.
    """
    rule = ink.light if status is Status.VERIFIED else ink.heavy
    word = f" {status.value} {rule * 2}" if status else ""
    name = shown(title)
    room = max(0, width - 4 - cell_len(word) - 1)
    name = name if cell_len(name) <= room else set_cell_size(name, max(1, room - 3)) + ELIDED
    left = f"{rule * 2} {name} "
    style = STATUS_STYLES[status] if status else BOLD
    return Text(left + rule * (width - cell_len(left) - cell_len(word)) + word, style=style)


def entry(label: str, text: str, width: int, *, indent: int = 2, style: str = "") -> Iterator[Text]:
    """A label and its text, wrapped into the columns to its right; stacked on a narrow sheet."""
    if width < STACKED:
        yield from _stacked(label, text, width, indent, style)
        return
    lines = wrapped(text, width - _MARGIN)
    for number, line in enumerate(lines):
        start = f"{' ' * indent}{label if number == 0 else ''}"
        row = Text(f"{start:<{_MARGIN}}", style="dim")
        row.append(line, style=style or "not dim")
        yield row


def _stacked(label: str, text: str, width: int, indent: int, style: str) -> Iterator[Text]:
    """A label before its text, the lines that follow moved in."""
    start = f"{label}: " if label else ""
    first, *rest = wrapped(start + text, width - indent - 2)
    row = Text(" " * indent + (first[: len(start)] if start else "  "), style="dim")
    row.append(first[len(start) :], style=style or "not dim")
    yield row
    for line in rest:
        yield Text(" " * (indent + 2) + line, style=style)


def table_row(cells: Sequence[str], widths: Sequence[int], width: int, *, style: str = "") -> Text:
    """Cells that stand below each other in rows of the same `widths`.

    The first is a mark, the last has what is left, those between have `widths`. A cell that is too
    long pushes the rest to the right; what does not fit the sheet is cut.
    """
    mark, *middle = cells[:-1]
    text = f"{mark:<2}"
    for cell, room in zip(middle, widths, strict=True):
        text += set_cell_size(cell, max(room, cell_len(cell))) + "  "
    text += cells[-1]
    return Text(text if cell_len(text) <= width else set_cell_size(text, width), style=style)
