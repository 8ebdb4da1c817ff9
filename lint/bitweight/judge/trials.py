"""What one search looks at, and the corrections of one constant that it may try.

A sketch, constants, board facts and the wanted line enter; candidate corrections leave.
"""

from collections.abc import Iterator
from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import combinations, islice, product

from bitweight.board.facts import Role
from bitweight.judge.knobs import Knob
from bitweight.judge.meanings import Term, composites, matches, snaps
from bitweight.judge.repairs import (
    Layout,
    Repair,
    divisor_repair,
    fact_repair,
    is_likely,
    power_repair,
    shift_repairs,
)
from bitweight.judge.roots import Target, gain_root, offset_root
from bitweight.judge.sketches import RealLine, Sketch, Values

_MOST_BASELINES = 8
_MOST_ROUNDED = 3
_MOST_OPTIONS = 3
_NEAR = 0.2
OFFSETS = (Role.OFFSET, Role.ZERO_CODE, Role.AT)
"""What a constant may be that moves the offset and nothing else."""
_EVERYWHERE = frozenset({Role.FULL_SCALE, Role.REFERENCE})


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


def baselines(search: Search) -> tuple[Values, ...]:
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


def is_settled(search: Search, knob: Knob) -> bool:
    """Whether name and value agree that the constant is a certain fact of the board."""
    return any(
        meaning.is_natural and (meaning.term.role in knob.hints or not knob.hints)
        for meaning in snaps(knob, search.terms)
    )


def is_fact_already(search: Search, repair: Repair) -> bool:
    """Whether a constant is exactly what every conversion has: the full scale or the reference.

    Its name then says nothing for another meaning. The voltage of a pin that takes half of the
    reference may yet stand where the span belongs, and a wrong count may happen to be a
    reference in millivolts; a small whole number may be a resistor in kohm by chance.
    """
    knob, meaning = repair.knob, repair.meaning
    moves = repair.rule in ("unit-prefix", "justification")
    if knob is None or meaning is None or is_likely(repair) or moves:
        return False
    roles = {
        one.term.role
        for one in snaps(knob, search.terms)
        if one.is_natural and one.exact == knob.value
    }
    if meaning.term.role is Role.FULL_SCALE:
        return Role.FULL_SCALE in roles
    return bool(roles & _EVERYWHERE) and meaning.term.role not in roles


def _exact_values(search: Search, knob: Knob) -> tuple[Fraction, ...]:
    """What a constant that is a rounded number may be exactly, board facts first."""
    if knob.is_round or knob.counts_bits:
        return ()
    if is_settled(search, knob) and any(
        one.exact == knob.value for one in snaps(knob, search.terms)
    ):
        return ()
    facts = _rounded_facts(search, knob)
    found = dict.fromkeys((*facts, *composites(knob, search.terms)))
    return tuple(islice(found, _MOST_OPTIONS))


def _rounded_facts(search: Search, knob: Knob) -> Iterator[Fraction]:
    for meaning in snaps(knob, search.terms):
        hinted = meaning.term.role in knob.hints
        if meaning.exact != knob.value and (hinted or not (knob.hints or knob.is_coarse)):
            yield meaning.exact


def gain_repairs(search: Search, knob: Knob, values: Values) -> Iterator[Repair]:
    """Corrections of one constant that may give the wanted gain."""
    if knob.counts_bits:
        yield from shift_repairs(knob, search.layout)
        return
    root = gain_root(search.sketch, search.target, knob, values)
    if root is not None:
        yield from _repairs_at(search, knob, root)


def offset_repairs(search: Search, knob: Knob, values: Values) -> Iterator[Repair]:
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
        if meaning.term.role in OFFSETS and meaning.exact != root:
            repair = fact_repair(knob, meaning, search.layout)
            if repair is not None:
                yield repair


def _repairs_at(search: Search, knob: Knob, root: Fraction) -> Iterator[Repair]:
    settled = is_settled(search, knob)
    special = divisor_repair(knob, root, search.layout)
    power = power_repair(knob, root, search.layout)
    yield from (repair for repair in (special, power) if repair is not None)
    for meaning in matches(knob, root, search.terms):
        repair = fact_repair(knob, meaning, search.layout)
        if repair is not None and not is_fact_already(search, repair):
            yield replace(repair, settled=settled)
