"""One conversion and the board's side of it, as the search for wrong constants needs them."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from bitweight.arithmetic.types import DataModel
from bitweight.board.converters import Coding
from bitweight.board.facts import BoardFact
from bitweight.trace.conversions import Conversion


@dataclass(frozen=True, slots=True, kw_only=True)
class BoardLine:
    """The board's line q(c) = gain * c + offset, if `count` is the full-scale count of a result.

    `gain` is in channel units per count, `offset` in channel units.
    """

    count: Fraction
    gain: Fraction
    offset: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class StatedRole:
    """A role that the board file's [constants] gives to the constant `name`.

    `role` is a word of that table ("reference", "resistance"); `subject` the name behind it
    ("vref", "R12"); `unit` is what one count of the constant is in the coherent unit (1/1000 for
    mV), if stated.
    """

    name: str
    role: str
    subject: str | None = None
    unit: Fraction | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Question:
    """What `explain` is asked.

    `lines` holds the board's line once for each accepted full-scale count, the preferred first; it
    is empty where the board's side is no straight line. One count of the result is `scale` channel
    units (None where the unit is inferred), a result of 0 is `zero` channel units. Arrays run over
    `codes`, ascending: `words` the raw words, `quantity` q(c) in the channel's unit. `lsb` is in
    the channel's unit. `allowed(step)` gives the allowed error at each code, in the channel's unit,
    when one count of the result is `step` channel units (0 for a floating result). The code stands
    `shift` bits above the lowest bit of a word of `word_bits`. `coding` is the converter's.
    `count_stated` and `word_stated` are False where the board file left a default. `others` holds
    the steady word of other channels' readings, by the channels' names. `summed` says that the
    reading is a multiple of one code, as a sum of samples is.
    """

    conversion: Conversion
    model: DataModel
    lines: tuple[BoardLine, ...]
    facts: tuple[BoardFact, ...]
    scale: Fraction | None
    zero: Fraction = Fraction(0)
    unit: str
    codes: NDArray[np.int64]
    words: NDArray[np.int64]
    in_range: NDArray[np.bool_]
    quantity: NDArray[np.float64]
    allowed: Callable[[float], NDArray[np.float64]]
    lsb: float
    bits: int
    coding: Coding = Coding.UNSIGNED
    shift: int = 0
    word_bits: int = 16
    count_stated: bool = True
    word_stated: bool = True
    stated: tuple[StatedRole, ...] = ()
    others: Mapping[str, int] = field(default_factory=dict)
    summed: bool = False
