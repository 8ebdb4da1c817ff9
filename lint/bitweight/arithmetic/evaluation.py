"""An expression for every code: what the target computes, and where it goes wrong on the way.

Enters: an expression and the raw words of its readings. Leaves: a `Curve` with the C value for each
code and the faults of every operator, counted only where the operator is really evaluated: in the
chosen arm of a condition, right of `&&` and `||` only where the left side leaves the matter open.
"""

from collections import Counter
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from bitweight.arithmetic import operators, values
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
    walk,
)
from bitweight.arithmetic.types import CType
from bitweight.arithmetic.values import Array, FaultKind, Faults, Mask, Result, Value
from bitweight.limits import Limits

Read = Callable[[Code], Array]
"""Gives the raw words (whole numbers) of a reading, one for each code; all of equal length."""

_DEFAULT_LIMITS = Limits()
_HELD_ELEMENTS = 1 << 28
"""Conditions and faults kept at a time, in codes times nodes: a quarter of a gigabyte."""
_SMALLEST_BLOCK = 1 << 10


@dataclass(frozen=True, slots=True, kw_only=True)
class Fault:
    """An operator that goes wrong for some codes.

    `mask` is true at those codes, `first_index` is the lowest of them (an index, not a code).
    """

    kind: FaultKind
    node: Expression
    first_index: int
    mask: Mask


@dataclass(frozen=True, slots=True, kw_only=True)
class Curve:
    """The C value of an expression for every code; one element where it has no reading.

    `values` is int64, uint64 for unsigned 64-bit types, float32 or float64 for floating types.
    """

    values: Array
    type: CType
    faults: tuple[Fault, ...]

    def faulty(self, *kinds: FaultKind) -> Mask:
        """The codes at which a fault of one of the kinds happens (without kinds: any fault)."""
        mask = np.zeros(self.values.shape, dtype=np.bool_)
        for fault in self.faults:
            if not kinds or fault.kind in kinds:
                mask |= fault.mask
        return mask


def evaluate(expression: Expression, read: Read, limits: Limits = _DEFAULT_LIMITS) -> Curve:
    """The value of `expression` for every code that `read` delivers, block by block.

    The types of the nodes carry all that is known of the target. ValueError where the readings are
    of different lengths.
    """
    order = tuple(walk(expression))
    words = {id(node): np.asarray(read(node)) for node in order if isinstance(node, Code)}
    lengths = {array.size for array in words.values()}
    if len(lengths) > 1:
        raise ValueError(f"readings of different lengths: {sorted(lengths)}")
    count = max(lengths, default=1)
    found = [
        _block(order, {key: array[part] for key, array in words.items()}, part.stop - part.start)
        for part in _parts(count, len(order), limits)
    ]
    joined = found[0][0] if len(found) == 1 else np.concatenate([block[0] for block in found])
    return Curve(values=joined, type=expression.type, faults=_joined(order, found, count))


def _parts(count: int, nodes: int, limits: Limits) -> Iterator[slice]:
    """Slices of at most `limits.block_codes` codes, fewer where there are very many nodes."""
    step = max(1, min(limits.block_codes, max(_SMALLEST_BLOCK, _HELD_ELEMENTS // nodes)))
    for start in range(0, max(count, 1), step):
        yield slice(start, min(start + step, count))


_Found = tuple[Array, dict[int, Faults]]


def _block(order: Sequence[Expression], words: dict[int, Array], count: int) -> _Found:
    """Values and faults of one block; values are dropped after their last use."""
    uses = Counter(id(child) for node in order for child in children(node))
    known: dict[int, Value] = {}
    branches: dict[int, Mask] = {}
    faults: dict[int, Faults] = {}
    for node in order:
        value, found = _apply(node, known, words)
        known[id(node)] = value
        if found:
            faults[id(node)] = found
        branch = _branch(node)
        if branch is not None:
            branches[id(node)] = values.truth(known[id(branch)])
        for child in children(node):
            uses[id(child)] -= 1
            if not uses[id(child)]:
                del known[id(child)]
    data = np.broadcast_to(known[id(order[-1])].data, (count,))
    return data, _reached(order, branches, faults, count) if faults else {}


def _branch(node: Expression) -> Expression | None:
    """The operand that decides which of the others are evaluated."""
    match node:
        case Choose():
            return node.condition
        case Binary(operator="&&" | "||"):
            return node.left
        case Literal() | Code() | Unknown() | Default() | Convert() | Unary() | Binary():
            return None


def _apply(node: Expression, known: dict[int, Value], words: dict[int, Array]) -> Result:
    match node:
        case Literal():
            return values.constant(node.value, node.type), ()
        case Code():
            return values.reading(words[id(node)], node.type)
        case Unknown():
            return values.constant(0, node.type), ((FaultKind.UNKNOWN, np.array([True])),)
        case Default():
            return known[id(node.operand)], ()
        case Convert():
            return values.convert(known[id(node.operand)], node.operand.type, node.type)
        case Unary():
            return operators.unary(node.operator, known[id(node.operand)], node.type)
        case Binary():
            left, right = known[id(node.left)], known[id(node.right)]
            return operators.binary(node.operator, left, right, node.left.type, node.type)
        case Choose():
            arms = known[id(node.then)], known[id(node.other)]
            return values.choose(known[id(node.condition)], *arms), ()


def _reached(
    order: Sequence[Expression],
    branches: dict[int, Mask],
    faults: dict[int, Faults],
    count: int,
) -> dict[int, Faults]:
    """The faults of each node at the codes for which the node is evaluated."""
    active: dict[int, Mask] = {id(order[-1]): np.array([True])}
    reached: dict[int, Faults] = {}
    for node in reversed(order):
        here = active.pop(id(node))
        remaining = tuple(
            (kind, np.broadcast_to(mask & here, (count,)))
            for kind, mask in faults.get(id(node), ())
            if (mask & here).any()
        )
        if remaining:
            reached[id(node)] = remaining
        for child, mask in _passed_on(node, here, branches):
            active[id(child)] = _either(active.get(id(child)), mask)
    return reached


def _passed_on(
    node: Expression, here: Mask, branches: dict[int, Mask]
) -> tuple[tuple[Expression, Mask], ...]:
    """Each operand with the codes for which it is evaluated."""
    match node:
        case Choose():
            taken = branches[id(node)]
            return (node.condition, here), (node.then, here & taken), (node.other, here & ~taken)
        case Binary(operator="&&"):
            return (node.left, here), (node.right, here & branches[id(node)])
        case Binary(operator="||"):
            return (node.left, here), (node.right, here & ~branches[id(node)])
        case Literal() | Code() | Unknown() | Default() | Convert() | Unary() | Binary():
            return tuple((child, here) for child in children(node))


def _either(known: Mask | None, mask: Mask) -> Mask:
    if known is None or known is mask:
        return mask
    if known.size == 1 and known[0]:
        return known
    return known | mask


def _joined(order: Sequence[Expression], blocks: Sequence[_Found], count: int) -> tuple[Fault, ...]:
    """The faults of all blocks, operands before operators."""
    masks: dict[tuple[int, FaultKind], Mask] = {}
    start = 0
    for data, faults in blocks:
        for key, found in faults.items():
            for kind, mask in found:
                whole = masks.setdefault((key, kind), np.zeros(count, dtype=np.bool_))
                whole[start : start + data.size] = mask
        start += data.size
    return tuple(
        Fault(
            kind=kind,
            node=node,
            first_index=int(masks[id(node), kind].argmax()),
            mask=masks[id(node), kind],
        )
        for node in order
        for kind in FaultKind
        if (id(node), kind) in masks
    )
