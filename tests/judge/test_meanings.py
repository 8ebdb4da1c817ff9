"""What a constant may stand for."""

from dataclasses import replace
from fractions import Fraction

import pytest

from bitweight.board.facts import Role
from bitweight.judge.knobs import Knob, knobs
from bitweight.judge.meanings import composites, matches, nearest, resistances, snaps, terms
from operands import Board, const, fact, number, raw

FACTS = (
    *Board(bits=12, counts=(4096, 4095), volts="3.3 V").facts,
    number(Role.INVERSE_DIVIDER, "inverse divider", 11, "divider-ratio"),
    fact(Role.RESISTANCE, "resistance R1", "100 kohm", "divider-ratio"),
    fact(Role.SHUNT, "shunt R7", "5 mohm", "chain-constant"),
    fact(Role.SENSITIVITY, "sensitivity", "10 mV/degC", "chain-constant"),
    fact(Role.OFFSET, "offset", "0 V", "chain-constant"),
)
RESISTOR = terms((fact(Role.RESISTANCE, "resistance R2", "10 kohm", "divider-ratio"),), Fraction(0))
TERMS = terms(FACTS, Fraction(4096), (Fraction(4096), Fraction(4095)))


def knob(text: str, name: str | None = "K") -> Knob:
    """A constant."""
    (found,) = knobs((raw() * const(text, name)).node)
    return found


@pytest.mark.parametrize(
    ("wanted", "name", "unit"),
    [
        (Fraction(3300), "reference vref", "mV"),
        (Fraction(33, 10), "reference vref", "V"),
        (Fraction(33), "reference vref", "* 1e-1 V"),
        (Fraction(4096), "full-scale count", ""),
        (Fraction(65536), "full-scale count", ""),
        (Fraction(110), "inverse divider", ""),
        (Fraction(11 * 65536), "inverse divider", "/ 2**16"),
        (Fraction(100), "resistance R1", "kohm"),
        (Fraction(5), "shunt R7", "mohm"),
        (Fraction(10), "sensitivity", "mV/degC"),
    ],
)
def test_facts_are_matched_in_the_scalings_of_code(wanted: Fraction, name: str, unit: str) -> None:
    """A value is a fact in V, mV, tenths, fixed point, sums, as C code writes it."""
    found = [(one.term.name, one.unit) for one in matches(knob("7"), wanted, TERMS)]
    assert (name, unit) in found


def test_a_value_beside_a_fact_matches_nothing() -> None:
    """A match is exact: 3301 mV is no 3.3 V."""
    assert not list(matches(knob("7"), Fraction(3301), TERMS))


def test_zeros_and_other_accepted_counts_are_no_terms() -> None:
    """An offset of 0 says nothing, and only the count that is taken counts."""
    assert [term.value for term in TERMS if term.role is Role.FULL_SCALE] == [4096]
    assert not [term for term in TERMS if term.role is Role.OFFSET]


def test_the_nearest_scaling_is_proposed() -> None:
    """A constant is offered each fact in the scaling that comes closest."""
    found = {one.term.name: one.exact for one in nearest(knob("3000"), TERMS)}
    assert found["reference vref"] == 3300
    assert found["full-scale count"] == 4096


def test_a_unit_word_fixes_the_scaling() -> None:
    """A name that says mV is offered the reference in mV only."""
    found = {one.term.name: one.exact for one in nearest(knob("330", "VREF_MV"), TERMS)}
    assert found["reference vref"] == 3300


def test_rounded_constants_are_their_facts() -> None:
    """3300 is the reference; a coarse 3 is so in everyday scalings only."""
    assert "reference vref" in [one.term.name for one in snaps(knob("3300"), TERMS)]
    assert "reference vref" in [one.term.name for one in snaps(knob("3"), TERMS)]
    assert "reference vref" not in [one.term.name for one in snaps(knob("4"), TERMS)]


@pytest.mark.parametrize(
    ("text", "exact"),
    [
        ("0.000806", Fraction(33, 10) / 4096),
        ("0.8057", Fraction(3300, 4096)),
        ("8.862", Fraction(36300, 4096)),
        ("1241", Fraction(4096, 33) * 10),
        ("52", Fraction(33, 10) / 4096 * 65536),
    ],
)
def test_products_of_facts_are_recognised(text: str, exact: Fraction) -> None:
    """A gain per count folded by hand is known with all its digits."""
    assert exact in composites(knob(text), TERMS)


def test_coarse_constants_are_no_products() -> None:
    """A 5 is within ten per cent of too many products to say anything."""
    assert composites(knob("5"), TERMS) == ()


@pytest.mark.parametrize(
    ("text", "exact"), [("12", 10), ("12000", 10000), ("0.012", Fraction(1, 100)), ("120", None)]
)
def test_resistances_are_written_in_everyday_units(text: str, exact: Fraction | None) -> None:
    """A resistance of 10 kohm is 10000, 10 or 0.01, but never 100."""
    found = [one.exact for one in nearest(knob(text), RESISTOR)]
    assert found == ([] if exact is None else [exact])


def test_a_lone_constant_is_no_resistance() -> None:
    """Without a name or a neighbour that speaks for it, a number is no resistor."""
    assert not list(matches(replace(knob("8"), lone=True), Fraction(10), RESISTOR))
    assert list(matches(knob("8"), Fraction(10), RESISTOR))
    assert resistances(knob("10"), RESISTOR) == {"resistance R2"}
    assert not resistances(knob("100"), RESISTOR)
