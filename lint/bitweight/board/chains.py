"""Stages joined: the ideal reading of a channel for every code of its converter."""

import math
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from bitweight.board.converters import Codes, Converter, ConverterKind
from bitweight.board.hardware import Channel
from bitweight.board.parts import Values, nominal
from bitweight.board.stages import Affine, Curved, Stage
from bitweight.quantities import Quantity
from bitweight.units import Unit

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class SignalChain:
    """What lies between the measured quantity and the pin, in coherent units.

    Only a chain whose `not_computed` is None has a line.
    """

    stages: tuple[Stage, ...]

    @property
    def not_computed(self) -> str | None:
        """Why the chain has no line, in words for the user."""
        for stage in self.stages:
            if isinstance(stage, Curved):
                return stage.NOT_COMPUTED
        return None

    def line(self, values: Values = nominal) -> Affine:
        """The whole chain as one line; curved stages are the caller's to exclude."""
        line = Affine()
        for stage in self.stages:
            if not isinstance(stage, Curved):
                line = line.then(stage.line(values))
        return line

    @property
    def gain(self) -> Fraction:
        """Output for input, in coherent units."""
        return self.line().gain

    @property
    def offset(self) -> Fraction:
        """Output where the input is 0, in the coherent unit of the output."""
        return self.line().offset

    def forward(self, quantity: Fraction) -> Fraction:
        """The output for a quantity, exactly."""
        return self.line().at(quantity)

    def inverse(self, volts: Fraction) -> Fraction:
        """The quantity that puts these volts on the pin, exactly."""
        return self.line().inverted().at(volts)

    def forward_all(self, quantities: Array) -> Array:
        """`forward` for an array."""
        return _along(self.line(), quantities)

    def inverse_all(self, volts: Array) -> Array:
        """`inverse` for an array."""
        return _along(self.line().inverted(), volts)


def _along(line: Affine, x: Array) -> Array:
    return np.asarray(float(line.gain) * x + float(line.offset), dtype=np.float64)


def not_computed(channel: Channel) -> str | None:
    """Why a channel has no ideal line yet, in words for the user; None when it has one."""
    if channel.converter.kind is not ConverterKind.ADC:
        return f"{channel.converter.kind.value} converters are not computed yet"
    return SignalChain(channel.chain).not_computed


def pin_volts(converter: Converter, values: Values = nominal) -> Affine:
    """The voltage that a code stands for, from counts to volts at the pin."""
    lsb = (
        values(converter.reference.part)
        * converter.reference_gain
        / (converter.full_scale * converter.input_gain)
    )
    return Affine(lsb, converter.code_shift * lsb)


def quantity_line(channel: Channel, values: Values = nominal) -> Affine:
    """q(c) as a line from counts to the channel's unit, for any values of the parts."""
    chain = SignalChain(channel.chain).line(values)
    coherent = pin_volts(channel.converter, values).then(chain.inverted())
    return coherent.then(_shown_in(channel.unit))


def _shown_in(unit: Unit) -> Affine:
    """From the coherent unit to this one."""
    return Affine(1 / unit.scale, -unit.zero / unit.scale)


@dataclass(frozen=True, slots=True, kw_only=True)
class Ideal:
    """q(c) of a channel: the quantity in its unit that code c stands for, parts nominal.

    `gain` is in channel units per count, `offset` in channel units; both are exact.
    """

    channel: Channel
    gain: Fraction
    offset: Fraction

    @property
    def lsb(self) -> Fraction:
        """What one count is worth, in channel units, without sign."""
        return abs(self.gain)

    def at(self, code: Fraction | int) -> Fraction:
        """q(c) of one code, exactly."""
        return self.gain * code + self.offset

    def quantity(self, codes: Codes) -> Array:
        """q(c) for an array of codes."""
        return np.asarray(codes * float(self.gain) + float(self.offset), dtype=np.float64)

    def code_of(self, quantity: Fraction) -> Fraction:
        """The real-valued code at which q is `quantity` (in channel units)."""
        return (quantity - self.offset) / self.gain

    @property
    def all_codes(self) -> Codes:
        """Every code the converter delivers, ascending."""
        converter = self.channel.converter
        return np.arange(converter.code_low, converter.code_high + 1, dtype=np.int64)

    @property
    def low(self) -> Fraction:
        """The lower end of the range, in channel units: as stated, else of all codes."""
        return self._ends()[0]

    @property
    def high(self) -> Fraction:
        """The upper end of the range, in channel units: as stated, else of all codes."""
        return self._ends()[1]

    @property
    def span(self) -> Fraction:
        """The width of the range, in channel units."""
        low, high = self._ends()
        return high - low

    @property
    def code_bounds(self) -> tuple[int, int]:
        """The lowest and highest code in range, ends included; none is where they cross."""
        converter = self.channel.converter
        first, last = sorted((self.code_of(self.low), self.code_of(self.high)))
        return max(converter.code_low, math.ceil(first)), min(converter.code_high, math.floor(last))

    def in_range(self, codes: Codes) -> NDArray[np.bool_]:
        """Which codes stand for a quantity inside the range, ends included."""
        low, high = self.code_bounds
        return np.asarray((codes >= low) & (codes <= high), dtype=np.bool_)

    @property
    def pin_ends(self) -> tuple[Fraction, Fraction]:
        """The lowest and highest voltage that the range puts on the pin."""
        unit = self.channel.unit
        chain = SignalChain(self.channel.chain)
        first, last = sorted(
            chain.forward(end * unit.scale + unit.zero) for end in (self.low, self.high)
        )
        return first, last

    @property
    def converter_ends(self) -> tuple[Fraction, Fraction]:
        """The voltages at which the converter's range ends; full scale itself is no fault."""
        converter = self.channel.converter
        top = max(converter.accepted_full_scales[0], Fraction(converter.code_high))
        return converter.code_low * converter.lsb, top * converter.lsb

    def _ends(self) -> tuple[Fraction, Fraction]:
        stated = self.channel.range
        if stated is not None:
            return stated[0].within(self.channel.unit), stated[1].within(self.channel.unit)
        converter = self.channel.converter
        low, high = sorted((self.at(converter.code_low), self.at(converter.code_high)))
        return low, high


def ideal(channel: Channel) -> Ideal:
    """The ideal reading of a channel that `not_computed` does not exclude."""
    line = quantity_line(channel)
    return Ideal(channel=channel, gain=line.gain, offset=line.offset)


def in_unit(quantity: Quantity, channel: Channel) -> Fraction:
    """A quantity of the board file in the channel's unit."""
    return quantity.within(channel.unit)
