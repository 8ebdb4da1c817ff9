"""The suffix that mends an overflow: a constant made wide enough, tried before it is proposed."""

import re
from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.expressions import Binary, Literal, walk
from bitweight.arithmetic.types import CType, DataModel
from bitweight.judge.evaluations import Evaluation
from bitweight.judge.operations import Suffix, WrongOperation, wrong_operations
from bitweight.judge.rewrites import retyped

_INTEGER = re.compile(r"(0[xX][0-9A-Fa-f]+|0[bB][01]+|\d+)([uUlL]*)")
_MOST = 8
"""Constants tried below one operator."""


def suffix_for(computed: Evaluation, operation: WrongOperation) -> Suffix | None:
    """The first suffix of a constant after which nothing goes wrong on the way, or None."""
    literals = _near(computed, operation)
    for literal in literals:
        for text, type_ in _wider(literal, computed.model):
            if literal.leaf is not None and _mends(computed, operation, literal, type_):
                return Suffix(leaf=literal.leaf, text=text)
    return None


def _near(computed: Evaluation, operation: WrongOperation) -> list[Literal]:
    """Constants below an operator; of a conversion any, since its cause is the other operand."""
    inside = operation.node if isinstance(operation.node, Binary) else computed.expression
    return [node for node in walk(inside) if isinstance(node, Literal)][:_MOST]


def _wider(literal: Literal, model: DataModel) -> Iterator[tuple[str, CType]]:
    """The spellings of an integer constant in wider types, or signed ones, the narrowest first."""
    match = _INTEGER.fullmatch(literal.leaf.text) if literal.leaf else None
    if match is None or not literal.type.is_integer:
        return
    choices = (
        ("", model.int_),
        ("UL", model.unsigned_long),
        ("L", model.long),
        ("ULL", model.unsigned_long_long),
        ("LL", model.long_long),
    )
    for suffix, type_ in choices:
        signs = type_.signed and not literal.type.signed and literal.value <= type_.high
        if type_.bits > literal.type.bits or (signs and type_.bits == literal.type.bits):
            yield match[1] + suffix, type_


def _mends(computed: Evaluation, operation: WrongOperation, literal: Literal, type_: CType) -> bool:
    """Whether no operator but the stores of the result goes wrong, and the codes become right."""
    expression = retyped(computed.expression, literal, type_, computed.model)
    curve = evaluate(expression, computed.read, computed.limits)
    other = replace(computed, expression=expression, curve=curve)
    if any(not one.at_end and one.kind is operation.kind for one in wrong_operations(other)):
        return False
    inside = operation.mask & computed.in_range
    looked_at = inside if inside.any() else operation.mask
    with np.errstate(invalid="ignore"):
        before = np.abs(computed.held - computed.meant)[looked_at]
        after = np.abs(other.held - other.meant)[looked_at]
    return bool((after < before).any() and (after <= before).all())
