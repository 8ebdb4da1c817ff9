"""How large the error of a channel may be at each code, and who says so.

A channel, its ideal line and the step of a result enter; the allowed error at each code leaves, in
the channel's unit.
"""

from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from bitweight.board.chains import Ideal
from bitweight.board.hardware import AllowedError
from bitweight.board.uncertainty import budget

Array = NDArray[np.float64]

BOARD = "board"
BUDGET = "budget"
RESOLUTION = "resolution"

_RESOLUTIONS = 1.5
"""Times LSB plus step, where nothing is stated: rounding, truncation and bin edges fit in."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Allowance:
    """The allowed error of a channel, ready to be asked for any step of the result.

    `uncertainty` is the expanded uncertainty U of the budget at each code, in the channel's unit.
    `quantity` is q(c) at the same codes.
    """

    stated: AllowedError | None
    span: float
    lsb: float
    quantity: Array
    uncertainty: Array

    @property
    def is_stated(self) -> bool:
        """Whether the board file states the allowed error."""
        return self.stated is not None

    def at_step(self, step: float) -> Array:
        """The allowed error at each code; `step` is one count of an integer result, else 0."""
        if self.stated is None:
            return np.maximum(self.uncertainty, self.resolution(step))
        fixed = float(self.stated.absolute) + float(self.stated.of_span) * self.span
        return np.asarray(fixed + float(self.stated.of_reading) * np.abs(self.quantity))

    def resolution(self, step: float) -> float:
        """The part of the default that the resolution alone asks for, in the channel's unit."""
        return _RESOLUTIONS * (self.lsb + step)

    def says(self, index: int, step: float) -> str:
        """Who gives the allowed error at one code: "board", "budget" or "resolution"."""
        if self.stated is not None:
            return BOARD
        return BUDGET if self.uncertainty[index] > self.resolution(step) else RESOLUTION


def allowance(side: Ideal, codes: NDArray[np.int64], coverage: Fraction) -> Allowance:
    """What the board file allows a channel at these codes; `coverage` is the factor k of U."""
    stated = side.channel.allowed_error
    quantity = side.quantity(codes)
    return Allowance(
        stated=stated,
        span=float(side.span),
        lsb=float(side.lsb),
        quantity=quantity,
        uncertainty=_expanded(side, codes, coverage) if stated is None else np.zeros_like(quantity),
    )


def _expanded(side: Ideal, codes: NDArray[np.int64], coverage: Fraction) -> Array:
    return budget(side.channel, codes, coverage).expanded
