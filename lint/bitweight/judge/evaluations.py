"""A conversion computed for the codes of its converter, as the target does it and as meant."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
from numpy.typing import NDArray

from bitweight.arithmetic.evaluation import Curve, Read, evaluate
from bitweight.arithmetic.expressions import Code, Expression, walk
from bitweight.arithmetic.reals import reals
from bitweight.arithmetic.types import DataModel
from bitweight.arithmetic.values import FaultKind
from bitweight.board.chains import Ideal, ideal, not_computed
from bitweight.board.converters import Coding, Converter
from bitweight.board.hardware import Board, Channel
from bitweight.limits import Limits
from bitweight.trace.conversions import Conversion

Array = NDArray[np.float64]
Codes = NDArray[np.int64]
Mask = NDArray[np.bool_]


MOST_CODES = 1 << 18
"""Codes held at a time; a converter with more is judged on a grid, then scanned."""
_GRID = 1 << 16


def code_grid(converter: Converter) -> Codes:
    """Every code of the converter, or an even grid with both ends where there are too many.

    The grid's step is odd, so that it does not fall in with shifts and masks.
    """
    low, high = converter.code_low, converter.code_high
    if high - low < MOST_CODES:
        return np.arange(low, high + 1, dtype=np.int64)
    step = (high - low) // _GRID | 1
    return np.unique(np.append(np.arange(low, high, step, dtype=np.int64), high))


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Frame:
    """What stays the same however a conversion is computed.

    `others` holds the steady word of each other channel's reading.
    """

    conversion: Conversion
    side: Ideal
    board: Board
    model: DataModel
    limits: Limits
    others: Mapping[str, int]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Evaluation:
    """One expression at `codes` (ascending), whose raw words are `words`.

    `curve` is what the target holds, `real` what the expression means in real numbers; both are in
    counts of the result. `read` delivers the words of every reading in the expression.
    """

    expression: Expression
    model: DataModel
    limits: Limits
    codes: Codes
    words: Codes
    in_range: Mask
    read: Read
    curve: Curve
    real: Array

    @property
    def held(self) -> Array:
        """The value of the result at each code as a real number, NaN where it is not known."""
        values = _spread(self.curve.values, self.codes)
        return np.where(self.curve.faulty(FaultKind.UNKNOWN), np.nan, values)

    @property
    def meant(self) -> Array:
        """The real value, truncated once at the end where the result is an integer."""
        return np.trunc(self.real) if self.expression.type.is_integer else self.real

    def of(self, expression: Expression) -> Array:
        """Another expression over the same readings, as the target would compute it."""
        values = evaluate(expression, self.read, self.limits).values
        return _spread(values, self.codes)


def evaluated(frame: Frame, codes: Codes, words: Codes) -> Evaluation:
    """The conversion of a frame computed both ways at some codes."""
    read = reader(frame.side.channel, words, frame.others)
    return Evaluation(
        expression=frame.conversion.expression,
        model=frame.model,
        limits=frame.limits,
        codes=codes,
        words=words,
        in_range=frame.side.in_range(codes),
        read=read,
        curve=evaluate(frame.conversion.expression, read, frame.limits),
        real=_spread(reals(frame.conversion.expression, read), codes),
    )


def reader(channel: Channel, words: Codes, others: Mapping[str, int]) -> Read:
    """Gives the channel's own words, and one steady word for readings of other channels."""

    def read(node: Code) -> NDArray[np.int64]:
        if channel.name in node.channels or not node.channels:
            return words
        steady = next((others[name] for name in node.channels if name in others), 0)
        return np.full(words.shape, steady, dtype=np.int64)

    return read


def steady_words(channels: Iterable[Channel]) -> dict[str, int]:
    """The word each channel delivers at its nominal quantity, else in the middle of its range."""
    return {channel.name: _steady_word(channel) for channel in channels}


def presented(
    converter: Converter, codes: Codes, reading_gain: Fraction, *, bare: bool = False
) -> tuple[Codes, ...]:
    """The ways in which the words behind codes may reach the firmware, the likeliest first.

    A two's-complement code may also come as a negative number (a function that returns int), unless
    the firmware sees the `bare` word. A `reading_gain` multiplies what arrives, as a sum of samples
    does.
    """
    ways = [way.words(codes) for way in converter.presentations]
    if converter.coding is Coding.TWOS_COMPLEMENT and not (bare and reading_gain == 1):
        signed = codes << converter.shift
        if reading_gain != 1:
            ways = []
        ways.append(signed)
    return tuple(_multiplied(words, reading_gain) for words in ways)


def sees_bare_words(frame: Frame) -> bool:
    """Whether the board states a word no wider than its code and the reading has no sign."""
    converter = frame.side.channel.converter
    if not converter.word_bits_stated or converter.word_bits - converter.shift > converter.width:
        return False
    codes = (node for node in walk(frame.conversion.expression) if isinstance(node, Code))
    own = [code for code in codes if frame.conversion.channel in code.channels]
    return bool(own) and not any(code.type.signed for code in own)


def _multiplied(words: Codes, gain: Fraction) -> Codes:
    return words if gain == 1 else (words * gain.numerator) // gain.denominator


def _steady_word(channel: Channel) -> int:
    converter = channel.converter
    if not_computed(channel) is None:
        side = ideal(channel)
        stated = channel.nominal
        wanted = stated.within(channel.unit) if stated is not None else (side.low + side.high) / 2
        code = round(side.code_of(wanted))
    else:
        code = (converter.code_low + converter.code_high) // 2
    inside = min(max(code, converter.code_low), converter.code_high)
    words = presented(converter, np.array([inside], dtype=np.int64), channel.firmware.reading_gain)
    return int(words[0][0])


def _spread(values: NDArray[Any], codes: Codes) -> Array:
    return np.broadcast_to(values, codes.shape).astype(np.float64)
