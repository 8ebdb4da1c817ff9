"""Laws of C arithmetic that hold for every expression."""

import math
import random
from fractions import Fraction

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from bitweight.arithmetic.building import Folder
from bitweight.arithmetic.evaluation import Curve, evaluate
from bitweight.arithmetic.expressions import Code, walk
from bitweight.arithmetic.literals import half_digit, literal
from bitweight.arithmetic.reals import real_form
from bitweight.arithmetic.scalars import nearest
from bitweight.arithmetic.types import MODELS
from bitweight.arithmetic.values import FaultKind
from properties.strategies import (
    BOUNDARY_WORDS,
    Sample,
    binary,
    code,
    constant,
    expressions,
    sample,
)

HOST, AVR = MODELS["host"], MODELS["avr"]
WORDS = np.array(BOUNDARY_WORDS, dtype=np.int64)
NO_VALUE = (FaultKind.DIVISION, FaultKind.SHIFT, FaultKind.CONVERSION)
FEW = settings(deadline=None, max_examples=60)


def curve_of(made: Sample) -> Curve:
    """The values of a sample over the boundary words."""
    return evaluate(made.expression, lambda _: WORDS)


class TestEvaluation:
    """Values over many codes."""

    @FEW
    @given(expressions(AVR))
    def test_every_value_belongs_to_its_type(self, made: tuple[Sample, Code]) -> None:
        """No value lies outside the type of its expression."""
        curve = curve_of(made[0])
        if curve.type.is_integer:
            assert curve.type.low <= int(curve.values.min())
            assert int(curve.values.max()) <= curve.type.high

    @FEW
    @given(expressions(AVR), st.integers(0, len(BOUNDARY_WORDS) - 1))
    def test_a_code_alone_is_what_it_is_among_others(
        self, made: tuple[Sample, Code], index: int
    ) -> None:
        """The value of a code, and its faults, do not depend on the other codes."""
        whole = curve_of(made[0])
        alone = evaluate(made[0].expression, lambda _: WORDS[index : index + 1])
        values = np.broadcast_to(whole.values, WORDS.shape)
        np.testing.assert_array_equal(alone.values[0], values[index])
        among = {
            (id(f.node), f.kind)
            for f in whole.faults
            if np.broadcast_to(f.mask, WORDS.shape)[index]
        }
        assert {(id(fault.node), fault.kind) for fault in alone.faults} == among


class TestFolding:
    """Constants and curves are the same arithmetic."""

    def test_constants_equal_curves_of_one_code(self) -> None:
        """The quick path for constants gives what the path for arrays gives, on two targets."""
        rng = random.Random(7)
        for model in (HOST, AVR):
            known = 0
            for _ in range(1500):
                made = sample(rng.choice, model, code(model.long_long), rng.choice((1, 2, 3)))
                if any(isinstance(node, Code) for node in walk(made.expression)):
                    continue
                curve = evaluate(made.expression, lambda _: WORDS)
                value = Folder(model).constant(made.expression)
                if value is None:
                    assert curve.faulty(*NO_VALUE).any(), made.text
                elif not curve.faulty(*NO_VALUE).any():
                    known += 1
                    same = curve.values[0] == value or math.isnan(value)
                    assert same, (made.text, value, curve.values)
            assert known > 150


class TestMeaning:
    """Real values."""

    @FEW
    @given(expressions(HOST))
    def test_the_quick_form_has_a_value_where_the_exact_one_has(
        self, made: tuple[Sample, Code]
    ) -> None:
        """Neither form fails on any expression, and a missing value is missing in both."""
        form = real_form(made[0].expression)
        quick = np.broadcast_to(form.floats(lambda _: np.arange(5)), 5)
        for word, value in enumerate(quick.tolist()):
            if form.exact(word) is None:
                assert math.isnan(value)

    @FEW
    @given(st.integers(0, 2**63), st.integers(0, 2**63), st.sampled_from(["+", "-", "*"]))
    def test_sums_and_products_mean_themselves(self, first: int, second: int, by: str) -> None:
        """Sums, differences and products of whole numbers are exact, however large."""
        left, right = constant(f"{first}", HOST), constant(f"{second}", HOST)
        exact = {"+": first + second, "-": first - second, "*": first * second}[by]
        assert real_form(binary(HOST, by, left, right).expression).exact(0) == exact


class TestLiterals:
    """Spelled numbers."""

    @FEW
    @given(st.decimals(0, 10**6, places=4, allow_nan=False))
    def test_a_decimal_is_read_as_python_reads_it(self, number: object) -> None:
        """A double constant is the binary64 number nearest to its text."""
        assert literal(f"{number}", HOST)[0] == float(f"{number}")
        assert half_digit(f"{number}") is not None

    @FEW
    @given(st.floats(width=32, allow_nan=False, allow_infinity=False))
    def test_binary32_numbers_are_their_own_nearest(self, number: float) -> None:
        """Rounding to binary32 leaves a binary32 number alone."""
        assert nearest(Fraction(number), 32) == number

    @FEW
    @given(st.floats(2**-100, 2**100, width=32), st.floats(0.0, 1.0))
    def test_rounding_takes_the_nearer_neighbour(self, low: float, share: float) -> None:
        """A number between two binary32 neighbours becomes the one that is not further away."""
        high = float(np.nextafter(np.float32(low), np.float32(math.inf)))
        number = Fraction(low) + Fraction(share) * (Fraction(high) - Fraction(low))
        rounded = nearest(number, 32)
        assert rounded in (low, high)
        other = high if rounded == low else low
        assert abs(Fraction(rounded) - number) <= abs(Fraction(other) - number)
