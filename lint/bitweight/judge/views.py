"""The ways to read one question, and the smallest explanation among them.

A conversion may count by any accepted full-scale count, give a result in any decade where no unit
is stated, and take the code to stand elsewhere in its word. Each way is one `View`, searched alone.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np

from bitweight.arithmetic.expressions import Expression, Leaf
from bitweight.judge.knobs import Key, Knob, decades, knobs
from bitweight.judge.meanings import terms
from bitweight.judge.questions import BoardLine, Question
from bitweight.judge.repairs import Layout, Repair, is_doubtful, rank
from bitweight.judge.roots import Target
from bitweight.judge.searches import smallest
from bitweight.judge.sketches import RealLine, Sketch, sketch
from bitweight.judge.substitutions import grouped
from bitweight.judge.trials import Search

_MOST_WRONG = 3
_PROBES = 9
_FARTHEST_DECADE = 40
"""No unit of any quantity is further from another of its kind."""


@dataclass(frozen=True, slots=True, kw_only=True)
class View:
    """One way to read the question. `given` are the corrections that it takes for granted.

    One count of the result is `scale` channel units, 10**`decade` where the unit is inferred;
    `line` is what the code means without any correction, in counts of the result. `board` is the
    line that is wanted.
    """

    search: Search
    expression: Expression
    line: RealLine
    board: BoardLine
    scale: Fraction
    decade: int
    given: tuple[Repair, ...] = ()
    preference: int = 0


@dataclass(frozen=True, slots=True, kw_only=True)
class Answer:
    """A view with its smallest set of repairs, the given ones included."""

    view: View
    repairs: tuple[Repair, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Reading:
    """An expression with its constants, drawn over the codes in range."""

    expression: Expression
    knobs: tuple[Knob, ...]
    sketch: Sketch
    line: RealLine


def smallest_answer(ways: Sequence[View]) -> Answer | None:
    """The explanation of least cost; None where no view has one."""
    for most in range(1, _MOST_WRONG + 1):
        answers = [answer for view in ways if (answer := _answer(view, most)) is not None]
        if answers:
            return min(answers, key=_order)
    return None


def _answer(view: View, most: int) -> Answer | None:
    left = most - _cost(view.given)
    solution = smallest(view.search, left) if left >= 0 else None
    if solution is None:
        return None
    return Answer(view=view, repairs=(*view.given, *solution.repairs))


def _cost(repairs: Sequence[Repair]) -> int:
    """How many wrong constants: a doubtful one, or a prefix without a constant, counts twice.

    Named constants that contradict the board go before it.
    """
    return sum(
        2 if is_doubtful(repair) or (repair.rule == "unit-prefix" and not repair.knob) else 1
        for repair in repairs
    )


def _order(answer: Answer) -> tuple[object, ...]:
    view = answer.view
    return (_cost(answer.repairs), view.preference, rank(answer.repairs), abs(view.decade))


def views(question: Question) -> Iterator[View]:
    """Every way to read the question, the plain one first; none where the code is no line."""
    plain = _reading(question, question.conversion.expression, {}, 0)
    if plain is None:
        return
    yield from _plain_views(question, plain)
    expression, inside = grouped(question.conversion.expression, question.model)
    if inside:
        pieces = _reading(question, expression, inside, 0)
        yield from _plain_views(question, pieces) if pieces is not None else ()
    if question.shift:
        moved = _reading(question, question.conversion.expression, {}, question.shift)
        lacking = Repair(rule="justification")
        for view in _plain_views(question, moved) if moved is not None else ():
            yield replace(view, given=(lacking,))
    if question.scale is not None:
        yield from filter(None, map(_other_prefix, list(_plain_views(question, plain))))


def _reading(
    question: Question, expression: Expression, inside: Mapping[Key, tuple[Leaf, ...]], shift: int
) -> _Reading | None:
    """The expression drawn over the codes in range, the words first moved down by `shift`."""
    within = np.flatnonzero(question.in_range)
    at = within if within.size > 1 else np.arange(question.codes.size)
    spread = np.linspace(0, at.size - 1, min(at.size, _PROBES)).round().astype(np.int64)
    codes, words = question.codes[at[spread]], question.words[at[spread]] >> shift
    drawn = sketch(expression, codes.tolist(), words.tolist())
    line = None if drawn is None else drawn.line({})
    if drawn is None or line is None or not line.gain:
        return None
    found = knobs(expression, question.stated, inside)
    return _Reading(expression=expression, knobs=found, sketch=drawn, line=line)


def _plain_views(question: Question, reading: _Reading) -> Iterator[View]:
    for decade, scale in _scales(question, reading.line):
        for preference, board in enumerate(question.lines):
            search = Search(
                sketch=reading.sketch,
                knobs=reading.knobs,
                terms=terms(question.facts, board.count, [line.count for line in question.lines]),
                target=_target(question, board, scale, reading.expression),
                layout=_layout(question),
            )
            yield View(
                search=search,
                expression=reading.expression,
                line=reading.line,
                board=board,
                scale=scale,
                decade=decade,
                preference=preference,
            )


def _scales(question: Question, line: RealLine) -> Iterator[tuple[int, Fraction]]:
    """The stated unit, else the decades around the one that comes nearest."""
    if question.scale is not None:
        yield 0, question.scale
        return
    exact = decades(abs(question.lines[0].gain / line.gain))
    if abs(exact) > _FARTHEST_DECADE:
        return
    nearest = round(exact)
    other = nearest + (1 if exact > nearest else -1)
    for decade in (nearest, other):
        yield decade, Fraction(10) ** decade


def _target(
    question: Question, board: BoardLine, scale: Fraction, expression: Expression
) -> Target:
    """The wanted line in counts of the result; half an LSB and one step are idioms of rounding."""
    step = 1 if expression.type.is_integer else 0
    gain = board.gain / scale
    return Target(
        gain=gain,
        offset=(board.offset - question.zero) / scale,
        tolerance=abs(gain) / 2 + step,
    )


def _layout(question: Question) -> Layout:
    return Layout(
        bits=question.bits,
        signed=question.coding.signed,
        shift=question.shift,
        word_bits=question.word_bits,
        word_stated=question.word_stated,
        unit_stated=question.scale is not None,
    )


def _other_prefix(view: View) -> View | None:
    """The result taken to be in another power of ten of the stated unit, if that comes nearer."""
    decade = round(decades(abs(view.search.target.gain / view.line.gain)))
    if decade == 0 or abs(decade) > _FARTHEST_DECADE:
        return None
    factor = Fraction(10) ** decade
    return replace(
        view,
        search=replace(view.search, target=view.search.target.times(1 / factor)),
        scale=view.scale * factor,
        given=(Repair(rule="unit-prefix", exact=factor),),
    )
