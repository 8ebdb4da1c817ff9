"""Expressions as trees."""

import pytest

from bitweight.firmware.parsing import Parser, snippet
from bitweight.firmware.syntax import (
    Assign,
    Braces,
    Call,
    Cast,
    Conditional,
    Expr,
    Increment,
    Index,
    Marked,
    Member,
    Name,
    Number,
    Opaque,
    Operation,
    Pair,
    SizeOf,
    StatementExpr,
    Text,
)


def expression(text: str) -> Expr | None:
    """The expression of a text in which only `word` is a type."""
    return Parser(snippet(text), is_type=lambda name: name == "word").expression()


def drawn(tree: Expr | None) -> str:
    """A tree as text with every operation in parentheses."""
    match tree:
        case None:
            return ""
        case Name() | Number() | Text():
            return tree.text
        case Call():
            return f"{drawn(tree.function)}({', '.join(map(drawn, tree.arguments))})"
        case Index():
            return f"{drawn(tree.base)}[{drawn(tree.index)}]"
        case Member():
            return f"{drawn(tree.base)}.{tree.name}"
        case Operation():
            return f"({tree.operator}{drawn(tree.operand)})"
        case Increment() if tree.prefix:
            return f"({tree.operator}{drawn(tree.target)})"
        case Increment():
            return f"({drawn(tree.target)}{tree.operator})"
        case Pair():
            return f"({drawn(tree.left)} {tree.operator} {drawn(tree.right)})"
        case Assign():
            return f"({drawn(tree.target)} {tree.operator} {drawn(tree.value)})"
        case Conditional():
            parts = (tree.condition, tree.then, tree.other)
            return "({} ? {} : {})".format(*map(drawn, parts))
        case Cast():
            return f"(<{' '.join(tree.type.specifiers.words)}>{drawn(tree.operand)})"
        case SizeOf():
            inner = drawn(tree.operand) if tree.type is None else "type"
            return f"sizeof {inner}"
        case Braces():
            return "{" + ", ".join(drawn(one.value) for one in tree.entries) + "}"
        case StatementExpr():
            return f"({{{len(tree.body.items)}}})"
        case Marked():
            return f"{tree.name}:{drawn(tree.operand)}"
        case Opaque():
            return f"<{tree.kind}>"


@pytest.mark.parametrize(
    ("text", "tree"),
    [
        ("a + b * c", "(a + (b * c))"),
        ("(a + b) * c", "((a + b) * c)"),
        ("a - b - c", "((a - b) - c)"),
        ("-a << 2", "((-a) << 2)"),
        ("-5", "(-5)"),
        ("a ? b : c ? d : e", "(a ? b : (c ? d : e))"),
        ("a ?: b", "(a ?  : b)"),
        ("a = b += c", "(a = (b += c))"),
        ("a, b, c", "(a , (b , c))"),
        ("p->m.n[2]", "(*p).m.n[2]"),
        ("*p++", "(*(p++))"),
        ("--a.b", "(--a.b)"),
        ("f(a, g())(b)", "f(a, g())(b)"),
        ("&a[1]", "(&a[1])"),
        ("sizeof a / sizeof(word)", "(sizeof a / sizeof type)"),
        ("'A' + 0x1Fu", "('A' + 0x1Fu)"),
        ("true && NULL", "(true && NULL)"),
        ('"text"', '"text"'),
        ("({ a; b; })", "({2})"),
        ("(struct s){1, .b = 2}", "{1, 2}"),
        ("offsetof(struct s, b)", "<offsetof expression>"),
    ],
)
def test_precedence_and_forms(text: str, tree: str) -> None:
    """Parentheses are gone, what they say stands in the tree."""
    assert drawn(expression(text)) == tree


@pytest.mark.parametrize(
    ("text", "tree"),
    [
        ("(word)(a + b)", "(<word>(a + b))"),
        ("(word)(a, b)", "(<word>(a , b))"),
        ("(word)-a", "(<word>(-a))"),
        ("(word)-a * b", "((<word>(-a)) * b)"),
        ("(word)-a - b - c", "(((<word>(-a)) - b) - c)"),
        ("(word)*p + 1", "((<word>(*p)) + 1)"),
        ("(word)&a", "(<word>(&a))"),
        ("(word)~a", "(<word>(~a))"),
        ("(plain) - a * b", "(plain - (a * b))"),
        ("(plain) + a * b < c", "((plain + (a * b)) < c)"),
        ("x * (plain) - a * b", "((x * plain) - (a * b))"),
        ("(plain) & a + b", "(plain & (a + b))"),
        ("(plain) ~a", "(<plain>(~a))"),
        ("(plain)(a)", "plain(a)"),
    ],
)
def test_a_type_in_parentheses_is_a_cast(text: str, tree: str) -> None:
    """Where a name is a type, `(name)` binds like a cast; else it is an operand (C11 6.5.4)."""
    assert drawn(expression(text)) == tree


@pytest.mark.parametrize("text", ["a b", "f(a b)", "(a b)", "a +", "a ? b c : d", ""])
def test_what_is_no_expression_is_none(text: str) -> None:
    """A text from outside that is not one expression gives none."""
    assert expression(text) is None


def test_every_node_knows_its_text() -> None:
    """Start and end are offsets in the text, the operator's own offset included."""
    text = snippet("a + bb * c")
    tree = Parser(text, is_type=lambda name: False).expression()
    assert isinstance(tree, Pair)
    assert text[tree.start : tree.end] == "a + bb * c"
    assert text[tree.at] == "+"
    assert text[tree.right.start : tree.right.end] == "bb * c"


def test_a_marked_stretch_is_named() -> None:
    """An expression that is the whole expansion of a wanted macro bears its name."""
    text = snippet("x = a + b;")
    start = text.index("a + b")
    tree = Parser(text, is_type=lambda name: False, marks={(start, start + 5): "MV"}).expression()
    assert drawn(tree) == "(x = MV:(a + b))"


def test_deep_nesting_is_opaque() -> None:
    """What nests deeper than the limit is opaque there, and nothing is raised."""
    text = snippet("(" * 300 + "a" + ")" * 300)
    tree = Parser(text, is_type=lambda name: False, depth=100).expression()
    assert drawn(tree) == "<an expression nested too deeply>"
