"""Statements as trees."""

import pytest

from bitweight.firmware.parsing import Parser
from bitweight.firmware.syntax import (
    Block,
    Case,
    Declare,
    Evaluate,
    If,
    Jump,
    Label,
    Loop,
    Node,
    Opaque,
    Return,
    Switch,
)


def body(text: str) -> Block:
    """The statements of a function."""
    parser = Parser(f"void f(void) {{ {text} }}", is_type=lambda name: name in ("int", "word"))
    return parser.body(parser.unit().functions[0])


@pytest.mark.parametrize(
    ("text", "kinds"),
    [
        ("a = 1; int b; return a;", [Evaluate, Declare, Return]),
        ("{ a; } ;", [Block, Block]),
        ("if (a) b; else c;", [If]),
        ("for (;;) a; while (a) b; do a; while (b);", [Loop, Loop, Loop]),
        ("switch (a) { case 1: b; }", [Switch]),
        ("goto out; out: a;", [Jump, Label]),
        ("enum { A }; struct s { int m; }; union u { int m; };", [Declare, Declare, Declare]),
        ("/* nothing */", []),
        ("a = 1 SCALE;", [Evaluate]),
        ("a = 1 SCALE 2;", [Opaque]),
        ("WITH_LOCK(x) { a = 1; } b;", [Opaque, Evaluate]),
        ("WITH_LOCK(x, 2) { a = 1; } b;", [Opaque, Evaluate]),
        ("a(); UNLESS { b(); } c();", [Evaluate, Opaque, Evaluate]),
        ("if (a) UNLESS { b; }", [Opaque]),
    ],
)
def test_kinds(text: str, kinds: list[type[Node]]) -> None:
    """Each statement is of its kind; a block behind an unknown macro is not followed."""
    assert [type(one) for one in body(text).items] == kinds


def test_the_parts_of_a_loop() -> None:
    """`for` has a beginning and a step, `do` runs its body first."""
    forward, repeat = body("for (int i = 0; i < 4; i++) a; do a; while (b);").items
    assert isinstance(forward, Loop)
    assert isinstance(forward.before, Declare)
    assert forward.condition is not None
    assert forward.step is not None
    assert not forward.first
    assert isinstance(repeat, Loop)
    assert repeat.first
    (endless,) = body("for (;;) ;").items
    assert isinstance(endless, Loop)
    assert (endless.before, endless.condition, endless.step) == (None, None, None)


def test_cases_hold_their_statements() -> None:
    """A case reaches to the next label; a range has an end, `default` no value."""
    (switch,) = body("switch (a) { case 1: b; c; case 2 ... 5: break; default: d; }").items
    assert isinstance(switch, Switch)
    assert isinstance(switch.body, Block)
    cases = [one for one in switch.body.items if isinstance(one, Case)]
    assert [(one.value is None, one.last is None, len(one.items)) for one in cases] == [
        (False, True, 2),
        (False, False, 1),
        (True, True, 1),
    ]


def test_jumps_know_where_they_lead() -> None:
    """A goto carries its label, break and continue their kind alone."""
    jumps = [
        one for one in body("goto out; out: ; break; continue;").items if isinstance(one, Jump)
    ]
    assert [(one.kind, one.label) for one in jumps] == [
        ("goto", "out"),
        ("break", ""),
        ("continue", ""),
    ]


def test_a_result_beside_what_is_no_c_is_opaque() -> None:
    """`return a SCALE;` returns nothing known."""
    (found,) = body("return a SCALE;").items
    assert isinstance(found, Return)
    assert isinstance(found.value, Opaque)


def test_deep_nesting_is_opaque() -> None:
    """Statements nested beyond the limit are opaque, and nothing is raised."""
    text = "void f(void) " + "{" * 300 + "a;" + "}" * 300
    parser = Parser(text, is_type=lambda name: False, depth=60)
    found: Node = parser.body(parser.unit().functions[0])
    while isinstance(found, Block):
        (found,) = found.items
    assert isinstance(found, Opaque)
    assert found.kind == "statements nested too deeply"
