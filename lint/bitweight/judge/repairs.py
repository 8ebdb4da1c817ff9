"""One correction of one constant: which meaning it takes, and which rule reports it."""

from collections.abc import Iterable
from dataclasses import dataclass, replace
from fractions import Fraction

from bitweight.board.facts import Role
from bitweight.judge.knobs import Knob, decades, is_power
from bitweight.judge.meanings import Meaning, Scaling, Term

RULE_ORDER = (
    "justification",
    "resolution",
    "full-scale",
    "reference-value",
    "divider-ratio",
    "chain-constant",
    "unit-prefix",
)
"""Which explanation is taken first among equally small ones."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Repair:
    """A constant takes the value `exact`. `knob` is None for a correction that no constant carries.

    `meaning` is the board fact it then is, None for a power of ten. `settled` says that the
    constant is another fact of the board already, as far as name and value tell.
    """

    rule: str
    knob: Knob | None = None
    meaning: Meaning | None = None
    exact: Fraction = Fraction(0)
    settled: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Layout:
    """How a code stands in its word, as far as rules depend on it.

    `unit_stated` is False where the unit of the result is inferred: no power of ten is a fault
    then. `summed` says that the conversion adds readings, or is given a sum of them.
    """

    bits: int
    signed: bool
    shift: int
    word_bits: int
    word_stated: bool
    unit_stated: bool
    summed: bool = False

    @property
    def widths(self) -> tuple[int, ...]:
        """Bits that a code of this converter may be called: its own, and those without the sign."""
        return (self.bits, self.bits - 1) if self.signed else (self.bits,)


def fact_repair(knob: Knob, meaning: Meaning, layout: Layout) -> Repair | None:
    """The constant takes the value of a fact; None where that says nothing against the constant."""
    if knob.holds(meaning.exact) or _contradicts_name(knob, meaning):
        return None
    if _is_scaled_one(knob, meaning):
        return None
    if meaning.term.scaling is Scaling.COUNT and not _may_be_sum(knob, meaning, layout):
        return None
    if _holds_already(knob, meaning):
        names_unit = knob.exponent is not None and knob.exponent == meaning.exponent
        if not (names_unit and layout.unit_stated):
            return None
        return Repair(rule="unit-prefix", knob=knob, meaning=meaning, exact=meaning.exact)
    rule = meaning.term.rule
    if meaning.term.role is Role.FULL_SCALE:
        rule = _count_rule(knob.value, meaning, layout)
    return Repair(rule=rule, knob=knob, meaning=meaning, exact=meaning.exact)


def power_repair(knob: Knob, exact: Fraction, layout: Layout) -> Repair | None:
    """A bare power of ten takes another one."""
    speaks_of_part = knob.named and (knob.physical or knob.hints - {Role.SENSITIVITY})
    if not layout.unit_stated or speaks_of_part or not is_power(knob.value, 10):
        return None
    if not is_power(exact, 10):
        return None
    if knob.value == exact or (knob.whole and exact.denominator != 1):
        return None
    return Repair(rule="unit-prefix", knob=knob, exact=exact)


def shift_repairs(knob: Knob, layout: Layout) -> tuple[Repair, ...]:
    """What the number of bits in a shift may have to be: where the code stands, or its width."""
    repairs = [
        Repair(rule="resolution", knob=knob, exact=Fraction(width)) for width in layout.widths
    ]
    if knob.on_reading:
        repairs.insert(0, Repair(rule="justification", knob=knob, exact=Fraction(layout.shift)))
    return tuple(repair for repair in repairs if repair.exact != knob.value)


def mask_repair(knob: Knob, layout: Layout) -> Repair | None:
    """A mask that drops bits of the code keeps them all."""
    exact = Fraction((1 << layout.bits) - 1)
    if not knob.masks or layout.shift or knob.value >= exact:
        return None
    term = Term(
        role=Role.RESOLUTION,
        rule="resolution",
        name=f"mask of {layout.bits} bits",
        value=exact,
        scaling=Scaling.PLAIN,
    )
    meaning = Meaning(term=term, exact=exact, exponent=0, doublings=0)
    return Repair(rule="resolution", knob=knob, meaning=meaning, exact=exact)


def divisor_repair(knob: Knob, exact: Fraction, layout: Layout) -> Repair | None:
    """A power of two that divides the bare reading takes the code to where it stands."""
    if not knob.on_reading or not is_power(knob.value, 2) or exact != 1 << layout.shift:
        return None
    return Repair(rule="justification", knob=knob, exact=exact)


def _contradicts_name(knob: Knob, meaning: Meaning) -> bool:
    """Whether the name says another unit, or nothing that speaks for an unusual scaling."""
    if knob.stated is not None:
        return False
    scaling, hinted = meaning.term.scaling, meaning.term.role in knob.hints
    if knob.physical and scaling is not Scaling.QUANTITY:
        return True
    if scaling is Scaling.QUANTITY and knob.exponent is not None:
        return knob.exponent != meaning.exponent
    if scaling in (Scaling.COUNT, Scaling.PLAIN) and knob.exponent is not None:
        return not hinted
    if meaning.is_natural or hinted:
        return False
    return bool(knob.hints) or (knob.named and scaling is Scaling.QUANTITY)


def _is_scaled_one(knob: Knob, meaning: Meaning) -> bool:
    """Whether a nameless constant would be a bare power of ten: a ratio of 1 times 10, or 0.1."""
    if meaning.is_natural or meaning.term.role in knob.hints or knob.stated is not None:
        return False
    return meaning.term.scaling is Scaling.RATIO and is_power(meaning.exact, 10)


def _may_be_sum(knob: Knob, meaning: Meaning, layout: Layout) -> bool:
    """Whether a count may stand for 2**n results: of a sum, of a word, or as good as written."""
    if not meaning.doublings or layout.summed or meaning.doublings == layout.shift:
        return True
    return abs(knob.value - meaning.exact) <= 1


def _holds_already(knob: Knob, meaning: Meaning) -> bool:
    """Whether the constant is the fact already, in another everyday scaling: V, not mV."""
    if meaning.term.scaling not in (Scaling.QUANTITY, Scaling.RATIO) or knob.value <= 0:
        return False
    exponent = round(decades(knob.value / meaning.term.value))
    held = replace(
        meaning,
        exact=meaning.term.value * Fraction(10) ** exponent,
        exponent=exponent,
        doublings=0,
    )
    return held.is_natural and knob.holds(held.exact)


def _count_rule(value: Fraction, meaning: Meaning, layout: Layout) -> str:
    """Full scale, a count of other bits, or one for a code that stands elsewhere in its word."""
    if layout.shift and meaning.doublings == layout.shift:
        lacking = meaning.exact / (1 << layout.shift)
        if abs(value - lacking) <= 1:
            return "justification"
    bits = _count_bits(value, layout)
    if bits is None or bits in layout.widths:
        return "full-scale"
    whole_word = not layout.shift and layout.word_stated and bits == layout.word_bits
    return "justification" if whole_word and is_power(value, 2) else "resolution"


def _count_bits(value: Fraction, layout: Layout) -> int | None:
    """M where the value is 2**M or 2**M - 1 of a usual converter, else None."""
    if value.denominator != 1 or not 16 <= value <= 1 << 32:
        return None
    for count in (value, value + 1):
        if is_power(count, 2):
            return count.numerator.bit_length() - 1
    return None


Rank = tuple[object, ...]


def rank(repairs: Iterable[Repair]) -> Rank:
    """Sorts explanations of one size: the better one is smaller."""
    chosen = tuple(repairs)
    return (
        sum(is_doubtful(repair) for repair in chosen),
        sum(is_unusual(repair) for repair in chosen),
        sorted(RULE_ORDER.index(repair.rule) for repair in chosen),
        sum(repair.knob is None for repair in chosen),
        sum(repair.settled for repair in chosen),
        sum(not is_likely(repair) for repair in chosen),
        round(sum(_distance(repair) for repair in chosen), 9),
        sum(repair.knob is not None and not repair.knob.named for repair in chosen),
        [str(repair.knob.leaf.place) if repair.knob else "" for repair in chosen],
    )


def is_doubtful(repair: Repair) -> bool:
    """Whether the constant's name, or its being a bare scale factor, speaks against the meaning."""
    knob, meaning = repair.knob, repair.meaning
    if knob is None or meaning is None or knob.stated is not None:
        return False
    if knob.hints and meaning.term.role not in knob.hints:
        return True
    counts = meaning.term.role in (Role.FULL_SCALE, Role.ZERO_CODE)
    return knob.is_round and not (counts and is_power(knob.value, 2))


def is_unusual(repair: Repair) -> bool:
    """Whether the constant would be in a scaling that is no everyday one."""
    if repair.meaning is None or repair.rule == "justification":
        return False
    return not repair.meaning.is_natural


def is_likely(repair: Repair) -> bool:
    """Whether the board file or the constant's name speaks for the meaning."""
    knob, meaning = repair.knob, repair.meaning
    if knob is None or meaning is None:
        return False
    return knob.stated is not None or meaning.term.role in knob.hints


def _distance(repair: Repair) -> float:
    """How far the constant is from its meaning, in decades."""
    knob = repair.knob
    if knob is None or knob.value <= 0 or repair.exact <= 0:
        return 1.0
    return abs(decades(repair.exact / knob.value))
