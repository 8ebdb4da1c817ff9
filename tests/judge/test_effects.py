"""What wrong constants do to the reading, and the levels they earn."""

from fractions import Fraction

import pytest

from bitweight.judge.effects import Bench, Correction, bench, effects, mends
from bitweight.judge.findings import Level
from bitweight.judge.knobs import Key, knobs
from operands import Board, const, question, raw

CODE = raw() * const("4900UL", "VREF_MV") / const("1023")
BY_TEXT: dict[str, Key] = {knob.leaf.text: knob.key for knob in knobs(CODE.node)}
REFERENCE = Correction(key=BY_TEXT["4900UL"], value=Fraction(5000))
COUNT = Correction(key=BY_TEXT["1023"], value=Fraction(1024))


def on_bench(allowed: float | None = None) -> Bench:
    """The conversion over all codes."""
    asked = question(Board(), CODE, allowed=allowed)
    return bench(asked, CODE.node, asked.lines[0], Fraction(1, 1000))


def test_each_fault_is_judged_with_the_others_mended() -> None:
    """The reference leaves the allowed error alone, the count does not."""
    levels = [one.level for one in effects(on_bench(), (REFERENCE, COUNT))]
    assert levels == [Level.ERROR, Level.WARNING]


def test_points_are_the_own_effect_at_three_codes() -> None:
    """The count alone reads high by one LSB at the top, and not at all at the bottom."""
    _, count = effects(on_bench(), (REFERENCE, COUNT))
    assert [point.at_count for point in count.points] == [0, 511, 1023]
    assert count.points[0].error == 0
    assert count.points[2].error == pytest.approx(0.005, abs=1e-3)


@pytest.mark.parametrize(("allowed", "level"), [(0.2, Level.WARNING), (0.001, Level.ERROR)])
def test_the_allowed_error_decides(allowed: float, level: Level) -> None:
    """The same fault is a warning inside and an error outside the allowed error."""
    assert effects(on_bench(allowed), (REFERENCE, COUNT))[0].level is level


def test_a_full_set_mends_and_half_of_it_at_least_helps() -> None:
    """All corrections take the reading into the allowed error; a wrong one does not."""
    assert mends(on_bench(), (REFERENCE, COUNT))
    assert not mends(on_bench(), (Correction(key=BY_TEXT["1023"], value=Fraction(900)),))


def test_a_value_that_does_not_fit_its_type_mends_nothing() -> None:
    """What cannot be written cannot be evaluated, and is an error all the same."""
    huge = Correction(key=BY_TEXT["1023"], value=Fraction(1 << 40))
    assert not mends(on_bench(), (huge,))
    assert effects(on_bench(), (huge,))[0].level is Level.ERROR


def test_a_factor_on_the_result_is_a_correction_too() -> None:
    """A result in another prefix is mended by its factor."""
    asked = question(Board(), CODE, Fraction(1))
    at = bench(asked, CODE.node, asked.lines[0], Fraction(1))
    assert mends(at, (REFERENCE, COUNT, Correction(factor=Fraction(1, 1000))))


HIDDEN = raw() / const("1024") * const("20", "VREF_MV")
HIDDEN_KEYS = {knob.leaf.text: knob.key for knob in knobs(HIDDEN.node)}


@pytest.mark.parametrize(
    ("value", "level"), [(5000, Level.ERROR), (25, Level.NOTE)], ids=["far off", "close"]
)
def test_truncation_hides_no_wrong_constant(value: int, level: Level) -> None:
    """Where early division makes every result 0, what the constant means decides."""
    asked = question(Board(), HIDDEN)
    at = bench(asked, HIDDEN.node, asked.lines[0], Fraction(1, 1000))
    correction = Correction(key=HIDDEN_KEYS["20"], value=Fraction(value))
    assert [one.level for one in effects(at, (correction,))] == [level]


def test_a_value_that_the_type_cannot_hold_has_no_points() -> None:
    """A correction that cannot be written is judged by how the channel reads now."""
    unwritten = Correction(key=BY_TEXT["4900UL"], value=Fraction(5000), holds=False)
    levels = {allowed: effects(on_bench(allowed), (unwritten,))[0] for allowed in (0.01, 1.0)}
    assert [one.level for one in levels.values()] == [Level.ERROR, Level.WARNING]
    assert all(one.points == () for one in levels.values())


def test_the_finest_share_is_what_the_allowed_error_leaves() -> None:
    """5 V with 50 mV allowed: a factor matters from about one percent on."""
    assert float(on_bench(0.05).finest) == pytest.approx(0.01, rel=0.01)
