"""The outside of a unit, bodies on demand, snippets."""

import pytest

from bitweight.firmware.parsing import Parser, UnitSyntax, snippet
from bitweight.firmware.syntax import Evaluate, Name


def unit(text: str) -> UnitSyntax:
    """The outside of a text."""
    return Parser(text, is_type=lambda name: name in ("int", "word")).unit()


def test_the_outside_in_order() -> None:
    """Functions, prototypes, objects and typedefs of a text, each once."""
    found = unit(
        "typedef int level;\nint f(int a);\nint b = 2, *c;\nint f(int a) { return a; }\n"
        'struct s { int m; };\nextern "C" { int g(void) { return 0; } }\n'
    )
    assert [one.name for one in found.functions] == ["f", "g"]
    assert [one.name for one in found.prototypes] == ["f"]
    assert [one.name for one in found.variables] == ["b", "c"]
    assert [one.name for one in found.typedefs] == ["level"]


@pytest.mark.parametrize(
    ("text", "name", "parameters"),
    [
        ("int f(int a, int b) { }", "f", ["a", "b"]),
        ("int f(a, b) int b; word a; { }", "f", ["a", "b"]),
        ("f(a) { }", "f", ["a"]),
        ("f(a, b) { }", "f", ["a", "b"]),
        ("f() { }", "f", []),
        ("int *f(void) { }", "f", []),
        ("int (*f(int a))(int) { }", "f", ["a"]),
    ],
)
def test_functions_of_every_style(text: str, name: str, parameters: list[str]) -> None:
    """Old-style definitions, with or without types, are functions too (C11 6.9.1)."""
    (found,) = unit(text).functions
    assert found.name == name
    assert [one.name for one in found.parameters] == parameters
    assert text[found.start : found.start + len(name)] == name
    assert text[found.body_start] == "{"
    assert text[found.end - 1] == "}"


def test_old_style_parameters_have_their_types() -> None:
    """The declarations between head and body belong to the names; without one it is int."""
    (found,) = unit("int f(a, b) word b; { }").functions
    assert [one.type.specifiers.words for one in found.parameters] == [("int",), ("word",)]


def test_a_broken_stretch_hides_nothing_around_it() -> None:
    """A macro that no header defines between two functions leaves both."""
    found = unit("int f(void) { return 1; }\nEXPORT(f)\nint g(void) { return 2; }\n")
    assert [one.name for one in found.functions] == ["f", "g"]


def test_bodies_are_converted_on_demand() -> None:
    """The body of each function is found by its place."""
    parser = Parser("void f(void) { a; }\nvoid g(void) { b; c; }", is_type=lambda name: False)
    bodies = [parser.body(one) for one in parser.unit().functions]
    assert [len(one.items) for one in bodies] == [1, 2]
    first = bodies[0].items[0]
    assert isinstance(first, Evaluate)
    assert isinstance(first.expression, Name)
    assert first.expression.text == "a"


def test_a_type_that_the_unit_declares_is_known() -> None:
    """A typedef of the unit makes `(name)(x)` a cast, wherever it stands."""
    text = "typedef int level, *where; typedef int (*call)(int), row[4]; level f(void) { }"
    parser = Parser(text, is_type=lambda name: False)
    assert all(map(parser.is_type, ["level", "where", "call", "row"]))
    assert not parser.is_type("f")


def test_what_is_not_ascii_keeps_every_offset() -> None:
    """Characters beyond ASCII count as one, as everywhere in the unit's text."""
    text = "/* µV → °C */ int a;"
    (found,) = unit(text).variables
    assert text[found.start : found.end] == "a"


def test_a_snippet_is_one_expression() -> None:
    """The text made for an expression gives it back."""
    tree = Parser(snippet("level"), is_type=lambda name: False).expression()
    assert isinstance(tree, Name)
    assert Parser("int a;", is_type=lambda name: False).expression() is None
