"""Which part of a braced list is for which part of an object."""

import pytest

from bitweight.firmware.objects import Arithmetic, Array, ObjectType, Path, Record
from bitweight.firmware.parsing import Parser
from bitweight.firmware.syntax import Braces, Expr, Name, Number
from bitweight.trace.initialisers import Reader, element_count, parts_of
from tracing_cases import INT32

INT = Arithmetic(type=INT32.int_)
PAIR = Record(kind="struct", tag="pair", scope="")
HOLLOW = Record(kind="struct", tag="hollow", scope="")
EITHER = Record(kind="union", tag="either", scope="")
UNKNOWN = Record(kind="struct", tag="unknown", scope="")
MEMBERS: dict[str, tuple[tuple[str, ObjectType], ...]] = {
    "pair": (("x", INT), ("y", INT)),
    "hollow": (("a", INT), ("", PAIR), ("d", INT)),
    "either": (("w", INT), ("b", Array(of=INT, length=2))),
}


def subscript(node: Expr) -> int | None:
    """A subscript that is a plain number."""
    return int(node.text) if isinstance(node, Number) else None


READER = Reader(
    members=lambda record: MEMBERS.get(record.tag, ()),
    subscript=subscript,
    is_whole=lambda node: isinstance(node, Name) and node.text.startswith("pair"),
)


def braces(text: str) -> Braces:
    """A braced list."""
    (found,) = Parser(f"int v = {text};", is_type=lambda name: name == "int").unit().variables
    assert isinstance(found.value, Braces)
    return found.value


def array(of: ObjectType, length: int | None) -> Array:
    """An array type."""
    return Array(of=of, length=length)


@pytest.mark.parametrize(
    ("type_", "text", "parts"),
    [
        (array(INT, 3), "{1, 2}", {(0,): "1", (1,): "2"}),
        (array(INT, None), "{[2] = 1, 2, [0] = 3}", {(2,): "1", (3,): "2", (0,): "3"}),
        (array(INT, 3), "{[1] = 1, [1] = 2}", {(1,): "2"}),
        (PAIR, "{.y = 1, .x = 2}", {("y",): "1", ("x",): "2"}),
        (array(PAIR, 2), "{1, 2, 3}", {(0, "x"): "1", (0, "y"): "2", (1, "x"): "3"}),
        (array(PAIR, 2), "{{1}, {.y = 2}}", {(0, "x"): "1", (1, "y"): "2"}),
        (array(PAIR, 2), "{[1].y = 1, 2}", None),
        (array(PAIR, 2), "{[0].y = 1, 2}", {(0, "y"): "1", (1, "x"): "2"}),
        (array(PAIR, 2), "{pair1, 2, 3}", {(0,): "pair1", (1, "x"): "2", (1, "y"): "3"}),
        (array(array(INT, 2), 2), "{1, 2, 3, 4}",
         {(0, 0): "1", (0, 1): "2", (1, 0): "3", (1, 1): "4"}),
        (array(array(INT, 2), 2), "{{1}, 2, 3}", {(0, 0): "1", (1, 0): "2", (1, 1): "3"}),
        (HOLLOW, "{1, 2, 3, 4}", {("a",): "1", ("x",): "2", ("y",): "3", ("d",): "4"}),
        (HOLLOW, "{.y = 1, 2}", {("y",): "1", ("d",): "2"}),
        (HOLLOW, "{1, {2}, 3}", {("a",): "1", ("x",): "2", ("d",): "3"}),
        (EITHER, "{1}", {("w",): "1"}),
        (EITHER, "{.b = {1, 2}}", {("b", 0): "1", ("b", 1): "2"}),
        (EITHER, "{1, 2}", None),
        (INT, "{1}", {(): "1"}),
        (INT, "{{1}}", {(): "1"}),
        (array(INT, 2), "{}", {}),
        (array(INT, 2), "{1, 2, 3}", None),
        (array(INT, 2), "{[x] = 1}", None),
        (array(INT, 2), "{[0 ... 1] = 1}", None),
        (PAIR, "{.absent = 1}", None),
        (UNKNOWN, "{1}", None),
    ],
)  # fmt: skip
def test_parts_of_a_list(type_: ObjectType, text: str, parts: dict[Path, str] | None) -> None:
    """Designators, order and missing braces as C11 6.7.9 has them; None for anything else."""
    found = parts_of(braces(text), type_, READER)
    if found is None:
        assert parts is None
    else:
        shown = {
            path: value.text for path, value in found.items() if isinstance(value, Name | Number)
        }
        assert shown == parts


def test_lists_nested_without_end_are_not_understood() -> None:
    """Braces deeper than any real type are refused, not followed."""
    assert parts_of(braces("{" * 100 + "1" + "}" * 100), array(INT, 1), READER) is None


@pytest.mark.parametrize(
    ("text", "count"),
    [
        ("{1, 2, 3}", 3),
        ("{[4] = 1}", 5),
        ("{[4] = 1, 2, [0] = 3}", 6),
        ("{}", 0),
        ("{[x] = 1}", None),
    ],
)
def test_the_length_of_an_open_array(text: str, count: int | None) -> None:
    """An array without a written size ends with its last initialiser (6.7.9p22)."""
    assert element_count(braces(text), subscript) == count
    assert element_count(None, subscript) is None
