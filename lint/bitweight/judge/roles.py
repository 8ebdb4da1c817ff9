"""Which board fact each constant of a conversion stands for, and which correction repairs the line.

A `Question` enters, an `Explanation` leaves. Facts that a constant may be are in `meanings`, the
search in `searches` and `views`, what is left over in `residuals`, the words in `wordings`.
"""

from collections.abc import Iterator, Sequence
from dataclasses import replace
from fractions import Fraction
from itertools import combinations, islice

import numpy as np

from bitweight.arithmetic.expressions import Leaf
from bitweight.judge.effects import Bench, bench
from bitweight.judge.explanations import EffectPoint, Explanation, WrongConstant
from bitweight.judge.knobs import Knob, is_power
from bitweight.judge.meanings import Scaling, nearest, snaps
from bitweight.judge.questions import BoardLine, Question, StatedRole
from bitweight.judge.repairs import Repair, fact_repair
from bitweight.judge.residuals import bends, culprit, curve_leaves, is_level, residual
from bitweight.judge.substitutions import corrected, steadied
from bitweight.judge.views import Answer, View, smallest_answer, views
from bitweight.judge.wordings import cancelling_constants, wrong_constants

__all__ = [
    "BoardLine",
    "EffectPoint",
    "Explanation",
    "Question",
    "StatedRole",
    "WrongConstant",
    "explain",
]

_MOST_PAIRS = 60


def explain(question: Question) -> Explanation:
    """The smallest set of wrong constants that makes the code's real-valued line the board's.

    Without a line on the board's side there is nothing to explain.
    """
    if not question.lines:
        return Explanation()
    with np.errstate(all="ignore"):
        return _explained(_steadied(question))


def _explained(question: Question) -> Explanation:
    ways = tuple(views(question))
    if not ways:
        return _without_line(question)
    answer = smallest_answer(ways)
    if answer is not None and answer.repairs:
        return _wrong(question, answer)
    view = ways[0] if answer is None else answer.view
    if bends(question, view):
        return _with_line(question, view, Explanation(residual="curve"))
    return _kept(question, view, explained=answer is not None)


def _without_line(question: Question) -> Explanation:
    """The code is no straight line, or a level one."""
    if not curve_leaves(question):
        return Explanation()
    if is_level(question):
        wanted = question.lines[0].gain
        return Explanation(residual="gain", gain=Fraction(0), wanted_gain=wanted)
    return Explanation(residual="curve")


def _steadied(question: Question) -> Question:
    """The question with the readings of other channels as constants."""
    conversion = question.conversion
    expression = steadied(conversion.expression, conversion.channel, question.others)
    if expression is conversion.expression:
        return question
    return replace(question, conversion=replace(conversion, expression=expression))


def _wrong(question: Question, answer: Answer) -> Explanation:
    view = answer.view
    found = wrong_constants(question, _bench(question, view), answer.repairs)
    constants = [one for one in answer.repairs if one.knob and not _lacks_shift(one)]
    explanation = Explanation(
        wrong=found,
        roles=_roles(view, answer.repairs),
        mended=corrected(
            view.expression, {one.knob.key: one.exact for one in constants if one.knob}
        ),
        moved=question.shift if any(map(_lacks_shift, answer.repairs)) else 0,
    )
    return _with_line(question, view, explanation)


def _lacks_shift(repair: Repair) -> bool:
    """Whether a code is taken unshifted, which shifting mends whatever the count is."""
    return repair.rule == "justification" and (repair.knob is None or repair.meaning is not None)


def _kept(question: Question, view: View, *, explained: bool) -> Explanation:
    """No constant is named as wrong: all is well, or what is left over leaves the allowed error."""
    left = residual(question, view)
    mending = culprit(view) if left is not None else None
    blamed = (
        () if mending is None else wrong_constants(question, _bench(question, view), (mending,))
    )
    trimmed = _cancelling(view) if explained and left is None else ()
    explanation = Explanation(
        cancelling=cancelling_constants(question, trimmed),
        residual=left,
        culprit=blamed[0] if blamed else None,
        roles=_roles(view, ()),
    )
    return _with_line(question, view, explanation)


def _bench(question: Question, view: View) -> Bench:
    return bench(question, view.expression, view.board, _stated_scale(view))


def _stated_scale(view: View) -> Fraction:
    """The unit of the result before a correction of its prefix."""
    scale = view.scale
    for repair in view.given:
        if repair.rule == "unit-prefix":
            scale /= repair.exact
    return scale


def _with_line(question: Question, view: View, explanation: Explanation) -> Explanation:
    """The explanation with the lines of both sides, in the channel's unit."""
    scale = _stated_scale(view)
    return replace(
        explanation,
        decade=view.decade,
        count=view.board.count,
        gain=view.line.gain * scale,
        offset=view.line.offset * scale + question.zero,
        wanted_gain=view.board.gain,
        wanted_offset=view.board.offset,
    )


def _cancelling(view: View) -> tuple[Repair, ...]:
    """Two constants that contradict the board, and whose facts together keep the line as it is."""
    search = view.search
    against = [repair for knob in search.knobs for repair in _contradictions(view, knob)]
    for left, right in islice(combinations(against, 2), _MOST_PAIRS):
        if left.knob is None or right.knob is None or left.knob.key == right.knob.key:
            continue
        if search.fits({left.knob.key: left.exact, right.knob.key: right.exact}):
            return (left, right)
    return ()


def _contradictions(view: View, knob: Knob) -> Iterator[Repair]:
    """The facts that the constant's name speaks of, where its value is none of them."""
    if knob.counts_bits or not (knob.hints or knob.stated):
        return
    named = [
        meaning
        for meaning in nearest(knob, view.search.terms)
        if knob.stated is not None or meaning.term.role in knob.hints
        if knob.exponent is not None or meaning.term.scaling is not Scaling.QUANTITY
    ]
    named.sort(key=lambda meaning: not meaning.is_natural)
    if any(meaning in named for meaning in snaps(knob, view.search.terms)):
        return
    for meaning in named:
        repair = fact_repair(knob, meaning, view.search.layout)
        if repair is not None:
            yield repair


def _roles(view: View, repairs: Sequence[Repair]) -> tuple[tuple[Leaf, str], ...]:
    """Each constant that was recognised with the fact it stands for."""
    found: dict[Leaf, str] = {}
    for knob in view.search.knobs:
        role = _wrong_role(knob, repairs) or _held_role(view, knob)
        if role is not None and not knob.inside:
            found[knob.leaf] = role
    return tuple(found.items())


def _wrong_role(knob: Knob, repairs: Sequence[Repair]) -> str | None:
    for repair in repairs:
        if repair.knob is not None and repair.knob.key == knob.key and repair.meaning is not None:
            return repair.meaning.term.name
    return None


def _held_role(view: View, knob: Knob) -> str | None:
    if knob.is_round and not is_power(knob.value, 2):
        return None
    for meaning in snaps(knob, view.search.terms):
        if not knob.hints or meaning.term.role in knob.hints:
            return meaning.term.name
    return None
