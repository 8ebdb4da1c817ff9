"""Resolution thrown away before it is needed, and the operator that throws it away.

The result as the target holds it is compared with its real value truncated once at the end. What is
lost beyond that by more than one LSB plus one step is early division.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from bitweight.arithmetic.expressions import Binary, Convert, Expression, walk
from bitweight.arithmetic.wholes import deciding
from bitweight.judge.evaluations import Array, Evaluation, Mask
from bitweight.judge.rewrites import realised

_ROUNDING = 1 + 1e-9
_MOST = 64
"""Dividing operators tried in one conversion; each costs an evaluation."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Loss:
    """What truncation on the way costs: `counts` of the result, signed, at most (at `index`).

    `lost` is the loss at each code, 0 where it is not looked at; `node` is the operator to blame.
    `at_end` says that nothing is lost on the way: the counts of the result itself are too coarse.
    """

    node: Expression
    index: int
    counts: float
    lost: Array
    at_end: bool = False


def truncation_loss(computed: Evaluation, ignored: Mask, tolerance: float) -> Loss | None:
    """The loss in range beyond `tolerance` counts, or None.

    `ignored` are codes at which arithmetic goes wrong altogether.
    """
    looked_at = computed.in_range & ~ignored & np.isfinite(computed.real)
    lost = _lost(computed, computed.held, looked_at)
    index = int(np.abs(lost).argmax())
    if abs(lost[index]) <= tolerance:
        return None
    node = _culprit(computed, looked_at, tolerance)
    if node is None:
        return None
    return Loss(node=node, index=index, counts=float(lost[index]), lost=lost)


def coarse_end(computed: Evaluation, ignored: Mask, wanted: Array, allowed: Array) -> Loss | None:
    """The loss of the last truncation, where it alone takes a right value out of what is allowed.

    `wanted` is what the board delivers and `allowed` the allowed error, both in counts.
    """
    looked_at = computed.in_range & ~ignored
    with np.errstate(invalid="ignore"):
        leaves = looked_at & (np.abs(computed.held - wanted) > allowed)
        meant_well = (np.abs(computed.real - wanted) <= allowed * _ROUNDING)[looked_at].all()
    if not leaves.any() or not meant_well:
        return None
    lost = np.where(looked_at, computed.held - computed.real, 0.0)
    index = int(np.abs(lost).argmax())
    return Loss(
        node=next(iter(_dividing(computed.expression)), computed.expression),
        index=index,
        counts=float(lost[index]),
        lost=lost,
        at_end=True,
    )


def _lost(computed: Evaluation, held: Array, looked_at: Mask) -> Array:
    """What is held beyond one truncation of the real value, whichever way that goes.

    C truncates toward zero: a negative term that is added to a positive one is rounded up.
    """
    exact = computed.real
    if not computed.expression.type.is_integer:
        low = high = computed.meant
    else:
        low, high = np.floor(exact), np.ceil(exact)
    with np.errstate(invalid="ignore"):
        return np.where(looked_at & np.isfinite(held), held - np.clip(held, low, high), 0.0)


def _culprit(computed: Evaluation, looked_at: Mask, tolerance: float) -> Expression | None:
    """The operator nearest to the result that makes the loss go away when it is exact.

    Where several lose, none alone may bring it below the tolerance: then the one that brings it
    furthest down.
    """
    nearest: tuple[float, Expression] | None = None
    for node in _dividing(computed.expression):
        exact = computed.of(realised(computed.expression, [node]))
        if computed.expression.type.is_integer:
            exact = np.trunc(exact)
        left = float(np.abs(_lost(computed, exact, looked_at)).max())
        if left <= tolerance:
            return node
        if nearest is None or left < nearest[0]:
            nearest = (left, node)
    return nearest[1] if nearest else None


def _dividing(root: Expression) -> Sequence[Expression]:
    """Operators that throw digits away, the one nearest to the result first.

    What only decides which way a choice goes throws nothing away.
    """
    order = tuple(walk(root))
    decides = deciding(order)
    found = [node for node in order if id(node) not in decides and _divides(node)]
    return found[::-1][:_MOST]


def _divides(node: Expression) -> bool:
    match node:
        case Binary(operator="/" | ">>"):
            return node.type.is_integer
        case Convert():
            return node.type.is_integer and not node.operand.type.is_integer
        case _:
            return False
