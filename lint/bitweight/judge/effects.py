"""What each wrong constant does to the reading, by the target's own arithmetic.

A question and corrected constants enter; for each correction its level and its error at three codes
leave.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.expressions import Expression, Literal, walk
from bitweight.arithmetic.reals import real_form
from bitweight.arithmetic.scalars import nearest
from bitweight.arithmetic.types import CType
from bitweight.judge.explanations import EffectPoint
from bitweight.judge.findings import Level
from bitweight.judge.knobs import Key, leaf_key
from bitweight.judge.questions import BoardLine, Question
from bitweight.judge.substitutions import replaced

Array = NDArray[np.float64]
_LEAST_SHARE = Fraction(1, 1000)
"""Rounding a constant of four digits to a whole number is never what is wrong with it."""
_MOST_CODES = 1 << 14
"""Codes looked at for an effect: a straight error is largest at an end of the range."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Correction:
    """What mends one cause: a value, a shift of the words, or a factor on the result's unit.

    `holds` is False where the constant's type cannot hold the value that it should have.
    """

    key: Key | None = None
    value: Fraction = Fraction(0)
    holds: bool = True
    shift: int = 0
    factor: Fraction = Fraction(1)


@dataclass(frozen=True, slots=True, kw_only=True)
class Effect:
    """A level, and what the fault alone does at bottom, middle and top of the range."""

    level: Level
    points: tuple[EffectPoint, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Bench:
    """One conversion at the codes where effects are looked at."""

    expression: Expression
    codes: NDArray[np.int64]
    words: NDArray[np.int64]
    quantity: Array
    allowed: Array
    scale: Fraction
    zero: Fraction
    types: Mapping[Key, CType]

    def error(self, corrections: Sequence[Correction]) -> Array | None:
        """e(c) with some corrections made; None where a corrected value does not fit its type."""
        literals: dict[Key, Literal] = {}
        words, scale = self.words, self.scale
        for correction in corrections:
            words, scale = words >> correction.shift, scale * correction.factor
            if correction.key is None:
                continue
            new = _literal(correction.value, self.types[correction.key])
            if new is None or not correction.holds:
                return None
            literals[correction.key] = new
        expression = replaced(self.expression, literals) if literals else self.expression
        curve = evaluate(expression, lambda _: words)
        values = np.broadcast_to(np.asarray(curve.values, dtype=np.float64), self.codes.shape)
        return values * nearest(scale, 64) + nearest(self.zero, 64) - self.quantity

    def meant(self, corrections: Sequence[Correction]) -> Array:
        """What the expression means with some corrections made, in the channel's unit."""
        words, scale = self.words, self.scale
        values: dict[Key, Fraction] = {}
        for correction in corrections:
            words, scale = words >> correction.shift, scale * correction.factor
            if correction.key is not None:
                values[correction.key] = correction.value
        real = real_form(self.expression).floats(lambda _: words, values)
        return np.broadcast_to(real, self.codes.shape) * nearest(scale, 64)

    @property
    def finest(self) -> Fraction:
        """The share of a factor that takes some reading out of the allowed error by itself."""
        size = np.abs(self.quantity)
        told = size > 0
        share = float((self.allowed[told] / size[told]).min(initial=1.0))
        return max(_LEAST_SHARE, Fraction(share) if np.isfinite(share) else Fraction(1))

    def leaves(self, error: Array) -> NDArray[np.bool_]:
        """At which codes an error is outside the allowed one."""
        return np.asarray(~(np.abs(error) <= self.allowed * (1 + 1e-9)), dtype=np.bool_)


def bench(question: Question, expression: Expression, board: BoardLine, scale: Fraction) -> Bench:
    """The bench of a question, over codes in range (all of them where none is)."""
    inside = np.flatnonzero(question.in_range)
    if not inside.size:
        inside = np.arange(question.codes.size)
    spread = np.linspace(0, inside.size - 1, min(inside.size, _MOST_CODES)).round().astype(np.int64)
    at = inside[spread]
    step = nearest(abs(scale), 64) if expression.type.is_integer else 0.0
    return Bench(
        expression=expression,
        codes=question.codes[at],
        words=question.words[at],
        quantity=np.asarray(
            question.codes[at] * nearest(board.gain, 64) + nearest(board.offset, 64)
        ),
        allowed=np.broadcast_to(question.allowed(step), question.codes.shape)[at],
        scale=scale,
        zero=question.zero,
        types={
            leaf_key(node.leaf): node.type
            for node in walk(expression)
            if isinstance(node, Literal) and node.leaf is not None
        },
    )


def _along(board: BoardLine, codes: NDArray[np.int64]) -> Array:
    return np.asarray(codes * nearest(board.gain, 64) + nearest(board.offset, 64))


def _literal(value: Fraction, type_: CType) -> Literal | None:
    if not type_.is_integer:
        return Literal(value=nearest(value, type_.bits), type=type_)
    whole = round(value)
    return Literal(value=whole, type=type_) if type_.low <= whole <= type_.high else None


def effects(at: Bench, corrections: Sequence[Correction]) -> tuple[Effect, ...]:
    """The effect of each of several causes, given that together they mend the channel.

    Each cause is judged with all others mended: an error if the reading then leaves the allowed
    error, a note if mending it alone changes no result, else a warning. Causes that leave it only
    together are all errors. Where truncation hides what a correction does, what the code means
    counts.
    """
    before, after = at.error(()), at.error(corrections)
    if before is None or after is None:
        ill = before is None or bool(at.leaves(before).any())
        level = Level.ERROR if ill else Level.WARNING
        return tuple(Effect(level=level, points=()) for _ in corrections)
    own = [_own_error(at, corrections, index, before) for index in range(len(corrections))]
    right = ~at.leaves(after)
    levels = [
        _level(at, error, after, right, changes=_changes(at, correction, before))
        for correction, error in zip(corrections, own, strict=True)
    ]
    if Level.ERROR not in levels and bool((at.leaves(before) & right).any()):
        levels = [Level.ERROR] * len(levels)
    if bool((at.leaves(before) & at.leaves(after)).any()):
        levels = [
            Level.ERROR if _is_hidden(at, corrections, index) else level
            for index, level in enumerate(levels)
        ]
    return tuple(
        Effect(level=level, points=_points(at, error - after))
        for level, error in zip(levels, own, strict=True)
    )


def mends(at: Bench, corrections: Sequence[Correction]) -> bool:
    """Whether the corrections take the error into the allowed one, or at least never enlarge it."""
    before, after = at.error(()), at.error(corrections)
    if before is None or after is None:
        return False
    if not at.leaves(after).any():
        return True
    return bool(np.abs(after).max() <= np.abs(before).max() * (1 + 1e-6))


def _own_error(at: Bench, corrections: Sequence[Correction], index: int, before: Array) -> Array:
    """The error with all other causes mended."""
    others = [*corrections[:index], *corrections[index + 1 :]]
    left = at.error(others)
    return before if left is None else left


def _is_hidden(at: Bench, corrections: Sequence[Correction], index: int) -> bool:
    """Whether a cause, with all others mended, leaves the allowed error before C truncates."""
    others = [*corrections[:index], *corrections[index + 1 :]]
    return bool(at.leaves(at.meant(others) - at.meant(corrections)).any())


def _changes(at: Bench, correction: Correction, before: Array) -> bool:
    alone = at.error((correction,))
    return alone is None or not np.array_equal(alone, before)


def _level(
    at: Bench, error: Array, after: Array, right: NDArray[np.bool_], *, changes: bool
) -> Level:
    if bool((at.leaves(error) & right).any()) or bool(at.leaves(error - after).any()):
        return Level.ERROR
    return Level.WARNING if changes else Level.NOTE


def _points(at: Bench, error: Array) -> tuple[EffectPoint, ...]:
    last = at.codes.size - 1
    return tuple(
        EffectPoint(at_count=int(at.codes[index]), error=float(error[index]))
        for index in (0, last // 2, last)
    )
