"""Limits in the code that cut the reading off inside the channel's range."""

from dataclasses import dataclass

import numpy as np

from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.expressions import Choose, Code, Expression, children, walk
from bitweight.judge.evaluations import Array, Evaluation, Mask
from bitweight.judge.rewrites import chosen

_MOST = 32
"""Choices tried in one conversion; each costs an evaluation."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Clamp:
    """A choice that holds the result at a constant where the other arm would be right.

    `mask` are the codes in range that it spoils, `limit` the constant arm. `without` is the result
    in counts if the choice were always taken the other way.
    """

    node: Choose
    limit: Expression
    mask: Mask
    without: Array


def clamps_in_range(computed: Evaluation, wanted: Array, allowed: Array) -> tuple[Clamp, ...]:
    """The choices that hold codes in range off beyond what is allowed, the other arm being nearer.

    `wanted` is what the board delivers and `allowed` the allowed error, both in counts of the
    result.
    """
    with np.errstate(invalid="ignore"):
        outside = computed.in_range & (np.abs(computed.held - wanted) > allowed)
    if not outside.any():
        return ()
    constant = _without_reading(computed.expression)
    choices = [node for node in walk(computed.expression) if isinstance(node, Choose)][:_MOST]
    found = [
        _clamp(computed, node, arm, outside, wanted)
        for node in choices
        for arm in (node.then, node.other)
        if id(arm) in constant
    ]
    return tuple(clamp for clamp in found if clamp is not None)


def _clamp(
    computed: Evaluation, node: Choose, limit: Expression, outside: Mask, wanted: Array
) -> Clamp | None:
    other = node.other if limit is node.then else node.then
    without = computed.of(chosen(computed.expression, node, other))
    condition = evaluate(node.condition, computed.read, computed.limits).values != 0
    taken = condition if limit is node.then else ~condition
    with np.errstate(invalid="ignore"):
        nearer = np.abs(without - wanted) < np.abs(computed.held - wanted)
    mask = outside & taken & nearer
    if not _ends_range(computed, without, mask):
        return None
    return Clamp(node=node, limit=limit, mask=mask, without=without)


def _ends_range(computed: Evaluation, without: Array, mask: Mask) -> bool:
    """Whether the choice cuts one end of the values off; one that jumps in between is no limit."""
    inside = computed.in_range & np.isfinite(without)
    cut = mask & inside
    if not cut.any():
        return False
    held, beyond = computed.held[cut], without[cut]
    if (held < beyond).all():
        return bool(beyond.max() == without[inside].max())
    return bool((held > beyond).all() and beyond.min() == without[inside].min())


def _without_reading(root: Expression) -> set[int]:
    """The nodes that are the same for every code."""
    constant: set[int] = set()
    for node in walk(root):
        if not isinstance(node, Code) and all(id(child) in constant for child in children(node)):
            constant.add(id(node))
    return constant
