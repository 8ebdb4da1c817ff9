"""Names that a body uses, writes, passes and calls."""

import pytest

from bitweight.firmware.mentions import Mentions, addressed, mentions, nodes
from bitweight.firmware.parsing import Parser, snippet
from bitweight.firmware.syntax import Expr, Name, Number


def found(body: str, parameters: frozenset[str] = frozenset()) -> Mentions:
    """The mentions of a function with this body."""
    parser = Parser(f"void f(void) {{ {body} }}", is_type=lambda name: name == "int")
    return mentions(parser.body(parser.unit().functions[0]), parameters)


@pytest.mark.parametrize(
    ("body", "writes", "addressed_", "passes", "calls"),
    [
        ("a = b;", {"a"}, set(), set(), set()),
        ("a.m[2] = b; c++; --d;", {"a", "c", "d"}, set(), set(), set()),
        ("*p = 1; q->m = 2; r->m[1]++;", set(), set(), set(), set()),
        ("x = &a.m; f(&b, c, d.m);", {"x"}, {"a", "b"}, {"b", "c", "d"}, {"f"}),
        ("int a; a = 1; b = a;", {"b"}, set(), set(), set()),
        ("static int a; a = 1;", {"a"}, set(), set(), set()),
        ("o->read(v);", set(), set(), {"v"}, {"o"}),
        ("while (a) { if (b) c += d; }", {"c"}, set(), set(), set()),
    ],
)
def test_names_by_what_happens_to_them(
    body: str, writes: set[str], addressed_: set[str], passes: set[str], calls: set[str]
) -> None:
    """An automatic local of the function itself changes nothing that outlives it."""
    seen = found(body)
    assert (seen.writes, seen.addressed, seen.passes, seen.calls) == (
        writes,
        addressed_,
        passes,
        calls,
    )
    assert seen.changes == writes | seen.through | addressed_ | passes


def test_what_is_written_through_a_pointer_is_not_the_pointer() -> None:
    """`*p = 1` leaves `p` as it was."""
    seen = found("*p = 1; q->m = 2; r->m[1]++; *s++ = 3;")
    assert seen.through == {"p", "q", "r"}
    assert seen.writes == {"s"}


def test_parameters_are_locals() -> None:
    """What a parameter holds is the function's own; its name is still mentioned."""
    seen = found("p = a; b = p;", frozenset({"p"}))
    assert seen.writes == {"b"}
    assert seen.names == {"a", "b", "p"}


def test_every_name_and_member_is_mentioned() -> None:
    """Members count as names, initialisers and subscripts are looked through."""
    assert found("int x[2] = {a, [b] = c.d}; x[e] = (int)f;").names == set("abcdefx")


def test_loops_are_noticed() -> None:
    """A body says whether it has a loop."""
    assert found("for (;;) { }").loops
    assert not found("if (a) { }").loops


def expression(text: str) -> Expr:
    """The tree of an expression."""
    tree = Parser(snippet(text), is_type=lambda name: False).expression()
    assert tree is not None
    return tree


def test_nodes_are_found_without_recursion() -> None:
    """Every node below an expression is listed, however deep it lies."""
    deep = expression("a" + " + 1" * 150)
    assert sum(isinstance(node, Number) for node in nodes(deep)) == 150
    assert sum(isinstance(node, Name) for node in nodes(deep)) == 1


def test_an_initialiser_names_what_it_leads_to() -> None:
    """Addresses, arrays and functions in an initialiser are found by name."""
    assert addressed(expression("f(&a, b, c[2], 5)")) == {"f", "a", "b", "c"}
