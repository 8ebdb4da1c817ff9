"""Converters: which codes they deliver, what a count is worth, and the words the firmware sees."""

from collections.abc import Callable
from dataclasses import dataclass
from enum import Enum
from fractions import Fraction
from functools import partial

import numpy as np
from numpy.typing import NDArray

from bitweight.board.parts import Reference
from bitweight.places import Place
from bitweight.quantities import Quantity

Codes = NDArray[np.int64]


class ConverterKind(Enum):
    """Which way the converter works."""

    ADC = "adc"
    DAC = "dac"
    PWM = "pwm"


class Coding(Enum):
    """How a code stands in the converter's word."""

    UNSIGNED = "unsigned"
    TWOS_COMPLEMENT = "twos-complement"
    OFFSET_BINARY = "offset-binary"
    COMPLEMENTARY = "complementary"

    @property
    def signed(self) -> bool:
        """Whether codes below zero exist."""
        return self in (Coding.TWOS_COMPLEMENT, Coding.OFFSET_BINARY)


class Justification(Enum):
    """At which end of its word the code stands."""

    RIGHT = "right"
    LEFT = "left"


@dataclass(frozen=True, slots=True, kw_only=True)
class Oversampling:
    """Done by the hardware: a sum of `samples` conversions, shifted right by `shift` in total."""

    samples: int = 1
    shift: int = 0


@dataclass(frozen=True, slots=True, kw_only=True)
class ConverterClock:
    """The conversion clock, in hertz, and the cycles of one conversion."""

    frequency: Quantity | None = None
    minimum: Quantity | None = None
    maximum: Quantity | None = None
    cycles: Fraction | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Sampling:
    """The input while it samples. `time` is in seconds or in cycles of the conversion clock."""

    time: Quantity | None = None
    resistance: Quantity | None = None
    capacitance: Quantity | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Presentation:
    """One way in which the codes of a converter reach the firmware.

    `width` is how many bits of the word hold the code and its sign; `words` turns codes into raw
    words.
    """

    name: str
    width: int
    words: Callable[[Codes], Codes]


@dataclass(frozen=True, slots=True, kw_only=True)
class Converter:
    """A converter. A count is its own code: right-justified, decoded, after hardware oversampling.

    `full_scale_counts` are the counts of one conversion that would stand for exactly the
    reference; the first is taken, all are accepted. `shift` is the bits below the code in its
    word. `first_transition` is in LSB. `code_offset` is what a PWM adds to its code. What ends in
    `stated` says whether the board file gave the value or the default stands.
    """

    name: str
    kind: ConverterKind
    family: str | None
    bits: int
    reference: Reference
    reference_gain: Fraction
    full_scale_counts: tuple[int, ...]
    full_scale_stated: bool
    coding: Coding
    coding_stated: bool
    input_gain: Fraction
    justified: Justification
    justified_stated: bool
    word_bits: int
    word_bits_stated: bool
    shift: int
    first_transition: Fraction
    code_offset: int
    oversampling: Oversampling
    clock: ConverterClock | None
    sampling: Sampling | None
    total_error: Quantity | None
    place: Place
    bits_place: Place
    full_scale_place: Place
    family_place: Place | None = None

    @property
    def code_low(self) -> int:
        """The lowest code it delivers, in counts."""
        return self._summed(-(1 << (self.bits - 1)) if self.coding.signed else 0)

    @property
    def code_high(self) -> int:
        """The highest code it delivers, in counts."""
        bits = self.bits - 1 if self.coding.signed else self.bits
        return self._summed((1 << bits) - 1)

    @property
    def width(self) -> int:
        """Bits of one result: those of a conversion, and what oversampling adds."""
        return result_width(self.bits, signed=self.coding.signed, oversampling=self.oversampling)

    @property
    def full_scale(self) -> Fraction:
        """The count that would stand for exactly the reference, in counts of the result."""
        return self.accepted_full_scales[0]

    @property
    def accepted_full_scales(self) -> tuple[Fraction, ...]:
        """Every count that the board file accepts as full scale; the first is the one taken."""
        factor = Fraction(self.oversampling.samples, 1 << self.oversampling.shift)
        return tuple(count * factor for count in self.full_scale_counts)

    @property
    def code_shift(self) -> Fraction:
        """What stands between a code and the middle of its bin, in counts."""
        return self.first_transition - Fraction(1, 2) + self.code_offset

    @property
    def span(self) -> Fraction:
        """The pin voltage that full scale stands for, before `input_gain`, in volts."""
        return self.reference.voltage.value * self.reference_gain

    @property
    def lsb(self) -> Fraction:
        """Volts at the pin for one count."""
        return self.span / (self.full_scale * self.input_gain)

    @property
    def presentations(self) -> tuple[Presentation, ...]:
        """The ways its codes may reach the firmware, the likeliest first.

        A two's-complement code narrower than its word comes sign-extended, or as its bare bits.
        """
        bare = Presentation(name="bare", width=self.width, words=partial(_words, self, self.width))
        room = self.word_bits - self.shift
        if self.coding is not Coding.TWOS_COMPLEMENT or room <= self.width:
            return (bare,)
        extended = Presentation(name="sign-extended", width=room, words=partial(_words, self, room))
        return (extended, bare)

    def words(self, codes: Codes) -> Codes:
        """The raw words that the firmware sees for these codes, as values of an unsigned word."""
        return self.presentations[0].words(codes)

    def _summed(self, code: int) -> int:
        return (self.oversampling.samples * code) >> self.oversampling.shift


def result_width(bits: int, *, signed: bool, oversampling: Oversampling) -> int:
    """Bits that hold every result of `bits`-bit conversions after oversampling."""
    top = (oversampling.samples * ((1 << bits) - 1)) >> oversampling.shift
    if signed:
        low = -((oversampling.samples << (bits - 1)) >> oversampling.shift)
        return max(1, (-low - 1).bit_length() + 1)
    return max(1, top.bit_length())


def _words(converter: Converter, width: int, codes: Codes) -> Codes:
    """Codes in their coding, `width` bits wide, moved up to where they stand in the word."""
    mask = (1 << width) - 1
    match converter.coding:
        case Coding.UNSIGNED | Coding.TWOS_COMPLEMENT:
            raw = codes & mask
        case Coding.OFFSET_BINARY:
            raw = (codes - converter.code_low) & mask
        case Coding.COMPLEMENTARY:
            raw = converter.code_high - codes
    return np.asarray(raw << converter.shift, dtype=np.int64)
