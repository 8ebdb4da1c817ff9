"""Two or three corrections that mend the line together.

A search enters; sets of corrections leave, each tried on the line itself.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import combinations

from bitweight.board.facts import Role
from bitweight.judge.knobs import Key, Knob
from bitweight.judge.meanings import nearest
from bitweight.judge.repairs import (
    Repair,
    fact_repair,
    is_likely,
    is_unusual,
    shift_repairs,
)
from bitweight.judge.sketches import RealLine, Values, same
from bitweight.judge.trials import Search, gain_repairs, is_settled, offset_repairs

_MOST_TRIES = 300
_FEW_DIGITS = 3


@dataclass(frozen=True, slots=True, kw_only=True)
class _Option:
    """A repair with what it does to the gain when it stands alone."""

    repair: Repair
    key: Key
    factor: Fraction


def _options(search: Search, values: Values) -> tuple[_Option, ...]:
    """Every correction to a board fact in its nearest scaling."""
    before = search.line(values)
    if before is None:
        return ()
    found = []
    for knob in search.knobs:
        for repair in dict.fromkeys(_plausible(search, knob)):
            line = search.line({**values, knob.key: repair.exact})
            if line is not None and line != before:
                factor = line.gain / before.gain
                found.append(_Option(repair=repair, key=knob.key, factor=factor))
    return tuple(found)


def _plausible(search: Search, knob: Knob) -> Iterator[Repair]:
    if knob.counts_bits:
        yield from shift_repairs(knob, search.layout)
        return
    for meaning in nearest(knob, search.terms):
        repair = fact_repair(knob, meaning, search.layout)
        if repair is not None and _is_plausible(search, knob, repair):
            yield replace(repair, settled=is_settled(search, knob))


def _is_plausible(search: Search, knob: Knob, repair: Repair) -> bool:
    """Whether name or value speak for a correction that only together with others mends the line.

    A constant that is a fact already, or whose name speaks of others, is left alone.
    """
    if is_likely(repair):
        return True
    if knob.hints or is_unusual(repair) or not _speaks_for_itself(knob):
        return False
    return not is_settled(search, knob)


def _speaks_for_itself(knob: Knob) -> bool:
    """Whether a value may be a fact of some board: a count, or few digits; no scale factor.

    Otherwise any two constants folded by hand would do for a wrong reference and a wrong count.
    """
    if knob.is_count:
        return True
    if knob.is_round or not knob.value:
        return False
    digits = str(abs(knob.value.numerator * 10**9 // knob.value.denominator)).strip("0")
    return len(digits) <= _FEW_DIGITS


def doubles(search: Search, starts: Sequence[Values]) -> Iterator[tuple[Repair, ...]]:
    """Two corrections at a time that make the line the wanted one, the likeliest first."""
    for values in starts[:2]:
        line = search.line(values)
        if line is None:
            continue
        yield from _gain_then_offset(search, values)
        yield from _combined(search, values, line, 2)
        yield from _option_then_root(search, values)


def _gain_then_offset(search: Search, values: Values) -> Iterator[tuple[Repair, ...]]:
    """One constant mends the gain, another the offset."""
    for knob in search.knobs:
        for repair in gain_repairs(search, knob, values):
            with_gain = {**values, knob.key: repair.exact}
            line = search.line(with_gain)
            if line is None or not search.target.has_gain(line):
                continue
            yield from _with_offset(search, with_gain, (repair,))


def _with_offset(
    search: Search, values: Values, before: tuple[Repair, ...]
) -> Iterator[tuple[Repair, ...]]:
    for knob in search.knobs:
        if knob.key in values:
            continue
        for repair in offset_repairs(search, knob, values):
            if search.fits({**values, knob.key: repair.exact}):
                yield (*before, repair)


def _option_then_root(search: Search, values: Values) -> Iterator[tuple[Repair, ...]]:
    """One constant takes its likely fact; another is solved for, in whatever scaling it is."""
    for option in _options(search, values):
        if not is_likely(option.repair):
            continue
        put = {**values, option.key: option.repair.exact}
        for knob in search.knobs:
            if knob.key in put or knob.is_round:
                continue
            for repair in gain_repairs(search, knob, put):
                if search.fits({**put, knob.key: repair.exact}):
                    yield (option.repair, repair)


def _combined(
    search: Search, values: Values, line: RealLine, size: int
) -> Iterator[tuple[Repair, ...]]:
    """Sets of corrections whose effects on the gain multiply to what is missing.

    Resistors of one divider do not multiply: their pairs are tried whatever they do alone.
    """
    missing = search.target.gain / line.gain
    tries = 0
    for chosen in combinations(_options(search, values), size):
        if len({option.key for option in chosen}) < size or tries >= _MOST_TRIES:
            continue
        factor = Fraction(1)
        for option in chosen:
            factor *= option.factor
        if not same(factor, missing) and not _interact(chosen):
            continue
        tries += 1
        repairs = tuple(option.repair for option in chosen)
        put = {option.key: option.repair.exact for option in chosen}
        if one_unit(repairs) and search.fits({**values, **put}):
            yield repairs


def one_unit(repairs: Sequence[Repair]) -> bool:
    """Whether all resistances are written in the same unit: a ratio of kohm and ohm is none."""
    exponents = {
        repair.meaning.exponent
        for repair in repairs
        if repair.meaning is not None and repair.meaning.term.role is Role.RESISTANCE
    }
    return len(exponents) <= 1


def _interact(chosen: Sequence[_Option]) -> bool:
    resistors = sum(
        option.repair.meaning is not None and option.repair.meaning.term.role is Role.RESISTANCE
        for option in chosen
    )
    return resistors >= 2


def triples(search: Search, starts: Sequence[Values]) -> Iterator[tuple[Repair, ...]]:
    """Three corrections at a time that make the line the wanted one."""
    for values in starts[:1]:
        line = search.line(values)
        if line is None:
            continue
        yield from _combined(search, values, line, 3)
        yield from _pairs_then_offset(search, values, line)


def _pairs_then_offset(
    search: Search, values: Values, line: RealLine
) -> Iterator[tuple[Repair, ...]]:
    """Two constants mend the gain, a third the offset."""
    missing = search.target.gain / line.gain
    for left, right in combinations(_options(search, values), 2):
        if left.key == right.key or not same(left.factor * right.factor, missing):
            continue
        put = {**values, left.key: left.repair.exact, right.key: right.repair.exact}
        yield from _with_offset(search, put, (left.repair, right.repair))
