"""Constants of a conversion and what their names say."""

from fractions import Fraction

import pytest

from bitweight.arithmetic.building import choose
from bitweight.board.facts import Role
from bitweight.judge.knobs import Knob, decades, is_power, knobs
from bitweight.judge.questions import StatedRole
from bitweight.places import Place
from operands import HOST, const, raw

PLACE = Place("level.c")


def one(name: str | None, text: str = "5000", comment: str = "") -> Knob:
    """The knob of a conversion's only constant."""
    (knob,) = knobs((raw() * const(text, name, comment=comment)).node)
    return knob


@pytest.mark.parametrize(
    ("name", "role", "exponent"),
    [
        ("VREF_MV", Role.REFERENCE, 3),
        ("kAvccVolts", Role.REFERENCE, 0),
        ("ADC_MAX", Role.FULL_SCALE, None),
        ("ADC_BITS", Role.RESOLUTION, None),
        ("VBAT_DIVIDER", Role.INVERSE_DIVIDER, None),
        ("R2_K", Role.RESISTANCE, -3),
        ("R_TOP", Role.RESISTANCE, None),
        ("R_BOT", Role.RESISTANCE, None),
        ("R_HI_OHM", Role.RESISTANCE, 0),
        ("SHUNT_MOHM", Role.SHUNT, 3),
        ("AMP_GAIN", Role.GAIN, None),
        ("T_OFFSET_MV", Role.OFFSET, 3),
        ("MV_PER_A", Role.SENSITIVITY, 3),
    ],
)
def test_names_speak_of_roles_and_units(name: str, role: Role, exponent: int | None) -> None:
    """Words of a name hint at what the constant is and in which unit."""
    knob = one(name)
    assert role in knob.hints
    assert knob.exponent == exponent


def test_a_comment_speaks_where_the_name_does_not() -> None:
    """The comment on the definition's line hints where the name says nothing."""
    assert Role.REFERENCE in one("K1", comment="supply of the bridge").hints
    assert Role.REFERENCE not in one("ADC_MAX", comment="of the supply").hints


def test_a_constant_used_twice_is_one() -> None:
    """A constant is one knob however often it is used."""
    volts = const("5000", "VREF_MV")
    found = knobs((raw() * volts / const("1024") + volts).node)
    assert [knob.leaf.text for knob in found] == ["5000", "1024"]


def test_bits_of_shifts_and_constants_at_the_reading_are_told_apart() -> None:
    """The count of a shift is known, and what touches the bare reading."""
    code = ((raw() >> const("6")) * const("5000")) >> const("10")
    by_text = {knob.leaf.text: knob for knob in knobs(code.node)}
    assert by_text["6"].counts_bits
    assert by_text["6"].on_reading
    assert by_text["10"].counts_bits
    assert not by_text["10"].on_reading
    assert not by_text["5000"].counts_bits


def test_stated_roles_bring_their_unit() -> None:
    """A role that the board file states comes with its unit."""
    stated = (StatedRole(name="K1", role="reference", unit=Fraction(1, 1000)),)
    (knob,) = knobs((raw() * const("5000", "K1")).node, stated)
    assert knob.stated == stated[0]
    assert knob.exponent == 3


@pytest.mark.parametrize(
    ("text", "exact", "holds"),
    [
        ("1023", 1024, False),
        ("1024", 1024, True),
        ("11", Fraction(111, 10), True),
        ("11", Fraction(117, 10), False),
        ("3.30", Fraction(33, 10), True),
        ("3.30", Fraction(331, 100), False),
        ("0.0909", Fraction(1, 11), True),
        ("52800", Fraction(105601, 2), True),
    ],
)
def test_a_constant_holds_what_its_digits_can_say(
    text: str, exact: Fraction | int, holds: bool
) -> None:
    """A constant is right within half of its last digit; large whole ones may be cut."""
    assert one("K", text).holds(Fraction(exact)) is holds


def test_powers_and_decades() -> None:
    """Powers of a base are told from other numbers, also below one; logarithms never overflow."""
    assert is_power(Fraction(1, 1000), 10)
    assert not is_power(Fraction(20), 10)
    assert not is_power(Fraction(0), 2)
    assert decades(Fraction(10) ** 400) == pytest.approx(400)


def test_only_what_makes_a_value_is_a_knob() -> None:
    """The shift and the label of a case that choose a branch are no constants to correct."""
    code = raw()
    chosen = choose(HOST, (code >> const("11")).node, (code * const("3")).node, code.node, PLACE)
    assert [knob.leaf.text for knob in knobs(chosen)] == ["3"]


@pytest.mark.parametrize(("mask", "masks"), [("0x3FF", True), ("0x3F0", False), ("1023", True)])
def test_masks_of_the_reading_are_known(mask: str, masks: bool) -> None:
    """A constant that keeps the lowest bits of the reading is a mask; another is not."""
    (knob,) = knobs((raw() & const(mask)).node)
    assert knob.masks is masks
