"""Expressions from C operators: every implicit conversion of C written out (C11 6.3.1, 6.5).

Enters: operators, operands and the data model. Leaves: typed nodes. An unknown operand makes the
result unknown for the same reason, unless the other operand alone decides. `Folder` finds the
value of expressions that hold no reading.
"""

from collections.abc import Callable
from dataclasses import dataclass, field

from bitweight.arithmetic import scalars
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
)
from bitweight.arithmetic.types import CType, DataModel
from bitweight.places import Place

COMPARISONS = frozenset(scalars.COMPARISONS)
LOGICAL = frozenset(("&&", "||"))
SHIFTS = frozenset(("<<", ">>"))
INTEGER_ONLY = frozenset(("%", "&", "|", "^", "~")) | SHIFTS
ARITHMETIC = frozenset(("+", "-", "*", "/"))


def convert(operand: Expression, type_: CType, purpose: Purpose, place: Place) -> Expression:
    """`operand` as `type_`; the operand itself where it has that type already."""
    if operand.type is type_ or operand.type == type_:
        return operand
    if isinstance(operand, Unknown):
        return Unknown(reason=operand.reason, type=type_, place=operand.place)
    return Convert(operand=operand, type=type_, purpose=purpose, place=place)


def promote(model: DataModel, operand: Expression, place: Place) -> Expression:
    """`operand` after the integer promotions."""
    return convert(operand, model.promote(operand.type), Purpose.PROMOTION, place)


def unary(model: DataModel, operator: str, operand: Expression, place: Place) -> Expression:
    """`-`, `+`, `~` or `!` applied to an operand of any arithmetic type."""
    if operator == "!":
        type_ = model.int_
    elif operator in INTEGER_ONLY and not operand.type.is_integer:
        return _not_c(operator, operand.type, place)
    else:
        operand = promote(model, operand, place)
        type_ = operand.type
    if isinstance(operand, Unknown):
        return Unknown(reason=operand.reason, type=type_, place=operand.place)
    return Unary(operator=operator, operand=operand, type=type_, place=place)


def binary(
    model: DataModel, operator: str, left: Expression, right: Expression, place: Place
) -> Expression:
    """A binary operator of C on operands of any arithmetic type."""
    if operator in LOGICAL:
        return _logical(model, operator, left, right, place)
    if operator in SHIFTS:
        left, right = promote(model, left, place), promote(model, right, place)
        type_ = left.type
    else:
        common = model.usual(left.type, right.type)
        left = convert(left, common, Purpose.BALANCE, place)
        right = convert(right, common, Purpose.BALANCE, place)
        type_ = model.int_ if operator in COMPARISONS else common
    for operand in (left, right):
        if operator in INTEGER_ONLY and not operand.type.is_integer:
            return _not_c(operator, operand.type, place)
        if isinstance(operand, Unknown):
            return Unknown(reason=operand.reason, type=type_, place=operand.place)
    return Binary(operator=operator, left=left, right=right, type=type_, place=place)


def choose(
    model: DataModel, condition: Expression, then: Expression, other: Expression, place: Place
) -> Expression:
    """`condition ? then : other`; both arms take their common type, promoted (C11 6.5.15p5)."""
    type_ = model.usual(then.type, other.type)
    then = convert(then, type_, Purpose.BALANCE, place)
    return merge(condition, then, convert(other, type_, Purpose.BALANCE, place), place)


def merge(condition: Expression, then: Expression, other: Expression, place: Place) -> Expression:
    """What an object of one type holds after `if (condition)`: `then`, or else `other`.

    An arm may stay unknown: it matters only for the codes that take it.
    """
    decided = _truth(condition)
    if decided is not None:
        return then if decided else other
    if then is other:
        return then
    if isinstance(condition, Unknown):
        return Unknown(reason=condition.reason, type=then.type, place=condition.place)
    if isinstance(then, Unknown) and isinstance(other, Unknown):
        return then
    return Choose(condition=condition, then=then, other=other, type=then.type, place=place)


def _logical(
    model: DataModel, operator: str, left: Expression, right: Expression, place: Place
) -> Expression:
    deciding = operator == "||"
    unknown = isinstance(left, Unknown)
    if deciding in (_truth(left), _truth(right) if unknown else None):
        return Literal(value=int(deciding), type=model.int_)
    for operand in (left, right):
        if isinstance(operand, Unknown):
            return Unknown(reason=operand.reason, type=model.int_, place=operand.place)
    return Binary(operator=operator, left=left, right=right, type=model.int_, place=place)


def _truth(expression: Expression) -> bool | None:
    """Whether a bare constant is true; None where that takes a computation."""
    return bool(expression.value) if isinstance(expression, Literal) else None


def _not_c(operator: str, type_: CType, place: Place) -> Unknown:
    return Unknown(reason=f"{operator} is applied to a {type_.name}", type=type_, place=place)


_Value = int | float | None


@dataclass(slots=True)
class Folder:
    """Values of constant expressions, each computed once.

    The owner keeps the folder as long as its expressions: it remembers them by identity and holds
    on to them, so asking again after each step of a long loop costs only the new nodes.
    """

    model: DataModel
    _memo: dict[int, tuple[Expression, _Value]] = field(default_factory=dict)

    def constant(self, expression: Expression) -> int | float | None:
        """The C value of an expression without readings.

        None where a reading or an unknown decides, or where C gives no value (division by zero).
        """
        pending = [expression]
        while pending:
            node = pending[-1]
            if id(node) in self._memo:
                pending.pop()
                continue
            missing = self._needed(node)
            if missing is None:
                self._memo[id(node)] = (node, self._fold(node))
                pending.pop()
            else:
                pending.append(missing)
        return self._memo[id(expression)][1]

    def _needed(self, node: Expression) -> Expression | None:
        """The next operand that must be known before `node` can be."""
        match node:
            case Literal() | Code() | Unknown():
                return None
            case Default() | Convert() | Unary():
                return self._absent(node.operand)
            case Binary():
                return self._absent(node.left) or self._absent(node.right)
            case Choose():
                absent = self._absent(node.condition)
                if absent is not None or self._value(node.condition) is None:
                    return absent
                return self._absent(node.then if self._value(node.condition) else node.other)

    def _absent(self, node: Expression) -> Expression | None:
        return None if id(node) in self._memo else node

    def _value(self, node: Expression) -> _Value:
        return self._memo[id(node)][1]

    def _fold(self, node: Expression) -> _Value:
        match node:
            case Literal():
                return node.value
            case Code() | Unknown():
                return None
            case Default():
                return self._value(node.operand)
            case Convert():
                return _known(
                    lambda value: scalars.convert(value, node.operand.type, node.type),
                    self._value(node.operand),
                )
            case Unary():
                return _known(
                    lambda value: scalars.unary(node.operator, value, node.type),
                    self._value(node.operand),
                )
            case Binary():
                return self._fold_binary(node)
            case Choose():
                condition = self._value(node.condition)
                if condition is None:
                    return None
                return self._value(node.then if condition else node.other)

    def _fold_binary(self, node: Binary) -> _Value:
        left, right = self._value(node.left), self._value(node.right)
        if node.operator in LOGICAL:
            deciding = node.operator == "||"
            if deciding in [bool(value) for value in (left, right) if value is not None]:
                return int(deciding)
        if left is None or right is None:
            return None
        return scalars.binary(node.operator, left, right, node.left.type, node.type)


def _known(apply: Callable[[int | float], _Value], value: _Value) -> _Value:
    return None if value is None else apply(value)
