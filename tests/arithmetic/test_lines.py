"""Least-squares lines against a published example and against their own laws."""

import numpy as np
import pytest

from bitweight.arithmetic.lines import Line, fit, is_straight, residuals

# JCGM 100:2008, H.3.1, table H.6: thermometer readings and their corrections, in degC.
READINGS = (
    *(21.521, 22.012, 22.512, 23.003, 23.507, 23.999),
    *(24.513, 25.002, 25.503, 26.010, 26.511),
)
CORRECTIONS = (
    *(-0.171, -0.169, -0.166, -0.159, -0.164, -0.165),
    *(-0.156, -0.157, -0.159, -0.161, -0.160),
)


def test_the_published_calibration_line() -> None:
    """The line of JCGM 100:2008 H.3: -0.1712 degC at 20 degC, 0.00218 per degree."""
    line = fit(np.array(READINGS) - 20, CORRECTIONS)
    assert line.offset == pytest.approx(-0.1712, abs=5e-5)
    assert line.gain == pytest.approx(0.00218, abs=5e-6)
    assert line.at(10) == pytest.approx(-0.1494, abs=5e-5)


def test_the_scatter_of_the_published_line() -> None:
    """The residuals of JCGM 100:2008 H.3 have the experimental standard deviation 0.0035 degC."""
    x = np.array(READINGS) - 20
    rest = residuals(fit(x, CORRECTIONS), x, CORRECTIONS)
    assert np.sqrt((rest**2).sum() / 9) == pytest.approx(0.0035, abs=5e-5)


def test_large_codes_cost_no_digits() -> None:
    """A line through 24-bit codes is found to the last digits."""
    codes = np.arange(1 << 24, (1 << 24) + 4096)
    line = fit(codes, 0.25 * codes - 7)
    assert line.gain == pytest.approx(0.25, rel=1e-12)
    assert line.offset == pytest.approx(-7, abs=1e-6)


def test_truncation_lies_within_one_count() -> None:
    """Integer division leaves its line by less than a count, a clamp by more."""
    codes = np.arange(1024)
    assert is_straight(codes, codes * 5000 // 1024, 1.0)
    assert not is_straight(codes, codes * 5000 // 1024, 0.1)
    assert not is_straight(codes, np.minimum(codes * 5, 4000), 1.0)


def test_a_single_code_gives_a_level_line() -> None:
    """Points of one code have no gain."""
    assert fit([5, 5], [1.0, 3.0]) == Line(gain=0.0, offset=2.0)


@pytest.mark.parametrize(("codes", "values"), [([], []), ([1, 2], [1])])
def test_no_line_without_matching_points(codes: list[float], values: list[float]) -> None:
    """Points that do not match, or none at all, are refused."""
    with pytest.raises(ValueError, match="no line"):
        fit(codes, values)
