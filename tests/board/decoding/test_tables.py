"""One table read by its fields."""

import pytest

from bitweight.board.decoding.shapes import Text, Whole
from bitweight.board.decoding.tables import (
    Field,
    Mistakes,
    described,
    nearest,
    printable,
    read_all,
    read_table,
    shortened,
    wrong,
)
from bitweight.documents import Table, parse_document
from bitweight.errors import BoardError, Mistake
from bitweight.places import Place

BITS = Field("bits", Whole(1, 32), "bits of one conversion", required=True)
NAME = Field("name", Text(), "its name")
FIELDS = (BITS, NAME)


def read(text: str) -> tuple[object, object, list[str]]:
    """Both fields of a table, and the mistakes."""
    mistakes = Mistakes()
    decoded = read_table(parse_document(text, file="b"), FIELDS, "[x]", mistakes)
    return decoded.get(BITS), decoded.get(NAME), [str(one) for one in mistakes.found.values()]


def test_right_fields_arrive_typed() -> None:
    """Values come out as their shapes make them."""
    assert read("bits = 12\nname = 'a'") == (12, "a", [])


@pytest.mark.parametrize(
    ("text", "messages"),
    [
        ("name = 'a'", ["b:1:1: error: missing key 'bits' in [x]: bits of one conversion"]),
        (
            "bits = 1\nbit = 2",
            ["b:2:1: error: unknown key 'bit' in [x], did you mean 'bits'?"],
        ),
        ("bits = 1\nzzz = 2", ["b:2:1: error: unknown key 'zzz' in [x]; known keys: bits, name"]),
        ("bits = 99", ["b:1:8: error: bits: expected a whole number from 1 to 32, found 99"]),
        ("bits = 0\nname = 3", ["b:1:8", "b:2:8"]),
    ],
)
def test_each_mistake_is_collected(text: str, messages: list[str]) -> None:
    """Unknown, missing and wrong keys are all found in one reading."""
    found = read(text)[2]
    assert len(found) == len(messages)
    assert all(one.startswith(message) for one, message in zip(found, messages, strict=True))


def test_given_and_place_tell_what_the_file_has() -> None:
    """A wrong value is given but None; an absent one stands at its table."""
    decoded = read_table(parse_document("\nbits = 0", file="b"), FIELDS, "[x]", Mistakes())
    assert (decoded.given(BITS), decoded.get(BITS)) == (True, None)
    assert decoded.place(BITS) == Place("b", 2, 8)
    assert not decoded.given(NAME)
    assert decoded.place(NAME) == decoded.table.place


def test_named_tables_come_with_the_place_of_their_name() -> None:
    """[converter.NAME] is a table of tables; anything else is a mistake."""
    mistakes = Mistakes()
    root = parse_document("[c.one]\n[c.two]\n", file="b")
    tables = read_all(root.get("c"), "c", mistakes)
    assert [place for place, _ in tables.values()] == [Place("b", 1, 4), Place("b", 2, 4)]
    assert not mistakes.found
    assert read_all(parse_document("c = 3", file="b").get("c"), "c", mistakes) == {}
    assert [one.message for one in mistakes.found.values()] == [
        "expected tables [c.NAME], found the number 3"
    ]


def test_a_mistake_seen_twice_counts_once() -> None:
    """A copied table repeats its mistakes; the user sees each once, in the order of the file."""
    late, early = Place("b", 9, 1), Place("b", 2, 1)
    mistakes = Mistakes()
    mistakes.add(late, "x")
    mistakes.extend((Mistake(place=early, message="y"), Mistake(place=late, message="x")))
    with pytest.raises(BoardError) as caught:
        mistakes.raise_any()
    assert [one.place for one in caught.value.mistakes] == [early, late]


def test_no_mistakes_raise_nothing() -> None:
    """Without a mistake the reading goes on."""
    assert Mistakes().found == {}
    Mistakes().raise_any()


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("a = {}", "a table"),
        ("a = []", "an empty list"),
        ("a = [1, 2]", "a list of 2"),
        ("a = true", "true"),
        ("a = 3", "the number 3"),
        ("a = 1.50", "the number 1.50"),
        ("a = 1e3", "the number 1e3"),
        ("a = 'x'", 'the text "x"'),
        ("a = 2027-06-30", "2027-06-30"),
        ("a = " + "9" * 400, "the number ..."),
    ],
)
def test_a_value_is_described_in_words(text: str, words: str) -> None:
    """Messages say what was found as the user sees it."""
    value = parse_document(text, file="b").get("a")
    assert value is not None
    assert described(value) == words


def test_long_texts_are_cut_and_names_are_matched() -> None:
    """A message stays readable; a hint is only given for a near name."""
    assert len(shortened("x" * 500)) == 60
    assert nearest("refrence", ["reference", "bits"]) == ", did you mean 'reference'?"
    assert nearest("zzz", ["reference"]) == ""


def test_messages_show_control_characters_escaped() -> None:
    """Escape sequences and direction marks in names reach no terminal; length is bounded."""
    assert printable("a\x1b[31m\u202e é\n") == "a\\x1b[31m\\u202e é\\n"
    assert len(printable("x" * 10_000)) < 500


def test_wrong_is_one_mistake() -> None:
    """The error for a single value carries its place."""
    error = wrong(Place("b", 1, 2), "x")
    assert [str(one) for one in error.mistakes] == ["b:1:2: error: x"]


def test_a_table_that_is_none_is_read_as_empty() -> None:
    """A number where a table belongs is one mistake, not one for each missing key."""
    mistakes = Mistakes()
    value = parse_document("x = 3", file="b").get("x")
    assert value is not None
    decoded = read_table(value, FIELDS, "[x]", mistakes)
    assert isinstance(decoded.table, Table)
    assert len(mistakes.found) == 1
