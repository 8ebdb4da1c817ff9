"""The operators of a conversion that go wrong for some code, each cause once.

What C calls undefined counts wherever it happens. A wrap or a lost high bit is often meant (sign
extension, byte assembly): it counts only where the result would be nearer to what the expression
means without it.
"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from bitweight.arithmetic.evaluation import Fault, evaluate
from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Convert,
    Default,
    Expression,
    Leaf,
    children,
    walk,
)
from bitweight.arithmetic.values import FaultKind
from bitweight.judge.evaluations import Codes, Evaluation, Mask
from bitweight.judge.rewrites import widened

UNDEFINED = frozenset(
    (FaultKind.OVERFLOW, FaultKind.DIVISION, FaultKind.SHIFT, FaultKind.CONVERSION)
)
REDUCED = frozenset((FaultKind.WRAP, FaultKind.TRUNCATED, FaultKind.SIGN, FaultKind.SIGNED_SHIFT))

_MOST = 32
"""Reduced operators looked at in one conversion; each costs an evaluation."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Suffix:
    """A constant that mends the arithmetic when it is written `text`."""

    leaf: Leaf
    text: str


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class WrongOperation:
    """An operator that gives a wrong value at the codes of `mask`.

    `index` is the first of them in range, else the first at all. `exact` is what the operator
    should have given there, `low` and `high` the ends of what it should give at those codes (None
    for a division by zero or an oversized shift). `operands` are the two values where it is
    furthest off. `at_end` says that the node stores the result itself, `suffix` is the constant
    that mends it, if there is one.
    """

    node: Expression
    kind: FaultKind
    mask: Mask
    index: int
    in_range: bool
    at_end: bool
    exact: int | None
    low: int | None
    high: int | None
    operands: tuple[float, float] | None = None
    suffix: Suffix | None = None


def wrong_operations(computed: Evaluation) -> tuple[WrongOperation, ...]:
    """The first operators on the way that go wrong, in evaluation order.

    One that goes wrong in range hides what it causes above it; among the others, one outside the
    range is told only where it is neither cause nor consequence of one already told.
    """
    counted = _counted(computed)
    ends = {id(node) for node in ends_of(computed.expression)}
    below = _below(computed.expression, {id(fault.node) for fault in counted})
    inside = [fault for fault in counted if (fault.mask & computed.in_range).any()]
    causes = _first(inside, below)
    rest = [fault for fault in counted if not _kin(fault, causes, below)]
    told = {id(fault.node) for fault in (*causes, *_first(rest, below))}
    return tuple(
        _operation(computed, fault, at_end=id(fault.node) in ends)
        for fault in counted
        if id(fault.node) in told
    )


def ends_of(root: Expression) -> tuple[Expression, ...]:
    """The nodes that only pass the result on: conversions at the end, and what they choose from."""
    found: dict[int, Expression] = {}
    pending = [root]
    while pending:
        node = pending.pop()
        if id(node) in found:
            continue
        match node:
            case Convert() | Default():
                found[id(node)] = node
                pending.append(node.operand)
            case Choose():
                found[id(node)] = node
                pending += [node.then, node.other]
            case _:
                pass
    return tuple(found.values())


def _counted(computed: Evaluation) -> list[Fault]:
    """The faults that make a difference, operands before operators, one a node."""
    found: dict[int, Fault] = {}
    looked_at = 0
    for fault in computed.curve.faults:
        if fault.kind in UNDEFINED and not _harmless(fault):
            found.setdefault(id(fault.node), fault)
        elif fault.kind in REDUCED and looked_at < _MOST:
            looked_at += 1
            harm = _harm(computed, fault)
            if harm.any():
                mended = Fault(
                    kind=fault.kind, node=fault.node, first_index=int(harm.argmax()), mask=harm
                )
                found.setdefault(id(fault.node), mended)
    return list(found.values())


def _harmless(fault: Fault) -> bool:
    """Division by a floating zero gives infinity on every target here (IEC 60559)."""
    return fault.kind is FaultKind.DIVISION and not fault.node.type.is_integer


def _harm(computed: Evaluation, fault: Fault) -> Mask:
    """The codes at which the result would be nearer to what is meant without the reduction.

    One count is no harm: modular arithmetic may come back exactly but for the way it rounds.
    """
    without = computed.of(widened(computed.expression, [fault.node]))
    with np.errstate(invalid="ignore"):
        off = np.abs(computed.held - computed.meant)
        better = np.abs(without - computed.meant) < off
    counts = 1.0 if computed.expression.type.is_integer else 0.0
    return np.asarray(fault.mask & better & (off > counts), dtype=np.bool_)


_Below = dict[int, frozenset[int]]


def _below(root: Expression, marked: set[int]) -> _Below:
    """For each node the marked nodes below it (itself left out)."""
    known: _Below = {}
    for node in walk(root):
        under: set[int] = set()
        for child in children(node):
            under |= known[id(child)]
            if id(child) in marked:
                under.add(id(child))
        known[id(node)] = frozenset(under)
    return known


def _first(faults: Sequence[Fault], below: _Below) -> list[Fault]:
    nodes = {id(fault.node) for fault in faults}
    return [fault for fault in faults if not below[id(fault.node)] & nodes]


def _kin(fault: Fault, told: Iterable[Fault], below: _Below) -> bool:
    own = id(fault.node)
    return any(
        own == id(other.node) or own in below[id(other.node)] or id(other.node) in below[own]
        for other in told
    )


def _operation(computed: Evaluation, fault: Fault, *, at_end: bool) -> WrongOperation:
    inside = fault.mask & computed.in_range
    index = int(inside.argmax()) if inside.any() else int(fault.mask.argmax())
    exact = _exact(computed, fault)
    wrong = WrongOperation(
        node=fault.node,
        kind=fault.kind,
        mask=fault.mask,
        index=index,
        in_range=bool(inside.any()),
        at_end=at_end,
        exact=None,
        low=None,
        high=None,
    )
    if exact is None:
        return wrong
    needed = exact[fault.mask | computed.in_range if at_end else fault.mask]
    return replace(
        wrong,
        exact=int(exact[index]),
        low=int(needed.min()),
        high=int(needed.max()),
        operands=_operands(computed, fault, int(np.where(fault.mask, np.abs(exact), -1).argmax())),
    )


def _exact(computed: Evaluation, fault: Fault) -> Codes | None:
    """What the operator gives in unbounded integers, at every code."""
    if fault.kind in (FaultKind.DIVISION, FaultKind.SHIFT):
        return None
    values = _wide_values(computed, fault.node)
    if not np.issubdtype(values.dtype, np.integer):
        values = np.clip(np.nan_to_num(np.trunc(values)), -_FAR, _FAR)
    return values.astype(np.int64)


_FAR = 2.0**62
"""Floating values beyond this are shown as this: no integer type of a target holds them anyway."""


def _operands(computed: Evaluation, fault: Fault, index: int) -> tuple[float, float] | None:
    if not isinstance(fault.node, Binary):
        return None
    left, right = (
        _wide_values(computed, node)[index].item() for node in (fault.node.left, fault.node.right)
    )
    return left, right


def _wide_values(computed: Evaluation, node: Expression) -> NDArray[np.generic]:
    curve = evaluate(widened(node, [node]), computed.read, computed.limits)
    return np.broadcast_to(curve.values, computed.codes.shape)
