"""The grammar's tree, where the grammar alone would read C wrongly."""

import pytest

from bitweight.firmware.parsing import Parser, snippet
from bitweight.firmware.syntax import Call, Cast, Expr, Name, Pair


def expression(text: str) -> Expr | None:
    """The expression of a text in which only `word` is a type."""
    return Parser(snippet(text), is_type=lambda name: name == "word").expression()


@pytest.mark.parametrize("operator", ["*", "&", "+", "-"])
@pytest.mark.parametrize("call", ["read()", "read(a * b)", "table()[2]"])
def test_a_call_in_parentheses_is_no_cast(call: str, operator: str) -> None:
    """`(f()) * x` is a product: no cast leads to a function or an array (C11 6.5.4p2)."""
    found = expression(f"({call}) {operator} 4")
    assert isinstance(found, Pair)
    assert found.operator == operator


def test_the_product_of_a_cast_call_binds_like_any_other() -> None:
    """`(word)(f()) * a / b` casts the call, multiplies, then divides."""
    found = expression("(word)(read()) * a / b")
    assert isinstance(found, Pair)
    assert found.operator == "/"
    assert isinstance(found.left, Pair)
    assert found.left.operator == "*"
    assert isinstance(found.left.left, Cast)
    assert isinstance(found.left.left.operand, Call)


def test_what_follows_a_minus_binds_before_it() -> None:
    """`(f()) - a * b` takes the product away from the call."""
    found = expression("(read()) - a * b")
    assert isinstance(found, Pair)
    assert found.operator == "-"
    assert isinstance(found.right, Pair)


@pytest.mark.parametrize("text", ["(word (*)(void)) * a", "(word *) & a", "(int) * a"])
def test_a_cast_to_a_type_stays_a_cast(text: str) -> None:
    """Pointers, to functions too, are types that a cast may lead to."""
    assert isinstance(expression(text), Cast)


def test_offsets_are_those_of_the_text() -> None:
    """A call whose parentheses are set aside stands where it is written."""
    text = snippet("(read()) * 4")
    found = Parser(text, is_type=lambda _: False).expression()
    assert isinstance(found, Pair)
    assert isinstance(found.left, Call)
    assert text[found.left.start : found.left.end] == "read()"
    assert isinstance(found.left.function, Name)
