"""The same expression in other types: wider integers, real numbers, a constant with a suffix.

Enters: an expression and the nodes at which the other arithmetic begins. Leaves: an expression
whose nodes are rebuilt from there up to the result; the rest is shared. What a wrap, a truncation
or a clamp does to the result is the difference between the two.
"""

from collections.abc import Callable, Collection
from dataclasses import replace

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Literal,
    Purpose,
    Unary,
    Unknown,
    children,
    walk,
)
from bitweight.arithmetic.types import CType, DataModel, Kind
from bitweight.places import Place

WIDE = CType(name="exact integer", kind=Kind.INTEGER, bits=64, signed=True, rank=99)
"""Wide enough for every product of a code with the constants of real conversions."""
REAL = CType(name="real number", kind=Kind.FLOATING, bits=64, signed=True, rank=100)
"""Binary64: 53 bits of a quotient are far more than any converter has."""

_LOGICAL = frozenset(("&&", "||"))
_COMPARING = building.COMPARISONS | _LOGICAL
_Known = dict[int, Expression]


def widened(root: Expression, at: Collection[Expression]) -> Expression:
    """The expression computed without loss of high bits from the nodes `at` on."""
    return _rewritten(root, {id(node) for node in at}, _wide)


def realised(root: Expression, at: Collection[Expression]) -> Expression:
    """The expression computed in real numbers from the nodes `at` on: nothing is truncated.

    Bit operators and remainders have no real meaning; they take the whole part of their operands.
    """
    return _rewritten(root, {id(node) for node in at}, _real)


def chosen(root: Expression, choice: Choose, arm: Expression) -> Expression:
    """The expression with one choice always taken the same way."""
    return _replaced(root, {id(choice): arm}, _kept)


def retyped(root: Expression, literal: Literal, type_: CType, model: DataModel) -> Expression:
    """The expression with one constant of another type, as a suffix does; conversions redone."""

    def rebuilt(node: Expression, known: _Known) -> Expression:
        return _relowered(node, known, model)

    return _replaced(root, {id(literal): replace(literal, type=type_)}, rebuilt)


_Rebuild = Callable[[Expression, _Known], Expression]


def _rewritten(root: Expression, starts: Collection[int], rebuild: _Rebuild) -> Expression:
    """Every node in `starts` and every one above one of them, rebuilt."""
    known: _Known = {}
    changed: set[int] = set()
    for node in walk(root):
        if id(node) in starts or any(id(child) in changed for child in children(node)):
            changed.add(id(node))
            known[id(node)] = rebuild(node, known)
        else:
            known[id(node)] = node
    return known[id(root)]


def _replaced(root: Expression, known: _Known, rebuild: _Rebuild) -> Expression:
    """The tree with some nodes exchanged and everything above them rebuilt."""
    given = dict(known)
    changed = set(given)
    for node in walk(root):
        if id(node) in given:
            continue
        if any(id(child) in changed for child in children(node)):
            changed.add(id(node))
            given[id(node)] = rebuild(node, given)
        else:
            given[id(node)] = node
    return given[id(root)]


def _as(node: Expression, type_: CType) -> Expression:
    if node.type == type_:
        return node
    return Convert(operand=node, type=type_, purpose=Purpose.BALANCE, place=_place(node))


def _wide(node: Expression, known: _Known) -> Expression:
    return _in_type(node, known, WIDE)


def _real(node: Expression, known: _Known) -> Expression:
    return _in_type(node, known, REAL)


def _target(node: Expression, own: CType) -> CType:
    """Integers become the wide type, floating types and everything real stay real."""
    if own is REAL or node.type.kind is Kind.FLOATING:
        return REAL
    return node.type if node.type.kind is Kind.BOOL else own


def _in_type(node: Expression, known: _Known, own: CType) -> Expression:
    type_ = _target(node, own)
    match node:
        case Literal() | Code() | Unknown():
            return replace(node, type=type_)
        case Default():
            operand = known[id(node.operand)]
            return replace(node, operand=operand, type=operand.type)
        case Convert():
            return _converted(known[id(node.operand)], type_)
        case Unary(operator="!"):
            return replace(node, operand=known[id(node.operand)])
        case Unary():
            operand = _as(known[id(node.operand)], WIDE if node.operator == "~" else type_)
            return replace(node, operand=operand, type=operand.type)
        case Binary():
            return _binary(node, known, type_)
        case Choose():
            return Choose(
                condition=known[id(node.condition)],
                then=_as(known[id(node.then)], type_),
                other=_as(known[id(node.other)], type_),
                type=type_,
                place=node.place,
            )


def _converted(operand: Expression, type_: CType) -> Expression:
    """A conversion in exact arithmetic: a real stays real, whatever it was to be stored in."""
    if operand.type is REAL and type_.kind is not Kind.BOOL:
        return operand
    return _as(operand, type_)


def _binary(node: Binary, known: _Known, type_: CType) -> Expression:
    left, right = known[id(node.left)], known[id(node.right)]
    if node.operator in _LOGICAL:
        return replace(node, left=left, right=right)
    if node.operator in _COMPARING:
        common = REAL if REAL in (left.type, right.type) else WIDE
        return replace(node, left=_as(left, common), right=_as(right, common))
    if node.operator in building.SHIFTS:
        return _shift(node, left, right, type_)
    if node.operator in building.INTEGER_ONLY:
        type_ = WIDE
    elif REAL in (left.type, right.type):
        type_ = REAL
    return replace(node, left=_as(left, type_), right=_as(right, type_), type=type_)


def _shift(node: Binary, left: Expression, right: Expression, type_: CType) -> Expression:
    """A shift; in real numbers by a constant it is a product or quotient by a power of two."""
    count = right
    while isinstance(count, Convert | Default):
        count = count.operand
    if type_ is not REAL and left.type is not REAL:
        return replace(node, left=_as(left, WIDE), right=right, type=WIDE)
    if not isinstance(count, Literal) or not 0 <= count.value < 64:
        return replace(node, left=_as(left, WIDE), right=_as(right, WIDE), type=WIDE)
    factor = Literal(value=float(1 << int(count.value)), type=REAL)
    operator = "*" if node.operator == "<<" else "/"
    return Binary(
        operator=operator, left=_as(left, REAL), right=factor, type=REAL, place=node.place
    )


def _kept(node: Expression, known: _Known) -> Expression:
    """The same operator over exchanged operands of the same types."""
    match node:
        case Literal() | Code() | Unknown():
            return node
        case Default() | Convert() | Unary():
            return replace(node, operand=known[id(node.operand)])
        case Binary():
            return replace(node, left=known[id(node.left)], right=known[id(node.right)])
        case Choose():
            return replace(
                node,
                condition=known[id(node.condition)],
                then=known[id(node.then)],
                other=known[id(node.other)],
            )


def _relowered(node: Expression, known: _Known, model: DataModel) -> Expression:
    """The node as C makes it from operands whose types may have changed."""
    match node:
        case Literal() | Code() | Unknown():
            return node
        case Default():
            return replace(node, operand=known[id(node.operand)])
        case Convert(purpose=Purpose.PROMOTION | Purpose.BALANCE):
            return known[id(node.operand)]
        case Convert():
            return building.convert(known[id(node.operand)], node.type, node.purpose, node.place)
        case Unary():
            operand = _as_written(known[id(node.operand)])
            return building.unary(model, node.operator, operand, node.place)
        case Binary():
            left, right = (_as_written(known[id(one)]) for one in (node.left, node.right))
            return building.binary(model, node.operator, left, right, node.place)
        case Choose():
            condition = known[id(node.condition)]
            then, other = (_as_written(known[id(one)]) for one in (node.then, node.other))
            return building.choose(model, condition, then, other, node.place)


def _as_written(node: Expression) -> Expression:
    """An operand without the conversions that C did not spell."""
    while isinstance(node, Convert) and node.purpose in (Purpose.PROMOTION, Purpose.BALANCE):
        node = node.operand
    return node


def _place(node: Expression) -> Place:
    match node:
        case Literal():
            return node.leaf.place if node.leaf else NOWHERE
        case Unknown():
            return node.place or NOWHERE
        case Code() | Default() | Convert() | Unary() | Binary() | Choose():
            return node.place


NOWHERE = Place("")
"""Conversions made here stand at no place of the source and are never reported."""
