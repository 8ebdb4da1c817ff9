"""The smallest set of constants whose correction makes a conversion's line the board's.

A search enters; the best `Solution` leaves.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from fractions import Fraction

from bitweight.judge.folds import is_folded, roundings_explain
from bitweight.judge.pairs import doubles, triples
from bitweight.judge.repairs import (
    Repair,
    is_doubtful,
    rank,
)
from bitweight.judge.sketches import Values, same
from bitweight.judge.trials import OFFSETS, Search, baselines, gain_repairs, offset_repairs

_FINE_FOLD = Fraction(1, 40)


@dataclass(frozen=True, slots=True, kw_only=True)
class Solution:
    """Corrections that mend the line together; none where it is right but for rounded constants."""

    repairs: tuple[Repair, ...] = ()


def smallest(search: Search, most: int) -> Solution | None:
    """The solution of fewest repairs, at most `most`; None where there is none.

    A single correction that the constant's name speaks against counts as two. A rounded constant is
    believed only after single corrections have failed: a coarse one (5.0) would excuse much else.
    """
    nothing = Solution()
    starts = baselines(search)
    if any(search.fits(values) for values in starts):
        return _exact_offset(search, most) or nothing
    singles = tuple(_singles(search, starts)) if most >= 1 else ()
    if found := _best(one for one in singles if not is_doubtful(*one)):
        return found
    if is_folded(search, starts, _FINE_FOLD):
        return nothing
    if most >= 2 and (found := _best(doubles(search, starts)) or _best(iter(singles))):
        return found
    if most < 3:
        return None
    if is_folded(search, starts, Fraction(1)) or roundings_explain(search):
        return nothing
    return _best(triples(search, starts))


def _best(solutions: Iterator[tuple[Repair, ...]]) -> Solution | None:
    ranked = sorted((rank(repairs), index, repairs) for index, repairs in enumerate(solutions))
    return Solution(repairs=ranked[0][2]) if ranked else None


def _exact_offset(search: Search, most: int) -> Solution | None:
    """An offset inside the tolerance that one constant, taken as its fact, would make exact."""
    line = search.line({})
    if most < 1 or line is None or same(line.offset, search.target.offset):
        return None
    found = (
        (repair,)
        for knob in search.knobs
        for repair in offset_repairs(search, knob, {})
        if repair.meaning is not None and repair.meaning.term.role in OFFSETS
        if _has_exact_offset(search, {knob.key: repair.exact})
    )
    return _best(found)


def _has_exact_offset(search: Search, values: Values) -> bool:
    line = search.line(values)
    return search.target.fits(line) and line is not None and same(line.offset, search.target.offset)


def _singles(search: Search, starts: Sequence[Values]) -> Iterator[tuple[Repair, ...]]:
    for values in starts:
        line = search.line(values)
        if line is None:
            continue
        right_gain = search.target.has_gain(line)
        for knob in search.knobs:
            roots = offset_repairs if right_gain else gain_repairs
            for repair in roots(search, knob, values):
                if search.fits({**values, knob.key: repair.exact}):
                    yield (repair,)
