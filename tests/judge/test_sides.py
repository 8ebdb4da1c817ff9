"""The two sides of a channel in figures."""

import numpy as np
import pytest

import facts
from bitweight.board.chains import ideal
from bitweight.judge.evaluations import Evaluation, Frame, evaluated
from bitweight.judge.sides import firmware_side, range_points
from facts import C


def _computed(ends: tuple[str, str] | None = None) -> Evaluation:
    tank = facts.channel(ends=ends)
    side = ideal(tank)
    frame = Frame(
        conversion=facts.conversion(C().code()),
        side=side,
        board=facts.board(tank),
        model=facts.INT32,
        limits=facts.Limits(),
        others={},
    )
    return evaluated(frame, side.all_codes, side.all_codes)


NONE = np.zeros(1024, dtype=np.bool_)


def test_line() -> None:
    """A straight curve has its gain and offset."""
    computed = _computed()
    side = firmware_side(computed, computed.codes * 0.5 - 3, NONE, 0.1)
    assert (side.gain, side.offset) == (pytest.approx(0.5), pytest.approx(-3))


@pytest.mark.parametrize(("bend", "straight"), [(0.09, True), (0.5, False)])
def test_bend(bend: float, straight: bool) -> None:
    """A curve that leaves its own line by more than the tolerance has none."""
    computed = _computed()
    value = computed.codes + bend * np.sin(computed.codes / 20)
    assert (firmware_side(computed, value, NONE, 0.1).gain is not None) == straight


def test_wrong_codes_are_left_out() -> None:
    """Codes at which the arithmetic goes wrong are no part of the line."""
    computed = _computed()
    wrong = computed.codes > 900
    garbage = (computed.codes * 7919) % 1000
    value = np.where(wrong, garbage, computed.codes * 2.0)
    assert firmware_side(computed, value, wrong, 0.1).gain == pytest.approx(2)
    assert firmware_side(computed, value, NONE, 0.1).gain is None


def test_points_of_a_part_of_the_range() -> None:
    """Bottom, middle and top are codes of the range."""
    computed = _computed(("1 V", "2 V"))
    points = range_points(computed, computed.codes * 1.0, computed.codes * 3.0)
    assert [point.at_count for point in points] == [205, 307, 409]
    assert [point.firmware for point in points] == [615, 921, 1227]
