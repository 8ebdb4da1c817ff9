"""Uncertainty of an ideal reading: contributions of the parts and their combination (JCGM 100).

A channel's chain enters; what its tolerances do to the reading at each code leaves.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction
from math import sqrt

import numpy as np

from bitweight.board.chains import Array, quantity_line
from bitweight.board.converters import Codes, Converter
from bitweight.board.hardware import Channel
from bitweight.board.parts import Part, Values, nominal
from bitweight.board.stages import parts_of, sources_of
from bitweight.units import LSB

_RECTANGULAR = sqrt(3)
"""A tolerance of half-width a is taken as equally likely throughout: u = a / sqrt(3) (4.3.7)."""

_STEP = Fraction(1, 10**6)
"""Relative change for the central difference; exact arithmetic leaves only its curvature."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Contribution:
    """One source of uncertainty. `effect` is c_i * u(x_i) at each code, in channel units, signed.

    `half_width` is the stated tolerance and `standard` its standard uncertainty u, both in `unit`.
    """

    name: str
    half_width: float
    standard: float
    unit: str
    effect: Array


@dataclass(frozen=True, slots=True, kw_only=True)
class UncertaintyBudget:
    """All contributions of a channel, uncorrelated since one part is one contribution."""

    channel: Channel
    contributions: tuple[Contribution, ...]
    coverage: float
    combined: Array
    expanded: Array

    @property
    def worst_case(self) -> Array:
        """Every tolerance at its end and against the reading, to first order, in channel units."""
        total = np.zeros_like(self.combined)
        for contribution in self.contributions:
            total += np.abs(contribution.effect) * _RECTANGULAR
        return total


def budget(channel: Channel, codes: Codes, coverage: Fraction) -> UncertaintyBudget:
    """The budget at each code of a channel that has an ideal line.

    Combined standard uncertainty by JCGM 100, 5.1.2 (10); expanded U = k * u_c by 6.2.1.
    """
    contributions = tuple(_contributions(channel, codes))
    squares = np.zeros(codes.shape, dtype=np.float64)
    for contribution in contributions:
        squares += contribution.effect**2
    combined = np.sqrt(squares)
    return UncertaintyBudget(
        channel=channel,
        contributions=contributions,
        coverage=float(coverage),
        combined=combined,
        expanded=combined * float(coverage),
    )


def _contributions(channel: Channel, codes: Codes) -> Iterator[Contribution]:
    for part in _uncertain_parts(channel):
        half_width = float(part.quantity.half_width)
        standard = half_width / _RECTANGULAR
        yield Contribution(
            name=part.label,
            half_width=half_width,
            standard=standard,
            unit=part.quantity.unit.text,
            effect=_sensitivity(channel, part, codes) * standard,
        )
    counts = _total_error(channel.converter)
    if counts:
        standard = float(counts) / _RECTANGULAR
        effect = np.full(codes.shape, float(quantity_line(channel).gain) * standard)
        yield Contribution(
            name=f"total error {channel.converter.name}",
            half_width=float(counts),
            standard=standard,
            unit="LSB",
            effect=effect,
        )


def _uncertain_parts(channel: Channel) -> tuple[Part, ...]:
    """Each part with a tolerance once, however often the chain names it."""
    found: dict[str, Part] = {}
    parts = [channel.converter.reference.part]
    for stage in channel.chain:
        parts.extend(parts_of(stage))
        parts.extend(source.part for source in sources_of(stage))
    for part in parts:
        known = found.get(part.key)
        if known is None or not known.quantity.half_width:
            found[part.key] = part
    return tuple(part for part in found.values() if part.quantity.half_width)


def _sensitivity(channel: Channel, part: Part, codes: Codes) -> Array:
    """dq/dx at each code, by central difference of the exact line (channel unit over coherent)."""
    step = abs(nominal(part)) * _STEP or _STEP
    high = quantity_line(channel, _changed(part, step))
    low = quantity_line(channel, _changed(part, -step))
    gain = float((high.gain - low.gain) / (2 * step))
    offset = float((high.offset - low.offset) / (2 * step))
    return np.asarray(codes * gain + offset, dtype=np.float64)


def _changed(part: Part, by: Fraction) -> Values:
    """Nominal values, but one part (by its key) moved."""

    def values(other: Part) -> Fraction:
        return nominal(other) + (by if other.key == part.key else 0)

    return values


def _total_error(converter: Converter) -> Fraction:
    """The converter's total error in counts."""
    error = converter.total_error
    if error is None:
        return Fraction(0)
    return error.value if error.unit.dimension == LSB else error.value / converter.lsb
