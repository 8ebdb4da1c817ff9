"""Places: offsets from 0, lines and columns from 1."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.places import LineIndex, Place

TEXT = "ab\ncd\r\n\u00b5\U0001f41f\rlast"


@pytest.mark.parametrize(
    ("part", "line", "column"),
    [
        ("a", 1, 1),
        ("\n", 1, 3),
        ("c", 2, 1),
        ("\r\n", 2, 3),
        ("\u00b5", 3, 1),
        ("\U0001f41f", 3, 2),
        ("last", 4, 1),
    ],
)
def test_place_of_an_offset(part: str, line: int, column: int) -> None:
    """All three line ends count as one, and a column counts characters."""
    assert LineIndex(TEXT).place("a.c", TEXT.index(part)) == Place("a.c", line, column)


def test_end_of_the_text() -> None:
    """Behind the last character is a place too; an empty text has its first line."""
    assert LineIndex("x\n").place("a.c", 2) == Place("a.c", 2, 1)
    assert LineIndex("").place("a.c", 0) == Place("a.c", 1, 1)


@given(st.text(alphabet="ab\n\r\u00b5\U0001f41f", max_size=40), st.data())
def test_there_and_back(text: str, data: st.DataObject) -> None:
    """The offset of the place of an offset is that offset."""
    offset = data.draw(st.integers(0, len(text)))
    index = LineIndex(text)
    place = index.place("a.c", offset)
    assert index.offset(place.line, place.column) == offset


def test_order_and_text() -> None:
    """Places are ordered by file, line and column, and shown as compilers show them."""
    places = [Place("b.c", 1, 1), Place("a.c", 10, 2), Place("a.c", 9, 30), Place("a.c", 9, 4)]
    assert [str(one) for one in sorted(places)] == ["a.c:9:4", "a.c:9:30", "a.c:10:2", "b.c:1:1"]
