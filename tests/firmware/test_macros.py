"""Definitions and their timeline."""

import pytest

from bitweight.firmware.files import SourceFile
from bitweight.firmware.macros import Macro, MacroTable, builtin_macro, macro_defined
from bitweight.firmware.outlines import Outline
from bitweight.places import Place


def defined(text: str) -> Macro | None:
    return macro_defined(Outline(SourceFile("a.h", text)), 0, len(text))


@pytest.mark.parametrize(
    ("text", "name", "parameters", "variadic", "body"),
    [
        ("#define A", "A", None, False, []),
        ("# define A (x) 1", "A", None, False, ["(", "x", ")", "1"]),
        ("#define F() 1", "F", (), False, ["1"]),
        ("#define F( a , b )a-b", "F", ("a", "b"), False, ["a", "-", "b"]),
        ("#define F(a, ...) a", "F", ("a", "__VA_ARGS__"), True, ["a"]),
        ("#define F(...)", "F", ("__VA_ARGS__",), True, []),
        ("#define F(a, rest...) rest", "F", ("a", "rest"), True, ["rest"]),
        ("#define A 1 /* x\n */ + 2", "A", None, False, ["1", "+", "2"]),
    ],
)
def test_a_definition_has_name_parameters_and_body(
    text: str, name: str, parameters: tuple[str, ...] | None, variadic: bool, body: list[str]
) -> None:
    """A parenthesis directly behind the name opens a parameter list (C11 6.10.3)."""
    macro = defined(text)
    assert macro is not None
    assert (macro.name, macro.parameters, macro.variadic) == (name, parameters, variadic)
    assert [token.text for token in macro.body] == body
    assert macro.place == Place("a.h", 1, text.index(name, 7) + 1)


@pytest.mark.parametrize(
    "text",
    [
        "#define",
        "#define 1",
        "#define F(",
        "#define F(a",
        "#define F(1) x",
        "#define F(a b)",
        "#define F(..., a)",
        "#define F(a,) a",
        "#define defined 1",
        "#undef A",
    ],
)
def test_a_malformed_definition_is_none(text: str) -> None:
    """What gcc refuses defines nothing."""
    assert defined(text) is None


def test_a_table_gives_what_is_in_force() -> None:
    """The latest change at or before an offset counts; None takes a name away."""
    first, second = defined("#define A 1"), defined("#define A 2")
    assert first is not None
    assert second is not None
    table = MacroTable([(0, {"A": first}), (5, {"A": None}), (5, {"A": second}), (9, {"A": None})])
    assert [table.at(offset).get("A") for offset in (0, 4, 5, 8, 9)] == [
        first,
        first,
        second,
        second,
        None,
    ]
    assert list(table.at(4)) == ["A"]
    assert table.final.at(0).get("A") is None
    assert "A" not in table.at(20)
    assert table.at(0).get("B") is None


def test_a_builtin_has_no_body() -> None:
    """The text of a built-in macro is not known before it is used."""
    macro = builtin_macro(Outline(SourceFile("<builtin>", "")), "__LINE__")
    assert macro.builtin
    assert not macro.body
