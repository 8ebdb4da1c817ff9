"""The operators of a conversion that go wrong for some code, each cause once.

What C calls undefined counts wherever it happens. A wrap or a lost high bit is often meant (sign
extension, byte assembly): it counts only where the result would be nearer to what the expression
means without it.
"""

from collections.abc import Collection, Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from functools import reduce

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
    Unary,
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


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _Wrong:
    """A fault that counts, with the other operators of one loop that stand at the same place.

    `fault` is that of the last of them, its mask that of all.
    """

    fault: Fault
    nodes: tuple[Expression, ...]

    @property
    def node(self) -> Expression:
        return self.fault.node


def wrong_operations(computed: Evaluation) -> tuple[WrongOperation, ...]:
    """The first operators on the way that go wrong, in evaluation order.

    One that goes wrong in range hides what it causes above it; among the others, one outside the
    range is told only where it is neither cause nor consequence of one already told.
    """
    counted = _counted(computed)
    ends = {id(node) for node in ends_of(computed.expression)}
    below = _below(computed.expression, {id(wrong.node) for wrong in counted})
    inside = [wrong for wrong in counted if (wrong.fault.mask & computed.in_range).any()]
    causes = _first(inside, below)
    rest = [wrong for wrong in counted if not _kin(wrong, causes, below)]
    told = {id(wrong.node) for wrong in (*causes, *_first(rest, below))}
    return tuple(
        _operation(computed, wrong, at_end=id(wrong.node) in ends)
        for wrong in counted
        if id(wrong.node) in told
    )


def lasting(
    found: Iterable[WrongOperation], mended: Iterable[WrongOperation]
) -> tuple[WrongOperation, ...]:
    """The operations that still go wrong when what else is wrong is mended.

    What has no value in any type stays, whatever mends it.
    """
    left = {_spot(one.node, one.kind) for one in mended}
    return tuple(one for one in found if one.exact is None or _spot(one.node, one.kind) in left)


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


def _counted(computed: Evaluation) -> list[_Wrong]:
    """The faults that make a difference, operands before operators, one a node."""
    found: dict[int, _Wrong] = {}
    looked_at = 0
    for wrong in _gathered(computed.curve.faults):
        if wrong.fault.kind in UNDEFINED:
            found.setdefault(id(wrong.node), wrong)
        elif looked_at < _MOST:
            looked_at += 1
            harm = _harm(computed, wrong)
            if harm.any():
                found.setdefault(id(wrong.node), _at(wrong, harm))
    return _without_harmless(computed, list(found.values()))


def _gathered(faults: Iterable[Fault]) -> Iterator[_Wrong]:
    """The faults that may count; those of one unrolled loop as one."""
    groups: dict[object, list[Fault]] = {}
    for fault in faults:
        if fault.kind in REDUCED or (fault.kind in UNDEFINED and not _harmless(fault)):
            groups.setdefault(_spot(fault.node, fault.kind), []).append(fault)
    for group in groups.values():
        mask = reduce(np.logical_or, (fault.mask for fault in group))
        nodes = tuple(fault.node for fault in group)
        yield _at(_Wrong(fault=group[-1], nodes=nodes), mask)


def _spot(node: Expression, kind: FaultKind) -> object:
    """What the operators of one unrolled loop share; a node without a place shares nothing."""
    if isinstance(node, Binary | Convert | Unary) and node.place.file:
        operator = node.type if isinstance(node, Convert) else node.operator
        return (node.place, kind, operator)
    return id(node)


def _at(wrong: _Wrong, mask: Mask) -> _Wrong:
    fault = replace(wrong.fault, first_index=int(mask.argmax()), mask=mask)
    return replace(wrong, fault=fault)


def _without_harmless(computed: Evaluation, found: Sequence[_Wrong]) -> list[_Wrong]:
    """The faults left when those are dropped whose wrap comes right once the others are mended."""
    if len(found) < 2:
        return list(found)
    marked = {id(node) for wrong in found for node in wrong.nodes}
    below = _below(computed.expression, marked)
    return [
        wrong
        for wrong in found
        if wrong.fault.kind in UNDEFINED or not _comes_right(computed, wrong, found, below)
    ]


def _comes_right(
    computed: Evaluation, wrong: _Wrong, found: Iterable[_Wrong], below: "_Below"
) -> bool:
    """Whether the result is the exact one with every later fault mended and this one left."""
    own = {id(node) for node in wrong.nodes}
    under = own.union(*(below[id(node)] for node in wrong.nodes))
    later = [node for one in found for node in one.nodes if id(node) not in under]
    if not later:
        return False
    left = computed.of(widened(computed.expression, later))
    mended = computed.of(widened(computed.expression, [*later, *wrong.nodes]))
    with np.errstate(invalid="ignore"):
        off = ~(np.abs(left - mended) <= _least_harm(computed))
    return not bool((off & wrong.fault.mask).any())


def _harmless(fault: Fault) -> bool:
    """Division by a floating zero gives infinity on every target here (IEC 60559)."""
    return fault.kind is FaultKind.DIVISION and not fault.node.type.is_integer


def _harm(computed: Evaluation, wrong: _Wrong) -> Mask:
    """The codes at which the result would be nearer to what is meant without the reduction.

    One count is no harm: modular arithmetic may come back exactly but for the way it rounds.
    """
    without = computed.of(widened(computed.expression, wrong.nodes))
    with np.errstate(invalid="ignore"):
        off = np.abs(computed.held - computed.meant)
        better = np.abs(without - computed.meant) < off
    least = _least_harm(computed)
    return np.asarray(wrong.fault.mask & better & (off > least), dtype=np.bool_)


def _least_harm(computed: Evaluation) -> float:
    return 1.0 if computed.expression.type.is_integer else 0.0


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


def _first(found: Sequence[_Wrong], below: _Below) -> list[_Wrong]:
    nodes = {id(wrong.node) for wrong in found}
    return [wrong for wrong in found if not below[id(wrong.node)] & nodes]


def _kin(wrong: _Wrong, told: Iterable[_Wrong], below: _Below) -> bool:
    own = id(wrong.node)
    return any(
        own == id(other.node) or own in below[id(other.node)] or id(other.node) in below[own]
        for other in told
    )


def _operation(computed: Evaluation, cause: _Wrong, *, at_end: bool) -> WrongOperation:
    fault = cause.fault
    inside = fault.mask & computed.in_range
    index = int(inside.argmax()) if inside.any() else int(fault.mask.argmax())
    exact = _exact(computed, cause)
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
        operands=_operands(computed, cause, int(np.where(fault.mask, np.abs(exact), -1).argmax())),
    )


def _exact(computed: Evaluation, wrong: _Wrong) -> Codes | None:
    """What the operator gives in unbounded integers, at every code."""
    if wrong.fault.kind in (FaultKind.DIVISION, FaultKind.SHIFT):
        return None
    values = _wide_values(computed, wrong.node, wrong.nodes)
    if not np.issubdtype(values.dtype, np.integer):
        values = np.clip(np.nan_to_num(np.trunc(values)), -_FAR, _FAR)
    return values.astype(np.int64)


_FAR = 2.0**62
"""Floating values beyond this are shown as this: no integer type of a target holds them anyway."""


def _operands(computed: Evaluation, wrong: _Wrong, index: int) -> tuple[float, float] | None:
    node = wrong.node
    if not isinstance(node, Binary):
        return None
    left, right = (
        _wide_values(computed, side, (side, *wrong.nodes))[index].item()
        for side in (node.left, node.right)
    )
    return left, right


def _wide_values(
    computed: Evaluation, node: Expression, nodes: Collection[Expression]
) -> NDArray[np.generic]:
    curve = evaluate(widened(node, nodes), computed.read, computed.limits)
    return np.broadcast_to(curve.values, computed.codes.shape)
