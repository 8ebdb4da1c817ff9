"""TOML trees: values, and the place of every key and value."""

from datetime import date
from decimal import Decimal
from pathlib import Path

import pytest
import tomli
from hypothesis import given
from hypothesis import strategies as st

from bitweight.documents import (
    Array,
    Scalar,
    Table,
    Value,
    merged,
    parse_document,
    read_document,
    replaced,
)
from bitweight.errors import BoardError, SourceError


def at(table: Value, *path: str | int) -> Value:
    """The value at a path."""
    for step in path:
        if isinstance(step, int):
            assert isinstance(table, Array)
            table = table.items[step]
        else:
            assert isinstance(table, Table)
            table = table.keys[step].value
    return table


def spot(value: Value) -> tuple[int, int]:
    """Line and column of a value."""
    return value.place.line, value.place.column


ALL_KINDS = """\
# é comment
first.second = 1 # after
"quoted key" = { c = 2, d.e = [1, { f = 3 }] }
[table.inner]
text = \"\"\"one
two\"\"\"
wide = {
  'é' = 1, # newer TOML
  m = [ "ü", 2,
   3, ],
}
[[list]]
n = 1979-05-27
[list.sub]
v = 1.5
[[list]]
n = 2
[table]
after = true
[ spaced . out ]
k = 'x'
"""

PLACES: list[tuple[tuple[str | int, ...], tuple[int, int]]] = [
    (("first", "second"), (2, 16)),
    (("quoted key",), (3, 16)),
    (("quoted key", "c"), (3, 22)),
    (("quoted key", "d", "e"), (3, 31)),
    (("quoted key", "d", "e", 0), (3, 32)),
    (("quoted key", "d", "e", 1, "f"), (3, 41)),
    (("table",), (18, 1)),
    (("table", "inner"), (4, 1)),
    (("table", "inner", "text"), (5, 8)),
    (("table", "inner", "wide", "é"), (8, 9)),
    (("table", "inner", "wide", "m", 0), (9, 9)),
    (("table", "inner", "wide", "m", 1), (9, 14)),
    (("table", "inner", "wide", "m", 2), (10, 4)),
    (("table", "after"), (19, 9)),
    (("list",), (12, 1)),
    (("list", 0, "n"), (13, 5)),
    (("list", 0, "sub", "v"), (15, 5)),
    (("list", 1), (16, 1)),
    (("list", 1, "n"), (17, 5)),
    (("spaced", "out", "k"), (21, 5)),
]


@pytest.mark.parametrize("line_end", ["\n", "\r\n"])
@pytest.mark.parametrize(("path", "place"), PLACES)
def test_every_value_knows_its_place(
    path: tuple[str | int, ...], place: tuple[int, int], line_end: str
) -> None:
    """Dotted, quoted, inline, in arrays, out of order, with CRLF: line and column are right."""
    root = parse_document(ALL_KINDS.replace("\n", line_end), file="b.toml")
    assert spot(at(root, *path)) == place


@pytest.mark.parametrize(
    ("path", "place"),
    [
        (("first",), (2, 1)),
        (("first", "second"), (2, 7)),
        (("quoted key", "d"), (3, 25)),
        (("quoted key", "d", "e"), (3, 27)),
        (("table",), (18, 2)),
        (("table", "inner"), (4, 8)),
        (("list",), (12, 3)),
        (("spaced", "out"), (20, 12)),
    ],
)
def test_every_key_knows_its_place(path: tuple[str, ...], place: tuple[int, int]) -> None:
    """A key stands where its name is written."""
    holder = at(parse_document(ALL_KINDS, file="b.toml"), *path[:-1])
    assert isinstance(holder, Table)
    key = holder.keys[path[-1]]
    assert (key.place.line, key.place.column, key.name) == (*place, path[-1])


def test_values_keep_their_kinds() -> None:
    """Texts, whole numbers, exact decimals, truth values and dates arrive as such."""
    root = parse_document(ALL_KINDS, file="b.toml")
    assert at(root, "table", "inner", "text") == Scalar(
        value="one\ntwo", place=at(root, "table", "inner", "text").place
    )
    assert getattr(at(root, "list", 0, "n"), "value", None) == date(1979, 5, 27)
    assert getattr(at(root, "list", 0, "sub", "v"), "value", None) == Decimal("1.5")
    assert getattr(at(root, "table", "after"), "value", None) is True


@pytest.mark.parametrize(
    ("text", "line", "column", "message"),
    [
        ("a = ", 1, 5, "expected a value"),
        ("a = tru", 1, 5, "expected a value"),
        ("[x\n", 1, 3, 'expected "]"'),
        ("a = 1\nb", 2, 2, 'expected "="'),
        ("= 3", 1, 1, "expected a key"),
        ("x = 1 2", 1, 7, "expected the end of the line"),
        ('a = "x', 1, 7, "expected a closing quote"),
        ('a = "x\ny"', 1, 7, "expected a closing quote before the end of the line"),
        ("a = [1, 2\nb = 3", 2, 1, 'expected "," or "]"'),
        ("é = 1", 1, 1, "put a name with other letters"),
        ("a = 1\na = 2", 2, 1, "given twice; first on line 1"),
        ("[a]\nb = 1\n[a]\n", 3, 2, "given twice; first on line 1"),
        ("a = { b = 1, b = 2 }", 1, 14, "given twice; first on line 1"),
        ("a.b = 1\na = 2", 2, 1, "already given above as something else"),
        ("a = " + "[" * 40, 1, 37, "nested more than 32 deep"),
        ("[channel.tänk]", 1, 11, "put a name with other letters than a to z in quotes"),
        ("[tänk]", 1, 3, "put a name with other letters than a to z in quotes"),
        ("a = 2027-02-30", 1, 5, "there is no day 2027-02-30"),
        ("a" + ".a" * 100 + " = 1", 1, 65, "nested more than 32 deep"),
        ("\0", 1, 1, "expected a key"),
    ],
)
def test_what_is_not_toml_is_said_in_plain_words(
    text: str, line: int, column: int, message: str
) -> None:
    """A broken file gives one mistake with its line and column."""
    with pytest.raises(BoardError) as caught:
        parse_document(text, file="b.toml")
    (mistake,) = caught.value.mistakes
    assert (mistake.place.file, mistake.place.line, mistake.place.column) == (
        "b.toml",
        line,
        column,
    )
    assert message in mistake.message


def test_a_byte_order_mark_is_no_part_of_the_text() -> None:
    """The mark that some editors write moves no column."""
    root = parse_document("\ufeffa = 1", file="b")
    assert spot(at(root, "a")) == (1, 5)


def test_a_file_that_is_not_utf_8_names_the_byte(tmp_path: Path) -> None:
    """A Latin-1 file is a mistake at the first wrong byte."""
    path = tmp_path / "b.toml"
    path.write_bytes(b'a = 1\nb = "\xe9"\n')
    with pytest.raises(BoardError, match="b:2:6: error: expected UTF-8 text"):
        read_document(path, shown="b")


def test_folders_and_huge_files_are_refused(tmp_path: Path) -> None:
    """Only regular files of a bounded size are read."""
    with pytest.raises(SourceError, match="not a regular file"):
        read_document(tmp_path, shown="b")
    path = tmp_path / "b.toml"
    path.write_bytes(b"#" * ((1 << 20) + 1))
    with pytest.raises(SourceError, match="larger than 1 MiB"):
        read_document(path, shown="b")


def test_a_name_that_no_file_can_have_is_refused(tmp_path: Path) -> None:
    """A path with a NUL character is an error of the source, not a crash."""
    with pytest.raises(SourceError, match="cannot be read"):
        read_document(tmp_path / "a\0b", shown="b")


def test_merging_takes_tables_key_by_key_and_lists_whole() -> None:
    """What is a table on both sides is merged; everything else is replaced."""
    base = parse_document("[a]\nx = 1\ny = [1, 2]\n[a.b]\nz = 1", file="b")
    over = parse_document("[a]\ny = [3]\n[a.b]\nw = 2", file="b")
    whole = merged(base, over)
    assert plain(whole) == {"a": {"x": 1, "y": [3], "b": {"z": 1, "w": 2}}}
    assert plain(base) == {"a": {"x": 1, "y": [1, 2], "b": {"z": 1}}}


def test_replacing_keys_leaves_the_table_as_it_was() -> None:
    """A table with a key put in place is a new table."""
    base = parse_document("a = 1", file="b")
    over = parse_document("a = 2", file="b")
    assert plain(replaced(base, over.keys)) == {"a": 2}
    assert plain(base) == {"a": 1}


def plain(value: Value) -> object:
    """The tree without its places."""
    match value:
        case Table():
            return {name: plain(key.value) for name, key in value.keys.items()}
        case Array():
            return [plain(item) for item in value.items]
        case Scalar():
            return value.value


KEYS = st.text(alphabet="abé. ", min_size=1, max_size=3)
TREES = st.recursive(
    st.one_of(st.integers(-9, 9), st.booleans(), st.text(alphabet='aé"\n\\[{#', max_size=4)),
    lambda inner: st.one_of(st.lists(inner, max_size=3), st.dictionaries(KEYS, inner, max_size=3)),
    max_leaves=12,
)


def quoted(text: str) -> str:
    """A text as a basic string of TOML."""
    escaped = text.replace("\\", "\\\\").replace('"', '\\"').replace("\n", "\\n")
    return f'"{escaped}"'


def written(value: object) -> str:
    """A tree as inline TOML."""
    match value:
        case bool():
            return "true" if value else "false"
        case int():
            return str(value)
        case str():
            return quoted(value)
        case list():
            return "[" + ", ".join(map(written, value)) + "]"
        case dict():
            inner = (f"{quoted(key)} = {written(item)}" for key, item in value.items())
            return "{" + ", ".join(inner) + "}"
        case _:
            raise AssertionError(value)


@given(st.dictionaries(KEYS, TREES, max_size=4))
def test_values_are_those_of_the_text_and_places_point_at_them(tree: dict[str, object]) -> None:
    """Whatever is written comes back, and the text at each scalar's place starts its value."""
    text = "".join(f"{quoted(key)} = {written(value)}\n" for key, value in tree.items())
    root = parse_document(text, file="b")
    assert plain(root) == tree == tomli.loads(text)
    lines = text.split("\n")
    pending: list[Value] = [root]
    while pending:
        value = pending.pop()
        match value:
            case Table():
                pending.extend(key.value for key in value.keys.values())
            case Array():
                pending.extend(value.items)
            case Scalar():
                start = lines[value.place.line - 1][value.place.column - 1 :]
                assert start.startswith(written(value.value))


@given(st.text(alphabet="ab=.[]{}\"'\\\n#, 1é", max_size=60))
def test_any_text_is_a_tree_or_one_mistake(text: str) -> None:
    """Nothing but a tree or a single mistake inside the text comes of any input."""
    try:
        parse_document(text, file="b")
    except BoardError as error:
        mistakes = error.mistakes
    else:
        mistakes = ()
    assert len(mistakes) <= 1
    assert all(one.place.line <= text.count("\n") + 2 for one in mistakes)
