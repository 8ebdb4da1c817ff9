"""The value of a constant at which the line is the wanted one."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.judge.knobs import knobs
from bitweight.judge.roots import Target, gain_root, offset_root
from bitweight.judge.sketches import sketch
from operands import Operand, const, raw

CODES = list(range(1024))


def root_of(code: Operand, name: str, target: Target, *, offset: bool = False) -> Fraction | None:
    """The root for the constant of a name."""
    drawn = sketch(code.node, CODES, CODES)
    assert drawn is not None
    knob = next(knob for knob in knobs(code.node) if knob.leaf.name == name)
    return (offset_root if offset else gain_root)(drawn, target, knob, {})


def wanted(gain: Fraction | int, offset: Fraction | int = 0) -> Target:
    """A target with a tolerance of half a count."""
    return Target(gain=Fraction(gain), offset=Fraction(offset), tolerance=Fraction(1, 2))


X = const("12", "X")
FORMS = {
    "factor": (raw() * X, 5, 5),
    "divisor": (raw().cast("double") / X, Fraction(1, 5), 5),
    "sum": (raw() * (X + const("3")), 8, 5),
    "sum of resistors": (raw() * (const("100") + X) / X, 21, 5),
    "share": (raw() * X / (const("100") + X), Fraction(1, 21), 5),
    "square": (raw() * X * X, 25, 5),
}


@pytest.mark.parametrize(("code", "gain", "root"), FORMS.values(), ids=FORMS.keys())
def test_no_form_is_assumed(code: Operand, gain: Fraction, root: int) -> None:
    """Factors, divisors, resistor ratios and squares are solved alike."""
    found = root_of(code, "X", wanted(gain))
    assert found is not None
    assert abs(found - root) < Fraction(1, 10**6)


@given(st.integers(1, 10**6), st.integers(1, 10**6))
def test_a_product_is_solved_exactly(left: int, right: int) -> None:
    """The root of a product is exact at any magnitude."""
    assert root_of(raw() * X / const("1000"), "X", wanted(Fraction(left, right))) == Fraction(
        1000 * left, right
    )


def test_an_offset_is_solved() -> None:
    """The value that gives the wanted offset is found."""
    code = raw() * const("3") - X
    assert root_of(code, "X", wanted(3, -500), offset=True) == 500


def test_a_constant_without_influence_has_no_root() -> None:
    """A constant that does not move the gain cannot mend it."""
    assert root_of(raw() * const("3") - X, "X", wanted(4)) is None


def test_a_target_allows_its_tolerance_in_the_offset_only() -> None:
    """Offsets inside the tolerance fit, gains must be exact."""
    code = raw() * const("3") + const("1", "X")
    drawn = sketch(code.node, CODES, CODES)
    assert drawn is not None
    line = drawn.line({})
    assert wanted(3, Fraction(1, 2)).fits(line)
    assert not wanted(3, Fraction(1, 3)).fits(line)
    assert not wanted(Fraction(301, 100), 1).fits(line)
    assert wanted(2, 4).times(Fraction(1, 2)) == wanted(1, 2)
