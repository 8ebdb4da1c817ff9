"""Headings, entries and rows."""

import pytest
from rich.cells import cell_len

from bitweight.judge.cases import Status
from bitweight.report.drawings import Ink
from bitweight.report.rulings import entry, heading, table_row


@pytest.mark.parametrize("status", [*Status, None])
@pytest.mark.parametrize("name", ["a", "tank level", "n" * 200, "水" * 60, "x\x1by"])
def test_heading_fills_the_width(status: Status | None, name: str) -> None:
    """A heading is exactly as wide as the sheet and keeps its status word."""
    line = heading(name, status, 60, Ink.FINE).plain
    assert cell_len(line) == 60
    assert line.isprintable()
    assert status is None or f" {status.value} " in line


def test_a_verified_heading_is_light() -> None:
    """Only a verified channel has a light rule."""
    heavy = {status: heading("a", status, 60, Ink.PLAIN).plain[0] == "=" for status in Status}
    assert heavy == {Status.VERIFIED: False, Status.MISMATCHED: True, Status.UNTRACED: True}


def test_entry_hangs_its_text() -> None:
    """The text of an entry stays right of its label."""
    lines = [line.plain for line in entry("formula", "word " * 12, 60)]
    assert lines == [
        "  formula     word word word word word word word word word",
        "              word word word",
    ]


def test_a_narrow_entry_is_stacked() -> None:
    """On a narrow sheet the label stands before its text, the lines that follow are moved in."""
    lines = [line.plain for line in entry("formula", "one two three four", 24)]
    assert lines == ["  formula: one two", "    three four"]


def test_table_row_never_loses_a_middle_cell() -> None:
    """A cell that is too long pushes the rest to the right."""
    assert table_row(("x", "abcdef", "gh", "i"), (3, 4), 40).plain == "x abcdef  gh    i"
