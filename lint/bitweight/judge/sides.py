"""The two sides of a channel in figures: the line of each, and the reading at three codes."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from bitweight.arithmetic.lines import fit, is_straight
from bitweight.judge.evaluations import Evaluation

Array = NDArray[np.float64]

_ROUNDING = 1 + 1e-9
"""Binary64 may put a value a rounding beyond the tolerance; that is no bend."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Point:
    """The reading at one code: what the board delivers and what the firmware reports."""

    at_count: int
    hardware: float
    firmware: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Side:
    """Gain (channel units per count) and offset of a side's line; None where it is no line."""

    gain: float | None
    offset: float | None


def range_points(computed: Evaluation, quantity: Array, value: Array) -> tuple[Point, ...]:
    """Bottom, middle and top of the range, from the smallest quantity to the largest."""
    inside = np.flatnonzero(computed.in_range)
    first, last = int(inside[0]), int(inside[-1])
    if quantity[first] > quantity[last]:
        first, last = last, first
    middle = int(inside[(len(inside) - 1) // 2])
    return tuple(
        Point(
            at_count=int(computed.codes[index]),
            hardware=float(quantity[index]),
            firmware=float(value[index]),
        )
        for index in (first, middle, last)
    )


def firmware_side(
    computed: Evaluation, value: Array, wrong: NDArray[np.bool_], tolerance: float
) -> Side:
    """The least-squares line of the firmware through the codes in range that do not overflow.

    Where a clamp bends the curve, the codes held at its ends are left out.
    """
    usable = computed.in_range & ~wrong & np.isfinite(value)
    for chosen in (usable, usable & ~_held(value, usable)):
        codes, values = computed.codes[chosen], value[chosen]
        if len(codes) and is_straight(codes, values, tolerance * _ROUNDING):
            line = fit(codes, values)
            return Side(gain=line.gain, offset=line.offset)
    return Side(gain=None, offset=None)


def _held(value: Array, usable: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """The codes at which the curve stays at its lowest or highest value."""
    if not usable.any():
        return usable
    ends = (value[usable].min(), value[usable].max())
    return np.isin(value, ends)
