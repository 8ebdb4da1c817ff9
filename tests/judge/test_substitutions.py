"""Conversions with other constants in their places."""

from fractions import Fraction

import numpy as np

from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.expressions import Code, Literal, walk
from bitweight.judge.knobs import knobs, leaf_key
from bitweight.judge.substitutions import corrected, grouped, replaced, steadied
from bitweight.places import Place
from operands import HOST, Operand, const, ctype, raw


def value(code: Operand | object, word: int = 100) -> float:
    """The C value at one word."""
    node = code.node if isinstance(code, Operand) else code
    return float(evaluate(node, lambda _: np.array([word])).values[0])  # type: ignore[arg-type]


def test_a_constant_is_replaced_at_every_use() -> None:
    """A corrected constant stands wherever the old one stood."""
    three = const("3", "K")
    code = raw() * three + three
    leaf = knobs(code.node)[0].leaf
    changed = replaced(code.node, {leaf_key(leaf): Literal(value=5, type=ctype("int"))})
    assert value(changed) == 505
    assert value(code) == 303


def test_computed_counts_become_one_constant() -> None:
    """`(1 << 10) - 1` becomes the constant 1023 that knows what it is made of."""
    count = (const("1", line=7) << const("10", "ADC_BITS")) - const("1", line=8)
    code = raw() * const("5000UL") / count
    changed, inside = grouped(code.node, HOST)
    assert value(changed) == value(code)
    (group,) = [knob for knob in knobs(changed, (), inside) if knob.inside]
    assert group.value == 1023
    assert [leaf.text for leaf in group.inside] == ["1", "10", "1"]


def test_shifts_of_the_reading_are_no_counts() -> None:
    """A shift that moves the reading stays as it is."""
    code = (raw() << const("2")) + const("1")
    changed, inside = grouped(code.node, HOST)
    assert changed is code.node
    assert not inside


def test_other_channels_readings_become_constants() -> None:
    """A second channel's reading stands at its steady word."""
    other = Code(
        channels=("supply",), text="adc_read(1)", type=ctype("uint16_t"), place=Place("a.c", 1)
    )
    code = raw() * Operand(other)
    changed = steadied(code.node, "tank", {"supply": 7})
    assert value(changed) == 700
    assert len([node for node in walk(changed) if isinstance(node, Code)]) == 1
    assert steadied(raw().node, "tank", {"supply": 7}) is not None


def test_corrected_constants_keep_their_type() -> None:
    """A corrected constant is rounded to its type; what its type cannot hold gives nothing."""
    code = raw() * const("3", "K")
    key = leaf_key(knobs(code.node)[0].leaf)
    changed = corrected(code.node, {key: Fraction(51, 10)})
    assert changed is not None
    assert value(changed) == 500
    assert corrected(code.node, {key: Fraction(1 << 40)}) is None
