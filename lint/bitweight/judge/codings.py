"""A code that the firmware reads in another coding than the converter's.

The words of each other coding are put through the conversion. Where one of them makes every code
right, the firmware was written for that coding.
"""

from collections.abc import Iterator
from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np

from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.expressions import Code, Convert, Default, Expression, Purpose, walk
from bitweight.board.converters import Coding, Converter
from bitweight.judge.allowances import allowance
from bitweight.judge.evaluations import Codes, Evaluation, Frame, code_grid, presented, reader

_DECODING = (Purpose.CAST, Purpose.STORE, Purpose.ARGUMENT, Purpose.RETURN, Purpose.PROMOTION)


@dataclass(frozen=True, slots=True, kw_only=True)
class ResultScale:
    """What one count and a result of 0 stand for, in channel units; `step` is 0 for floats."""

    scale: float
    zero: float
    step: float


def other_coding(computed: Evaluation, frame: Frame, result: ResultScale) -> Coding | None:
    """The coding under which the conversion is right for every code, or None.

    For a conversion that is wrong under the converter's own coding. None, too, where the code is
    decoded as it should be and goes wrong later.
    """
    if _decoded(computed):
        return None
    channel = frame.side.channel
    for coding in Coding:
        if coding is channel.converter.coding:
            continue
        for codes, words in _candidates(channel.converter, coding, channel.firmware.reading_gain):
            if _clean(frame, result, codes, words):
                return coding
    return None


def _candidates(
    converter: Converter, coding: Coding, gain: Fraction
) -> Iterator[tuple[Codes, Codes]]:
    """The codes and words of the converter if it had another coding.

    A firmware that takes plain codes for two's complement extends their sign itself, so only bare
    bits stand for that: with words already extended any overflow above half scale would look like a
    sign.
    """
    other = replace(converter, coding=coding)
    codes = code_grid(other)
    if coding is Coding.TWOS_COMPLEMENT:
        yield codes, other.presentations[-1].words(codes)
        return
    for words in presented(other, codes, gain):
        yield codes, words


def _clean(frame: Frame, result: ResultScale, codes: Codes, words: Codes) -> bool:
    read = reader(frame.side.channel, words, frame.others)
    curve = evaluate(frame.conversion.expression, read, frame.limits)
    held = np.broadcast_to(curve.values, codes.shape)
    error = held * result.scale + result.zero - frame.side.quantity(codes)
    allowed = allowance(frame.side, codes, frame.board.coverage).at_step(result.step)
    return bool((np.abs(error) <= allowed).all())


def _decoded(computed: Evaluation) -> bool:
    """Whether some conversion of the bare reading holds the code itself, sign and all."""
    for node in _bare(computed.expression):
        held = evaluate(node, computed.read, computed.limits).values
        if held.shape == computed.codes.shape and (held == computed.codes).all():
            return bool((computed.codes < 0).any())
    return False


def _bare(root: Expression) -> Iterator[Expression]:
    """Readings and what is nothing but a reading in another type."""
    bare: set[int] = set()
    for node in walk(root):
        match node:
            case Code():
                passes = True
            case Convert():
                passes = node.purpose in _DECODING and id(node.operand) in bare
            case Default():
                passes = id(node.operand) in bare
            case _:
                passes = False
        if passes:
            bare.add(id(node))
            yield node
