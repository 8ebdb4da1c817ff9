"""Gain and offset of a curve: the least-squares line (IEEE 1241, independently based).

Enters: codes and the values that belong to them. Leaves: a `Line`.
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """A straight line: `gain` in units per code, `offset` in units at code zero."""

    gain: float
    offset: float

    def at(self, code: float) -> float:
        """The value of the line at a code."""
        return self.gain * code + self.offset


def fit(codes: npt.ArrayLike, values: npt.ArrayLike) -> Line:
    """The least-squares line through the points; a level one where all codes are the same.

    Sums run over deviations from the means, so that large codes cost no digits. ValueError
    without points.
    """
    x, y = np.asarray(codes, dtype=np.float64), np.asarray(values, dtype=np.float64)
    if not x.size or x.shape != y.shape:
        raise ValueError(f"{x.size} codes and {y.size} values make no line")
    middle, level = float(x.mean()), float(y.mean())
    spread = x - middle
    square = float(spread @ spread)
    gain = float(spread @ (y - level)) / square if square else 0.0
    return Line(gain=gain, offset=level - gain * middle)


def residuals(line: Line, codes: npt.ArrayLike, values: npt.ArrayLike) -> npt.NDArray[np.float64]:
    """How far each value lies above the line, in the unit of the values."""
    x, y = np.asarray(codes, dtype=np.float64), np.asarray(values, dtype=np.float64)
    return y - (line.gain * x + line.offset)


def is_straight(codes: npt.ArrayLike, values: npt.ArrayLike, tolerance: float) -> bool:
    """Whether every point lies within `tolerance` (unit of the values) of the fitted line."""
    distance = np.abs(residuals(fit(codes, values), codes, values))
    return bool((distance <= tolerance).all())
