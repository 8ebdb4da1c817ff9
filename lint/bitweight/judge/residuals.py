"""What no constant explains: a gain, an offset or a curve that leaves the allowed error.

The line that the code means and the board's enter; a word leaves, and the constant that would mend
it if there is exactly one.
"""

from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from bitweight.arithmetic.expressions import Code
from bitweight.arithmetic.reals import reals
from bitweight.arithmetic.scalars import nearest
from bitweight.board.converters import Coding
from bitweight.judge.knobs import Knob
from bitweight.judge.meanings import snaps
from bitweight.judge.questions import BoardLine, Question
from bitweight.judge.repairs import Repair
from bitweight.judge.roots import gain_root, offset_root
from bitweight.judge.sketches import RealLine, same
from bitweight.judge.spellings import spelled
from bitweight.judge.views import View

Array = NDArray[np.float64]
_MOST_CODES = 1 << 13
_STRAIGHT = 1e-6


def residual(question: Question, view: View) -> str | None:
    """By what the line leaves the allowed error, "gain" or "offset"; None where it does not.

    An offset that is a missed coding (half or all of the codes) is no matter of constants.
    """
    line, target = view.line, view.search.target
    if _is_missed_coding(question, line, view.board, view.scale):
        return None
    at = _sample(question)
    codes = question.codes[at].astype(np.float64)
    wanted = _along(view.board, codes)
    value = _along(line, codes) * nearest(view.scale, 64) + nearest(question.zero, 64)
    if not _leaves(question, view.scale, at, value - wanted):
        return None
    if same(line.gain, target.gain):
        return None if target.has_offset(line) else "offset"
    span = Fraction(int(question.codes[at[-1]]) - int(question.codes[at[0]]))
    tilt = abs(line.gain - target.gain) * span
    moved = abs(line.offset - target.offset)
    return "offset" if tilt <= target.tolerance < moved else "gain"


def _along(line: RealLine | BoardLine, codes: Array) -> Array:
    return codes * nearest(line.gain, 64) + nearest(line.offset, 64)


def _is_missed_coding(
    question: Question, line: RealLine, board: BoardLine, scale: Fraction
) -> bool:
    gain = line.gain * scale
    if question.coding is Coding.COMPLEMENTARY:
        return same(gain, -board.gain)
    if not question.coding.signed or not same(gain, board.gain):
        return False
    counts = abs(line.offset * scale + question.zero - board.offset) / abs(board.gain)
    top = Fraction(1 << question.bits)
    return any(abs(counts - full) <= 2 for full in (top, top / 2))


def curve_leaves(question: Question) -> bool:
    """Whether code that is no straight line means values outside the allowed error."""
    at = _sample(question)
    value = _real_values(question, at)
    scale = question.scale
    if scale is None or not np.isfinite(value).any():
        return False
    error = value * nearest(scale, 64) + nearest(question.zero, 64) - question.quantity[at]
    return _leaves(question, scale, at, error)


def is_level(question: Question) -> bool:
    """Whether the code means the same value for every code."""
    return bool(np.unique(_real_values(question, _sample(question))).size == 1)


def bends(question: Question, view: View) -> bool:
    """Whether the code leaves its own straight stretch otherwise than by a clamp."""
    at = _sample(question)
    value = _real_values(question, at)
    line = _along(view.line, question.codes[at].astype(np.float64))
    distance = value - line
    size = max(1.0, float(np.abs(line).max()))
    off = np.isfinite(value) & (np.abs(distance) > _STRAIGHT * size)
    if not off.any() or _is_level(value[off], size):
        return False
    return _leaves(question, view.scale, at[off], distance[off] * nearest(view.scale, 64))


def _is_level(values: Array, size: float) -> bool:
    """Whether the values are no more than two, as at the bounds of a clamp."""
    return np.unique(np.round(values / (size * _STRAIGHT))).size <= 2


def _real_values(question: Question, at: NDArray[np.int64]) -> Array:
    words = question.words[at]

    def read(_: Code) -> NDArray[np.int64]:
        return words

    return np.broadcast_to(reals(question.conversion.expression, read), words.shape)


def _sample(question: Question) -> NDArray[np.int64]:
    """Indexes of codes in range, spread over it, ends included."""
    inside = np.flatnonzero(question.in_range)
    if not inside.size:
        inside = np.arange(question.codes.size)
    spread = np.linspace(0, inside.size - 1, min(inside.size, _MOST_CODES)).round()
    return inside[spread.astype(np.int64)]


def _leaves(question: Question, scale: Fraction, at: NDArray[np.int64], error: Array) -> bool:
    whole = question.conversion.expression.type.is_integer
    step = nearest(abs(scale), 64) if whole else 0.0
    allowed = np.broadcast_to(question.allowed(step), question.codes.shape)[at]
    return bool((np.abs(error) > allowed * (1 + 1e-9)).any())


def culprit(view: View) -> Repair | None:
    """The correction of the one constant that stands for no board fact, if there is exactly one."""
    search = view.search
    unknown = [knob for knob in search.knobs if not _is_recognised(view, knob)]
    if len(unknown) != 1:
        return None
    gain_is_right = search.target.has_gain(view.line)
    root = (offset_root if gain_is_right else gain_root)(
        search.sketch, search.target, unknown[0], {}
    )
    if root is None or root <= 0 or not search.fits({unknown[0].key: root}):
        return None
    if spelled(unknown[0].leaf.text, root) == unknown[0].leaf.text:
        return None
    rule = "transfer-offset" if gain_is_right else "transfer-gain"
    return Repair(rule=rule, knob=unknown[0], exact=root)


def _is_recognised(view: View, knob: Knob) -> bool:
    if knob.is_round or knob.counts_bits:
        return True
    return any(
        meaning.term.role in knob.hints or (meaning.is_natural and not knob.hints)
        for meaning in snaps(knob, view.search.terms)
    )
