"""Divisions whose whole part is meant: those that only decide, and those put together again.

Enters: nodes, operands before operators. Leaves: the identities of divisions, shifts to the right
and conversions whose fraction is dropped on purpose. Elsewhere a dropped fraction is a loss.
"""

from collections.abc import Iterator, Sequence
from itertools import islice

from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Literal,
    Unary,
    Unknown,
    children,
)

_DECIDING = frozenset(("<", ">", "<=", ">=", "==", "!=", "&&", "||"))
_PUTTING_TOGETHER = frozenset(("+", "|", "-"))
_MOST_NODES = 3_000
"""Longer expressions come from loops that are unrolled, where nothing is split by hand."""
_MOST_PAIRS = 32
_MOST_COMPARED = 200


def wholes(order: Sequence[Expression]) -> frozenset[int]:
    """The divisions whose whole part is meant."""
    if not any(isinstance(node, Choose) or _is_remainder(node) for node in order):
        return frozenset()
    return deciding(order) | _split(order)


def deciding(order: Sequence[Expression]) -> frozenset[int]:
    """The nodes that only say which way a choice goes, or what a comparison gives."""
    valued = {id(order[-1])}
    for node in reversed(order):
        if id(node) in valued:
            valued.update(id(child) for child in _valued(node))
    return frozenset(id(node) for node in order) - valued


def _valued(node: Expression) -> tuple[Expression, ...]:
    """The operands of which a value is made."""
    match node:
        case Choose():
            return (node.then, node.other)
        case Binary() if node.operator in _DECIDING:
            return ()
        case Unary(operator="!"):
            return ()
        case _:
            return children(node)


def _split(order: Sequence[Expression]) -> frozenset[int]:
    """Quotients that a sum puts together with the remainder of the same division."""
    if len(order) > _MOST_NODES:
        return frozenset()
    return frozenset(
        id(quotient)
        for quotient, rest in islice(_pairs(order), _MOST_PAIRS)
        if _meet(order, quotient, rest)
    )


def _pairs(order: Sequence[Expression]) -> Iterator[tuple[Expression, Expression]]:
    """Each quotient with each remainder of the same division."""
    rests = [(node, rest) for node in order if (rest := _division_of_rest(node)) is not None]
    for quotient in order:
        divided = _division(quotient)
        if divided is not None:
            yield from ((quotient, node) for node, rest in rests if _same(divided, rest))


_Division = tuple[Expression, int]
"""What is divided, and by what constant."""


def _same(left: _Division, right: _Division) -> bool:
    return left[1] == right[1] and _alike(left[0], right[0])


def _division(node: Expression) -> _Division | None:
    """A whole division by a constant."""
    if not isinstance(node, Binary) or not node.type.is_integer:
        return None
    count = _constant(node.right)
    if node.operator == "/" and count is not None and count > 1:
        return node.left, count
    if node.operator == ">>" and count is not None and 0 < count < node.type.bits:
        return node.left, 1 << count
    return None


def _division_of_rest(node: Expression) -> _Division | None:
    """The division whose remainder a node is."""
    if not isinstance(node, Binary) or not node.type.is_integer:
        return None
    count = _constant(node.right)
    if count is None or count < 1:
        return None
    if node.operator == "%":
        return node.left, count
    return (node.left, count + 1) if node.operator == "&" and not count & (count + 1) else None


def _is_remainder(node: Expression) -> bool:
    return _division_of_rest(node) is not None


def _constant(node: Expression) -> int | None:
    inner = _bare(node)
    return int(inner.value) if isinstance(inner, Literal) and inner.type.is_integer else None


def _bare(node: Expression) -> Expression:
    while isinstance(node, Convert | Default):
        node = node.operand
    return node


def _alike(left: Expression, right: Expression) -> bool:
    """Whether two nodes hold the same value, as far as their form tells."""
    pending = [(left, right)]
    for _ in range(_MOST_COMPARED):
        if not pending:
            return True
        one, other = (_bare(node) for node in pending.pop())
        if one is other:
            continue
        if not _same_head(one, other):
            return False
        pending += zip(children(one), children(other), strict=True)
    return False


def _same_head(one: Expression, other: Expression) -> bool:
    match one, other:
        case Literal(), Literal():
            return one.value == other.value
        case Code(), Code():
            return one.channels == other.channels and one.place == other.place
        case Unary(), Unary():
            return one.operator == other.operator
        case Binary(), Binary():
            return one.operator == other.operator
        case Choose(), Choose():
            return True
        case _:
            return isinstance(one, Unknown) and one is other


def _meet(order: Sequence[Expression], quotient: Expression, rest: Expression) -> bool:
    """Whether a sum has the quotient on one side and the remainder on the other."""
    above = {id(quotient): 1, id(rest): 2}
    for node in order:
        sides = [above.get(id(child), 0) for child in children(node)]
        both = 0
        for side in sides:
            both |= side
        if isinstance(node, Binary) and node.operator in _PUTTING_TOGETHER and set(sides) == {1, 2}:
            return True
        if both and id(node) not in above:
            above[id(node)] = both
    return False
