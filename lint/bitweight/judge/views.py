"""The ways to read one question, and the smallest explanation among them.

A conversion may count by any accepted full-scale count, give a result in any decade where no unit
is stated, and take the code to stand elsewhere in its word. Each way is one `View`, searched alone.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np

from bitweight.arithmetic.expressions import (
    Binary,
    Code,
    Expression,
    Leaf,
    Literal,
    children,
    walk,
)
from bitweight.board.facts import Role
from bitweight.judge.knobs import Key, Knob, decades, knobs, leaf_key
from bitweight.judge.meanings import resistances, terms
from bitweight.judge.questions import BoardLine, Question
from bitweight.judge.repairs import Layout, Repair, is_doubtful, mask_repair, rank
from bitweight.judge.roots import Target
from bitweight.judge.searches import smallest
from bitweight.judge.sketches import RealLine, Sketch, sketch
from bitweight.judge.substitutions import grouped, replaced
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
    if solution is None or (solution.repairs and any(map(_is_free_power, view.given))):
        return None
    return Answer(view=view, repairs=(*view.given, *solution.repairs))


def _is_free_power(repair: Repair) -> bool:
    """Whether a power of ten is taken that no constant carries: with others it fits by chance."""
    return repair.rule == "unit-prefix" and repair.knob is None


def _cost(repairs: Sequence[Repair]) -> int:
    """How many wrong constants: a doubtful one, or a prefix without a constant, counts twice.

    Named constants that contradict the board go before it.
    """
    return sum(2 if is_doubtful(repair) or _is_free_power(repair) else 1 for repair in repairs)


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
    yield from _unmasked_views(question, plain)
    if question.scale is not None:
        yield from filter(None, map(_other_prefix, list(_plain_views(question, plain))))


def _unmasked_views(question: Question, plain: _Reading) -> Iterator[View]:
    """The code with the masks widened that drop bits of it."""
    layout = _layout(question)
    masks = [repair for knob in plain.knobs if (repair := mask_repair(knob, layout)) is not None]
    if not masks:
        return
    wide = _widened(plain.expression, {one.knob.key: one.exact for one in masks if one.knob})
    whole = _reading(question, wide, {}, 0)
    for view in _plain_views(question, whole) if whole is not None else ():
        yield replace(view, expression=plain.expression, given=tuple(masks))


def _widened(expression: Expression, masks: Mapping[Key, Fraction]) -> Expression:
    """The expression with other masks, spelled as before so that they are the same constants."""
    found = {
        leaf_key(node.leaf): replace(node, value=int(masks[leaf_key(node.leaf)]))
        for node in walk(expression)
        if isinstance(node, Literal) and node.leaf is not None and leaf_key(node.leaf) in masks
    }
    return replaced(expression, found)


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
    found = _with_company(knobs(expression, question.stated, inside), question)
    return _Reading(expression=expression, knobs=found, sketch=drawn, line=line)


def _with_company(found: tuple[Knob, ...], question: Question) -> tuple[Knob, ...]:
    """The constants, marked where no resistance stands beside them and no name speaks of one."""
    known = terms(question.facts, question.lines[0].count)
    said = [resistances(knob, known) for knob in found]
    named = [_speaks_of_resistance(knob) for knob in found]
    return tuple(
        replace(knob, lone=not _has_company(index, said, named)) for index, knob in enumerate(found)
    )


def _speaks_of_resistance(knob: Knob) -> bool:
    stated = knob.stated is not None and knob.stated.role == Role.RESISTANCE.value
    return stated or Role.RESISTANCE in knob.hints


def _has_company(index: int, said: Sequence[frozenset[str]], named: Sequence[bool]) -> bool:
    """Whether the constant's name or another constant speaks for its being a resistance."""
    others = [one for at, one in enumerate(said) if at != index]
    return named[index] or any(named) or any(one - said[index] or len(one) > 1 for one in others)


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
    # A count of other bits may be more than a decade off: 65536 for 4096.
    for decade in (nearest, nearest + 1, nearest - 1):
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
        summed=question.summed or _adds_readings(question.conversion.expression),
    )


def _adds_readings(expression: Expression) -> bool:
    """Whether two terms of a sum hold a reading: samples that are averaged."""
    holding: set[int] = set()
    for node in walk(expression):
        below = [id(child) in holding for child in children(node)]
        if isinstance(node, Binary) and node.operator == "+" and all(below):
            return True
        if isinstance(node, Code) or any(below):
            holding.add(id(node))
    return False


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
