"""The same expression in other types."""

import numpy as np
import pytest

import facts
from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.expressions import Binary, Choose, Expression, Literal, walk
from bitweight.arithmetic.types import DataModel
from bitweight.judge.rewrites import chosen, realised, retyped, widened
from facts import C


def _at(expression: Expression, word: int) -> float:
    return float(evaluate(expression, lambda _: np.array([word])).values[0])


def _nodes(expression: Expression, operator: str) -> list[Expression]:
    return [
        node for node in walk(expression) if isinstance(node, Binary) and node.operator == operator
    ]


@pytest.mark.parametrize("word", [0, 14, 1023])
def test_widened_product_is_exact(word: int) -> None:
    """A product that wraps in 16 bits is exact once widened, and what follows too."""
    c = C(facts.AVR)
    scaled = c.op(c.op(c.code(), "*", "5000"), "/", "1024")
    assert _at(widened(scaled, _nodes(scaled, "*")), word) == word * 5000 // 1024


def test_widened_store_keeps_value() -> None:
    """A store that loses high bits keeps them once widened."""
    c = C()
    stored = c.store("uint8_t", c.op(c.code(), "*", "5"))
    assert _at(stored, 100) == 500 % 256
    assert _at(widened(stored, [stored]), 100) == 500


def test_widened_leaves_rest_alone() -> None:
    """Nodes that are not above the given ones stay the same objects."""
    c = C()
    left, right = c.op(c.code(), "*", "5"), c.op(c.code(), "/", "3")
    both = c.op(left, "+", right)
    assert right in list(walk(widened(both, [left])))


@pytest.mark.parametrize(("operator", "by", "exact"), [("/", "16", 100 / 16), (">>", "4", 6.25)])
def test_realised_division(operator: str, by: str, exact: float) -> None:
    """A division or shift is exact in real numbers, and a multiplication after it."""
    c = C()
    divided = c.op(c.code(), operator, by)
    scaled = c.op(divided, "*", "3")
    assert _at(realised(scaled, [divided]), 100) == exact * 3


def test_realised_left_shift() -> None:
    """A left shift of a real number multiplies."""
    c = C()
    divided = c.op(c.code(), "/", "8")
    assert _at(realised(c.op(divided, "<<", "2"), [divided]), 3) == 1.5


def test_realised_store_is_not_truncated() -> None:
    """A store in an integer changes nothing in real numbers."""
    c = C()
    divided = c.op(c.code(), "/", "8")
    assert _at(realised(c.store("uint8_t", divided), [divided]), 3) == 0.375


def test_chosen_arm() -> None:
    """A clamp that is always taken the other way is gone."""
    c = C()
    code = c.code()
    clamp = c.choose(c.op(code, ">", "100"), "100", code)
    assert isinstance(clamp, Choose)
    assert (_at(clamp, 500), _at(chosen(clamp, clamp, clamp.other), 500)) == (100, 500)


@pytest.mark.parametrize("model", [facts.AVR, facts.INT32], ids=["int16", "int32"])
def test_retyped_constant_redoes_conversions(model: DataModel) -> None:
    """A constant made unsigned long makes the product one, whatever int is."""
    c = C(model)
    literal = c.number("5000")
    scaled = c.op(c.op(c.code(), "*", literal), "/", "1024")
    assert isinstance(literal, Literal)
    mended = retyped(scaled, literal, model.unsigned_long, model)
    assert mended.type == model.unsigned_long
    assert _at(mended, 1023) == 4995
