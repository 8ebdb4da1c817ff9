"""What findings of several rules say alike: quantities with units, steps of the way, edits.

Facts of a case enter; short texts and the parts of a `Finding` leave.
"""

import math
from collections.abc import Iterable
from fractions import Fraction

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
    walk,
)
from bitweight.board.hardware import Channel
from bitweight.judge.findings import Related, Replacement
from bitweight.places import Place
from bitweight.quantities import engineering
from bitweight.trace.conversions import Conversion


def quantity(value: Fraction | float, channel: Channel) -> str:
    """A number in the channel's unit, for people: "4.095 mV"."""
    return engineering(value, channel.unit)


_VISIBLE = 1e-5
"""The share of an LSB below which a number is what binary64 arithmetic leaves of nothing."""


def settled(value: float, lsb: float) -> float:
    """The value, or 0 where it is no more than the rounding of the arithmetic."""
    return 0.0 if abs(value) <= _VISIBLE * abs(lsb) else value


def off(error: float, lsb: float, channel: Channel) -> str:
    """An error as what it does to the reading: "reads 1.951 V low"."""
    held = settled(error, lsb)
    if not held:
        return "reads right"
    if not math.isfinite(held):
        return "has no value"
    return f"reads {quantity(abs(held), channel)} {'high' if held > 0 else 'low'}"


def volts(value: Fraction) -> str:
    """A voltage at the pin, for people."""
    return f"{float(value):.4g} V"


def steps(conversion: Conversion) -> tuple[Related, ...]:
    """The way from the reading to the result, as related places."""
    return tuple(Related(place=step.place, message=step.message) for step in conversion.steps)


def edit(leaf: Leaf, text: str) -> Replacement:
    """A constant written anew."""
    return Replacement(place=leaf.place, end_column=leaf.end_column, text=text)


def uses(leaf: Leaf) -> tuple[Related, ...]:
    """Where a constant bites, if that is not where it is spelled."""
    return () if leaf.use == leaf.place else (Related(place=leaf.use, message="used here"),)


def place_of(node: Expression, otherwise: Place) -> Place:
    """Where a node stands in the source; a constant stands where it is spelled."""
    match node:
        case Literal():
            return otherwise if node.leaf is None else node.leaf.place
        case Unknown():
            return node.place or otherwise
        case Code() | Default() | Convert() | Unary() | Binary() | Choose():
            return node.place


def first_leaf(expression: Expression) -> Leaf | None:
    """The first constant of an expression that the source spells."""
    leaves = (node.leaf for node in walk(expression) if isinstance(node, Literal))
    return next((leaf for leaf in leaves if leaf is not None), None)


def listed(names: Iterable[str]) -> str:
    """Names in a sentence: "a, b and c"."""
    *front, last = names
    return f"{', '.join(front)} and {last}" if front else last
