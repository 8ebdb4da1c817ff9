"""The nodes between tracing and evaluation, and how they are walked."""

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Code, Default, Literal, Unknown, children, walk
from bitweight.arithmetic.types import MODELS
from properties.conversions import PLACE, Conversion

HOST = MODELS["host"]


def test_operands_come_before_operators() -> None:
    """Every node is walked once, after all its operands."""
    node = Conversion("x > 5 ? (x * 3 + 1) / 2 : -x").build(HOST)
    shared = building.binary(HOST, "-", node, node, PLACE)
    order = list(walk(shared))
    position = {id(each): index for index, each in enumerate(order)}
    assert len(position) == len(order)
    assert order[-1] is shared
    for each in order:
        assert all(position[id(child)] < position[id(each)] for child in children(each))


def test_leaves_have_no_operands() -> None:
    """Constants, readings and unknowns end the tree; a default has its initialiser below it."""
    one = Literal(value=1, type=HOST.int_)
    assert children(one) == ()
    assert children(Unknown(reason="not followed", type=HOST.int_)) == ()
    assert children(Code(channels=(), text="x", type=HOST.int_, place=PLACE)) == ()
    assert children(Default(name="k", operand=one, type=HOST.int_, place=PLACE)) == (one,)


def test_equal_nodes_are_different_places() -> None:
    """Two nodes with the same content are two nodes: identity tells uses apart."""
    assert Literal(value=1, type=HOST.int_) != Literal(value=1, type=HOST.int_)
