"""Conversions with other constants: corrected ones, computed counts in one piece, steady readings.

An expression enters; one whose nodes are rebuilt above what changed leaves, the rest is shared.
"""

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction

from bitweight.arithmetic.building import Folder
from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Leaf,
    Literal,
    Unary,
    Unknown,
    children,
    walk,
)
from bitweight.arithmetic.literals import exact_value
from bitweight.arithmetic.scalars import nearest, wrap
from bitweight.arithmetic.types import CType, DataModel
from bitweight.arithmetic.words import words
from bitweight.judge.knobs import Key, bare, leaf_key


def grouped(
    expression: Expression, model: DataModel
) -> tuple[Expression, dict[Key, tuple[Leaf, ...]]]:
    """The expression with computed counts like `(1 << 12) - 1` as single constants.

    A quantity shifted right by a constant is divided by such a count. Returns also the constants
    inside each, by the key of the constant that stands for it.
    """
    folder = Folder(model)
    order = tuple(walk(expression))
    bits = words(order)
    rebuilt: dict[int, Expression] = {}
    inside: dict[Key, tuple[Leaf, ...]] = {}
    for node in order:
        rebuilt[id(node)] = _rebuilt(node, rebuilt)
        if isinstance(node, Binary) and id(node.left) not in bits:
            divisor = _divisor(node)
            if divisor is not None and divisor.leaf is not None:
                inside[leaf_key(divisor.leaf)] = _leaves(node.right)
                quotient = replace(node, operator="/", right=divisor)
                rebuilt[id(node)] = replace(quotient, left=rebuilt[id(node.left)])
                continue
        if isinstance(node, Binary) and _is_count(node):
            value, leaves = folder.constant(node), _leaves(node)
            if isinstance(value, int) and value > 1 and leaves:
                leaf = replace(max(leaves, key=_weight), text=str(value))
                inside[leaf_key(leaf)] = leaves
                rebuilt[id(node)] = Literal(value=value, type=node.type, leaf=leaf)
    return rebuilt[id(expression)], inside


def _divisor(node: Binary) -> Literal | None:
    """The power of two by which a shift to the right divides, where one constant says it."""
    count = bare(node.right)
    if node.operator != ">>" or not isinstance(count, Literal) or count.leaf is None:
        return None
    if not 1 < count.value < node.type.bits - node.type.signed:
        return None
    value = 1 << int(count.value)
    return Literal(value=value, type=node.type, leaf=replace(count.leaf, text=str(value)))


def _is_count(node: Binary) -> bool:
    """Whether the operator makes a full-scale count: a shift, or one more or less than a value."""
    if node.operator == "<<":
        return True
    right = bare(node.right)
    return node.operator in ("+", "-") and isinstance(right, Literal) and right.value == 1


def _leaves(node: Expression) -> tuple[Leaf, ...]:
    """The spelled constants below a node; empty where it holds anything but constants."""
    found: dict[Leaf, None] = {}
    for below in walk(node):
        if isinstance(below, Code | Unknown):
            return ()
        if isinstance(below, Literal) and below.leaf is not None:
            found[below.leaf] = None
    return tuple(found)


def _weight(leaf: Leaf) -> tuple[bool, int]:
    """The constant that speaks for a group: a named one, else the largest."""
    return leaf.name is not None, int(exact_value(leaf.text) or 0)


def _rebuilt(node: Expression, rebuilt: dict[int, Expression]) -> Expression:
    """The node over rebuilt operands; the node itself where none of them changed."""
    if all(rebuilt[id(child)] is child for child in children(node)):
        return node
    match node:
        case Literal() | Code() | Unknown():
            return node
        case Default() | Convert() | Unary():
            return replace(node, operand=rebuilt[id(node.operand)])
        case Binary():
            return replace(node, left=rebuilt[id(node.left)], right=rebuilt[id(node.right)])
        case Choose():
            return replace(
                node,
                condition=rebuilt[id(node.condition)],
                then=rebuilt[id(node.then)],
                other=rebuilt[id(node.other)],
            )


def steadied(expression: Expression, channel: str, others: Mapping[str, int]) -> Expression:
    """The expression with readings of other channels as constants, at their steady words."""
    rebuilt: dict[int, Expression] = {}
    for node in walk(expression):
        if isinstance(node, Code) and node.channels and channel not in node.channels:
            word = next((others[name] for name in node.channels if name in others), 0)
            rebuilt[id(node)] = Literal(value=_fitting(word, node.type), type=node.type)
        else:
            rebuilt[id(node)] = _rebuilt(node, rebuilt)
    return rebuilt[id(expression)]


def _fitting(word: int, type_: CType) -> int | float:
    return wrap(word, type_) if type_.is_integer else float(word)


def replaced(expression: Expression, literals: dict[Key, Literal]) -> Expression:
    """The expression with other constants in the places of some."""
    rebuilt: dict[int, Expression] = {}
    for node in walk(expression):
        if isinstance(node, Literal) and node.leaf is not None:
            rebuilt[id(node)] = literals.get(leaf_key(node.leaf), node)
        else:
            rebuilt[id(node)] = _rebuilt(node, rebuilt)
    return rebuilt[id(expression)]


def corrected(expression: Expression, values: Mapping[Key, Fraction]) -> Expression | None:
    """The expression with other values for some constants; None where a type cannot hold one."""
    found: dict[Key, Literal] = {}
    for node in walk(expression):
        if not isinstance(node, Literal) or node.leaf is None:
            continue
        key = leaf_key(node.leaf)
        if key in values:
            value = _held(values[key], node.type)
            if value is None:
                return None
            found[key] = replace(node, value=value)
    return replaced(expression, found)


def _held(value: Fraction, type_: CType) -> int | float | None:
    if not type_.is_integer:
        return nearest(value, type_.bits)
    whole = round(value)
    return whole if type_.low <= whole <= type_.high else None
