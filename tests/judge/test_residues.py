"""Findings about a whole line."""

from bitweight.judge.residues import residual_findings
from facts import C, case, channel


def test_both_sides_are_told_in_engineering_notation() -> None:
    """The message has the code's gain, the board's, the worst error and the right value."""
    c = C()
    value = c.op(c.cast("float", c.code()), "*", c.number("0.006f", "VOLTS_PER_COUNT"))
    (found,) = residual_findings(case(value, of=channel(count="V")), "transfer-gain", "gain")
    assert found.found == "6 mV per count"
    assert found.expected == "4.883 mV per count"
    assert "VOLTS_PER_COUNT would be right as 0.00488281" in found.message


def test_other_residuals_are_left_alone() -> None:
    """A rule speaks of its own kind of residual only."""
    c = C()
    value = c.op(c.cast("float", c.code()), "*", c.number("0.006f", "VOLTS_PER_COUNT"))
    judged = case(value, of=channel(count="V"))
    assert not list(residual_findings(judged, "transfer-offset", "offset"))


def test_a_result_that_does_not_move_has_no_gain() -> None:
    """A level result is a gain of nothing."""
    c = C()
    value = c.op(c.code(), "*", "0")
    (found,) = residual_findings(case(value), "transfer-gain", "gain")
    assert found.found == "0 V per count"
