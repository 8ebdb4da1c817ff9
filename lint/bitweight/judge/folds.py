"""Constants computed by hand and rounded: whether rounding alone is between code and board."""

from collections.abc import Sequence
from fractions import Fraction

from bitweight.judge.knobs import Knob
from bitweight.judge.meanings import snaps
from bitweight.judge.roots import gain_root, offset_root
from bitweight.judge.sketches import Values
from bitweight.judge.trials import Search


def is_folded(search: Search, starts: Sequence[Values], coarsest: Fraction) -> bool:
    """Whether one constant, computed by hand and rounded, is as right as its digits can be."""
    for values in starts:
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


def roundings_explain(search: Search) -> bool:
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
