"""The smallest set of constants whose correction makes a conversion's line the board's.

A sketch of the expression, its constants, the board's numbers and the wanted line enter; the best
`Solution` leaves.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import combinations, islice, product

from bitweight.board.facts import Role
from bitweight.judge.knobs import Key, Knob, is_power
from bitweight.judge.meanings import Term, composites, matches, nearest, snaps
from bitweight.judge.repairs import (
    Layout,
    Repair,
    divisor_repair,
    fact_repair,
    is_likely,
    power_repair,
    rank,
    shift_repairs,
)
from bitweight.judge.roots import Target, gain_root, offset_root
from bitweight.judge.sketches import RealLine, Sketch, Values, same


@dataclass(frozen=True, slots=True, kw_only=True)
class Solution:
    """Corrections that mend the line together; none where it is right but for rounded constants."""

    repairs: tuple[Repair, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Search:
    """All that one search looks at."""

    sketch: Sketch
    knobs: tuple[Knob, ...]
    terms: tuple[Term, ...]
    target: Target
    layout: Layout

    def line(self, values: Values) -> RealLine | None:
        """The line with these constants."""
        return self.sketch.line(values)

    def fits(self, values: Values) -> bool:
        """Whether these constants give the wanted line."""
        return self.target.fits(self.line(values))


_MOST_BASELINES = 24
_MOST_ROUNDED = 3
_MOST_OPTIONS = 3
_MOST_TRIES = 300
_FEW_DIGITS = 3
_FINE_FOLD = Fraction(1, 40)
_NEAR = 0.2
_OFFSETS = (Role.OFFSET, Role.ZERO_CODE, Role.AT)


def smallest(search: Search, most: int) -> Solution | None:
    """The solution of fewest repairs, at most `most`; None where there is none.

    A rounded constant is believed only after single corrections have failed: a coarse one (5.0)
    would excuse much else.
    """
    nothing = Solution()
    baselines = _baselines(search)
    if any(search.fits(values) for values in baselines):
        return _exact_offset(search, most) or nothing
    if most >= 1 and (found := _best(_singles(search, baselines))):
        return found
    if _is_folded(search, baselines, _FINE_FOLD):
        return nothing
    if most >= 2 and (found := _best(_doubles(search, baselines))):
        return found
    if _is_folded(search, baselines, Fraction(1)) or _roundings_explain(search):
        return nothing
    return _best(_triples(search, baselines)) if most >= 3 else None


def _best(solutions: Iterator[tuple[Repair, ...]]) -> Solution | None:
    ranked = sorted((rank(repairs), index, repairs) for index, repairs in enumerate(solutions))
    return Solution(repairs=ranked[0][2]) if ranked else None


def _baselines(search: Search) -> tuple[Values, ...]:
    """The constants as they are, then with rounded ones taken as the exact facts they stand for."""
    if search.fits({}):
        return ({},)
    options = {knob.key: _exact_values(search, knob) for knob in search.knobs}
    rounded = [key for key, values in options.items() if values]
    chosen = (
        dict(zip(keys, values, strict=True))
        for size in range(_MOST_ROUNDED + 1)
        for keys in combinations(rounded, size)
        for values in product(*(options[key] for key in keys))
    )
    return tuple(islice(chosen, _MOST_BASELINES))


def _exact_values(search: Search, knob: Knob) -> tuple[Fraction, ...]:
    """What a constant that is a rounded number may be exactly, board facts first."""
    if knob.is_round or knob.counts_bits:
        return ()
    facts = _rounded_facts(search, knob)
    found = dict.fromkeys((*facts, *composites(knob, search.terms)))
    return tuple(islice(found, _MOST_OPTIONS))


def _rounded_facts(search: Search, knob: Knob) -> Iterator[Fraction]:
    for meaning in snaps(knob, search.terms):
        hinted = meaning.term.role in knob.hints
        if meaning.exact != knob.value and (hinted or not (knob.hints or knob.is_coarse)):
            yield meaning.exact


def _exact_offset(search: Search, most: int) -> Solution | None:
    """An offset inside the tolerance that one constant, taken as its fact, would make exact."""
    line = search.line({})
    if most < 1 or line is None or same(line.offset, search.target.offset):
        return None
    found = (
        (repair,)
        for knob in search.knobs
        for repair in _offset_repairs(search, knob, {})
        if repair.meaning is not None and repair.meaning.term.role in _OFFSETS
        if _has_exact_offset(search, {knob.key: repair.exact})
    )
    return _best(found)


def _has_exact_offset(search: Search, values: Values) -> bool:
    line = search.line(values)
    return search.target.fits(line) and line is not None and same(line.offset, search.target.offset)


def _singles(search: Search, baselines: Sequence[Values]) -> Iterator[tuple[Repair, ...]]:
    for values in baselines:
        line = search.line(values)
        if line is None:
            continue
        right_gain = search.target.has_gain(line)
        for knob in search.knobs:
            roots = _offset_repairs if right_gain else _gain_repairs
            for repair in roots(search, knob, values):
                if search.fits({**values, knob.key: repair.exact}):
                    yield (repair,)


def _gain_repairs(search: Search, knob: Knob, values: Values) -> Iterator[Repair]:
    """Corrections of one constant that may give the wanted gain."""
    if knob.counts_bits:
        yield from shift_repairs(knob, search.layout)
        return
    root = gain_root(search.sketch, search.target, knob, values)
    if root is not None:
        yield from _repairs_at(search, knob, root)


def _offset_repairs(search: Search, knob: Knob, values: Values) -> Iterator[Repair]:
    """Corrections of one constant that may give the wanted offset.

    Rounding idioms move the offset, so a fact near the exact value is as good if the line then
    fits.
    """
    if knob.counts_bits:
        return
    root = offset_root(search.sketch, search.target, knob, values)
    if root is None:
        return
    yield from _repairs_at(search, knob, root)
    for meaning in matches(knob, root, search.terms, _NEAR):
        if meaning.term.role in _OFFSETS and meaning.exact != root:
            repair = fact_repair(knob, meaning, search.layout)
            if repair is not None:
                yield repair


def _repairs_at(search: Search, knob: Knob, root: Fraction) -> Iterator[Repair]:
    special = divisor_repair(knob, root, search.layout)
    power = power_repair(knob, root, search.layout)
    yield from (repair for repair in (special, power) if repair is not None)
    for meaning in matches(knob, root, search.terms):
        repair = fact_repair(knob, meaning, search.layout)
        if repair is not None:
            yield repair


def _is_folded(search: Search, baselines: Sequence[Values], coarsest: Fraction) -> bool:
    """Whether one constant, computed by hand and rounded, is as right as its digits can be."""
    for values in baselines:
        line = search.line(values)
        if line is None:
            continue
        root = offset_root if search.target.has_gain(line) else gain_root
        for knob in search.knobs:
            if knob.key in values or not _may_be_folded(search, knob, coarsest):
                continue
            exact = root(search.sketch, search.target, knob, values)
            if (
                exact is not None
                and knob.rounds(exact)
                and search.fits({**values, knob.key: exact})
            ):
                return True
    return False


def _may_be_folded(search: Search, knob: Knob, coarsest: Fraction) -> bool:
    """Whether a constant is no scale factor and no fact of the board, and fine enough."""
    if knob.is_round or knob.counts_bits or knob.value <= 0:
        return False
    if knob.half > knob.value * coarsest:
        return False
    return not any(
        not knob.hints or meaning.term.role in knob.hints for meaning in snaps(knob, search.terms)
    )


def _roundings_explain(search: Search) -> bool:
    """Whether all rounded constants together may be off by as much as the line is."""
    line = search.line({})
    if line is None or not line.gain:
        return False
    loose = sum(
        (
            knob.half / knob.value
            for knob in search.knobs
            if _may_be_folded(search, knob, Fraction(1))
        ),
        start=Fraction(0),
    )
    distance = abs(line.offset - search.target.offset)
    return abs(
        search.target.gain / line.gain - 1
    ) <= loose and distance <= search.target.tolerance + loose * abs(search.target.offset)


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
        if repair is not None and (is_likely(repair) or _speaks_for_itself(knob)):
            yield repair


def _speaks_for_itself(knob: Knob) -> bool:
    """Whether a value may be a fact of some board: a count, or few digits; no scale factor.

    Otherwise any two constants folded by hand would do for a wrong reference and a wrong count.
    """
    if is_power(knob.value, 2) or is_power(knob.value + 1, 2):
        return True
    if knob.is_round or not knob.value:
        return False
    digits = str(abs(knob.value.numerator * 10**9 // knob.value.denominator)).strip("0")
    return len(digits) <= _FEW_DIGITS


def _doubles(search: Search, baselines: Sequence[Values]) -> Iterator[tuple[Repair, ...]]:
    for values in baselines:
        line = search.line(values)
        if line is None:
            continue
        yield from _gain_then_offset(search, values)
        yield from _combined(search, values, line, 2)
        yield from _option_then_root(search, values)


def _gain_then_offset(search: Search, values: Values) -> Iterator[tuple[Repair, ...]]:
    """One constant mends the gain, another the offset."""
    for knob in search.knobs:
        for repair in _gain_repairs(search, knob, values):
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
        for repair in _offset_repairs(search, knob, values):
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
            for repair in _gain_repairs(search, knob, put):
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
        if search.fits({**values, **{option.key: option.repair.exact for option in chosen}}):
            yield tuple(option.repair for option in chosen)


def _interact(chosen: Sequence[_Option]) -> bool:
    resistors = sum(
        option.repair.meaning is not None and option.repair.meaning.term.role is Role.RESISTANCE
        for option in chosen
    )
    return resistors >= 2


def _triples(search: Search, baselines: Sequence[Values]) -> Iterator[tuple[Repair, ...]]:
    for values in baselines[:4]:
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
