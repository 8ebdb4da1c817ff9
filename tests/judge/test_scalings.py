"""The likeliest power of ten of a result."""

from fractions import Fraction

import numpy as np
import pytest

from bitweight.judge.scalings import rough_scale

CODES = np.arange(1024, dtype=np.float64)


@pytest.mark.parametrize("decade", [-6, -3, -1, 0, 2])
@pytest.mark.parametrize("ratio", [0.4, 1.0, 2.5, -1.0])
def test_decade(decade: int, ratio: float) -> None:
    """A slope up to about three times off still gives its power of ten, whatever its sign."""
    held = CODES * 0.005 * ratio / 10.0**decade
    assert rough_scale(CODES * 0.005, held) == Fraction(10) ** decade


def test_clamps_do_not_count() -> None:
    """A curve held at a limit for most codes has the slope of the rest."""
    assert rough_scale(CODES * 0.005, np.minimum(CODES * 5, 400)) == Fraction(1, 1000)


@pytest.mark.parametrize("held", [np.zeros(1024), np.full(1024, np.nan)])
def test_no_slope(held: np.ndarray[tuple[int], np.dtype[np.float64]]) -> None:
    """Without a slope counts are taken as they are."""
    assert rough_scale(CODES, held) == 1
