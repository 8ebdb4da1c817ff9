"""What a constant may stand for: every board fact in every scaling that C code writes it in.

Board facts and a constant enter; `Meaning`s leave: a fact, the exact value that the constant then
has, and the unit it is written in.
"""

import math
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from enum import Enum
from fractions import Fraction
from itertools import combinations

from bitweight.board.facts import BoardFact, Role
from bitweight.judge.knobs import Knob, decades
from bitweight.units import coherent, takes_prefix


class Scaling(Enum):
    """In which multiples a kind of fact is written."""

    COUNT = "counts: sums of 2**n results"
    PLAIN = "as it is"
    RATIO = "powers of ten, and fixed point with a power of two"
    QUANTITY = "powers of ten"


@dataclass(frozen=True, slots=True, kw_only=True)
class Term:
    """A positive number of the board, in the coherent unit.

    `unit` names the coherent unit; `prefixed` says that it takes prefixes. One coherent unit is
    10**`shown_exponent` of `shown_unit`, the one in the board file (None: no power of ten).
    """

    role: Role
    rule: str
    name: str
    value: Fraction
    scaling: Scaling
    unit: str = ""
    shown_unit: str = ""
    shown_exponent: int | None = None
    prefixed: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Meaning:
    """A term as a constant writes it: `exact` = term value * 10**exponent * 2**doublings."""

    term: Term
    exact: Fraction
    exponent: int
    doublings: int

    @property
    def is_natural(self) -> bool:
        """Whether the scaling is an everyday one: an SI prefix, the number as it is, one result."""
        if self.term.scaling is Scaling.QUANTITY:
            own = self.term.shown_exponent
            return self.exponent % 3 == 0 or (own is not None and (self.exponent - own) % 3 == 0)
        return not self.exponent and not self.doublings

    @property
    def unit(self) -> str:
        """The unit of the constant: "mV" for volts times 1000, "" for a plain number."""
        term = self.term
        if self.doublings and term.scaling is not Scaling.COUNT:
            return f"/ 2**{self.doublings}"
        if term.scaling is not Scaling.QUANTITY:
            return ""
        if self.exponent == term.shown_exponent:
            return term.shown_unit
        if term.prefixed and self.exponent in _PREFIXES:
            return _PREFIXES[self.exponent] + term.unit
        return f"* 1e{(term.shown_exponent or 0) - self.exponent} {term.shown_unit}"

    @property
    def is_everyday(self) -> bool:
        """Whether `unit` is a unit with an SI prefix, or the number is written as it is."""
        return not self.unit.startswith(("*", "/ 2**"))

    def in_words(self, value: Fraction) -> str:
        """What a constant of this scaling stands for: "2.5 mV/kPa" for 250, "10 * 2**8"."""
        term = self.term
        if self.doublings:
            return f"{_short(value / 2**self.doublings)} * 2**{self.doublings}"
        shown = value * Fraction(10) ** ((term.shown_exponent or 0) - self.exponent)
        return f"{_short(shown)} {term.shown_unit}".strip()


def _short(value: Fraction) -> str:
    return f"{float(value):.6g}"


_PREFIXES = {-6: "M", -3: "k", 0: "", 3: "m", 6: "u", 9: "n"}
_DECIMALS = range(-6, 10)
_RESISTIVE_EXPONENTS = (0, -3, -6)
_RATIO_DECIMALS = range(7)
_FIXED_POINTS = range(4, 25)
_SUMS = range(11)
_FIXED_POINT_COMMON = (0, 8, 10, 12, 14, 15, 16, 20)
_FINEST_COMPOSITE = Fraction(1, 50)
"""A constant whose rounding is coarser than 2 % fits some product of facts by chance."""
_FAR = 0.7
_FAR_WITH_UNIT = 2.0
"""Decades that a constant may be from its fact, more where its name says the unit."""
_CLOSE = 1e-9
_DECADES_OF_TWO = math.log10(2)

_SCALINGS = {
    Role.FULL_SCALE: Scaling.COUNT,
    Role.RESOLUTION: Scaling.PLAIN,
    Role.ZERO_CODE: Scaling.PLAIN,
    Role.CODE: Scaling.PLAIN,
    Role.DIVIDER: Scaling.RATIO,
    Role.INVERSE_DIVIDER: Scaling.RATIO,
    Role.GAIN: Scaling.RATIO,
}
"""The scaling of plain numbers by role; what has a unit is written in powers of ten."""
_FOLDED = (Role.STEP, Role.SPAN)
"""Facts that are products of others: a constant that is one was computed by hand."""


def terms(
    facts: Iterable[BoardFact], count: Fraction, accepted: Sequence[Fraction] = ()
) -> tuple[Term, ...]:
    """The numbers of the board without signs and zeros.

    Of the accepted full-scale counts only the one that is taken, `count`, is among them.
    """
    found: dict[Term, None] = {}
    for fact in facts:
        value = abs(fact.value - fact.unit.zero)
        other_count = fact.role is Role.FULL_SCALE and fact.value != count
        if value and not (other_count and fact.value in accepted):
            found[_term(fact, value)] = None
    return tuple(found)


def _term(fact: BoardFact, value: Fraction) -> Term:
    unit = coherent(fact.unit.dimension)
    prefixed = takes_prefix(unit)
    plain = not fact.unit.dimension
    return Term(
        role=fact.role,
        rule=fact.rule,
        name=fact.name,
        value=value,
        scaling=_SCALINGS.get(fact.role, Scaling.QUANTITY) if plain else Scaling.QUANTITY,
        unit=unit.text,
        shown_unit=fact.unit.text,
        shown_exponent=_power(1 / fact.unit.scale),
        prefixed=prefixed,
    )


def _power(value: Fraction) -> int | None:
    """The exponent of a power of ten, None for any other number."""
    exponent = round(decades(value))
    return exponent if Fraction(10) ** exponent == value else None


def matches(
    knob: Knob, wanted: Fraction, all_terms: Sequence[Term], closeness: float = _CLOSE
) -> Iterator[Meaning]:
    """Every meaning whose exact value is `wanted`, within a relative closeness."""
    if wanted <= 0:
        return
    for term in _allowed(knob, all_terms):
        ratio = wanted / term.value
        for exponent, doublings in _powers(term.scaling, ratio):
            if term.role is Role.RESISTANCE and exponent not in _RESISTIVE_EXPONENTS:
                continue
            exact = term.value * Fraction(10) ** exponent * Fraction(2) ** doublings
            if abs(wanted / exact - 1) <= closeness:
                yield Meaning(term=term, exact=exact, exponent=exponent, doublings=doublings)


def nearest(knob: Knob, all_terms: Sequence[Term]) -> Iterator[Meaning]:
    """For each term the scaling nearest to the constant, if it is not far off."""
    if knob.value <= 0:
        return
    farthest = _FAR if knob.exponent is None else _FAR_WITH_UNIT
    for term in _allowed(knob, all_terms):
        ratio = knob.value / term.value
        powers = _nearest_powers(knob, term, ratio)
        for exponent, doublings in powers:
            exact = term.value * Fraction(10) ** exponent * Fraction(2) ** doublings
            far = _FAR_WITH_UNIT if _may_be_far(knob, term) else farthest
            if abs(decades(knob.value / exact)) < far:
                yield Meaning(term=term, exact=exact, exponent=exponent, doublings=doublings)


def _may_be_far(knob: Knob, term: Term) -> bool:
    """Whether a form or a name speaks for a term however far the constant is: R_TOP for 100k."""
    if term.scaling is Scaling.COUNT:
        return knob.is_count
    return term.role is Role.RESISTANCE and Role.RESISTANCE in knob.hints


def snaps(knob: Knob, all_terms: Sequence[Term]) -> Iterator[Meaning]:
    """Every meaning that the constant says as well as its digits can."""
    return (
        meaning
        for meaning in nearest(knob, all_terms)
        if knob.holds(meaning.exact) and (meaning.is_natural or not knob.is_coarse)
    )


def _allowed(knob: Knob, all_terms: Sequence[Term]) -> Iterator[Term]:
    """The terms that may be in a constant of this form, all of one stated role if there is one."""
    for term in all_terms:
        if knob.stated is not None and not _is_stated(knob, term):
            continue
        if (term.role is Role.RESOLUTION) != knob.counts_bits:
            continue
        if term.role in _FOLDED or (knob.inside and term.role is not Role.FULL_SCALE):
            continue
        if knob.lone and term.role is Role.RESISTANCE:
            continue
        yield term


def _is_stated(knob: Knob, term: Term) -> bool:
    stated = knob.stated
    if stated is None:
        return True
    named = (
        stated.subject is None
        or stated.subject in term.name.split()
        or term.role.value
        in (
            "divider",
            "inverse divider",
        )
    )
    role = "offset" if term.role in (Role.ZERO_CODE, Role.AT) else term.role.value
    return named and stated.role in (role, term.role.value)


def _powers(scaling: Scaling, ratio: Fraction) -> Iterator[tuple[int, int]]:
    """Exponents of ten and of two that make a term `ratio` times as large."""
    tens, twos = round(decades(ratio)), round(decades(ratio) / _DECADES_OF_TWO)
    match scaling:
        case Scaling.PLAIN:
            yield 0, 0
        case Scaling.COUNT:
            if twos in _SUMS:
                yield 0, twos
        case Scaling.QUANTITY:
            if tens in _DECIMALS:
                yield tens, 0
        case Scaling.RATIO:
            if tens in _RATIO_DECIMALS:
                yield tens, 0
            if twos in _FIXED_POINTS:
                yield 0, twos


def _nearest_powers(knob: Knob, term: Term, ratio: Fraction) -> Iterator[tuple[int, int]]:
    if knob.exponent is not None and term.scaling is Scaling.QUANTITY:
        yield knob.exponent, 0
        return
    if term.role is Role.RESISTANCE:
        yield _nearest_everyday(ratio), 0
        return
    if term.scaling is Scaling.COUNT and ratio < 2:
        yield 0, 0
    else:
        yield from _powers(term.scaling, ratio)
        if term.scaling is Scaling.COUNT and knob.is_count:
            yield 0, 0


def _nearest_everyday(ratio: Fraction) -> int:
    """The exponent of ten nearest to a ratio that makes ohm, kohm or Mohm of a resistance."""
    return min(_RESISTIVE_EXPONENTS, key=lambda exponent: abs(decades(ratio) - exponent))


def resistances(knob: Knob, all_terms: Sequence[Term]) -> frozenset[str]:
    """The names of the resistances that the constant says, as its digits can, in ohm to Mohm."""
    return frozenset(
        term.name
        for term in all_terms
        if term.role is Role.RESISTANCE
        for exponent in _RESISTIVE_EXPONENTS
        if not knob.counts_bits and knob.holds(term.value * Fraction(10) ** exponent)
        if not knob.is_coarse or knob.value == term.value * Fraction(10) ** exponent
    )


def composites(knob: Knob, all_terms: Sequence[Term]) -> tuple[Fraction, ...]:
    """Products of facts (a gain per count and the like) that the constant may be, rounded by hand.

    Only products of two facts or more, in any decimal scaling and the common fixed points.
    """
    tolerance = 1 if knob.whole else knob.half
    if knob.value <= 0 or knob.inside or tolerance > knob.value * _FINEST_COMPOSITE:
        return ()
    found: set[Fraction] = set()
    for product in _products(all_terms):
        for twos in _FIXED_POINT_COMMON:
            scaled = product * (1 << twos)
            tens = round(decades(knob.value / scaled))
            exact = scaled * Fraction(10) ** tens
            if knob.rounds(exact) and exact != knob.value:
                found.add(exact)
    return tuple(sorted(found, key=lambda exact: (abs(exact - knob.value), exact)))


def _products(all_terms: Sequence[Term]) -> tuple[Fraction, ...]:
    """Steps and spans of the line, and the products of gain factors, each with its reciprocal."""
    found: dict[Fraction, None] = {}
    for term in all_terms:
        if term.role in _FOLDED:
            found |= {term.value: None, 1 / term.value: None}
    factors = [
        1 / term.value if term.role in (Role.FULL_SCALE, Role.GAIN, Role.SHUNT) else term.value
        for term in all_terms
        if term.role in _FACTORS
    ][:_MOST_FACTORS]
    for size in range(2, len(factors) + 1):
        for chosen in combinations(factors, size):
            product = math.prod(chosen, start=Fraction(1))
            found |= {product: None, 1 / product: None}
    return tuple(found)


_FACTORS = (Role.REFERENCE, Role.FULL_SCALE, Role.INVERSE_DIVIDER, Role.GAIN, Role.SHUNT)
_MOST_FACTORS = 6
"""Facts multiplied with each other: reference, count and four stages."""
