"""Corrections that mend a line together."""

from fractions import Fraction

from bitweight.board.facts import Role
from bitweight.judge.pairs import doubles, triples
from bitweight.judge.views import views
from operands import Board, const, number, question, raw

DIVIDED = Board(
    per_volt=Fraction(11),
    more=(number(Role.INVERSE_DIVIDER, "inverse divider", 11, "divider-ratio"),),
)


def test_two_that_multiply_to_what_is_missing_are_found() -> None:
    """A wrong reference and a wrong count are found as one set of two."""
    code = raw() * const("4900UL", "VREF_MV") / const("1023") * const("11")
    search = next(views(question(DIVIDED, code))).search
    found = {tuple(sorted(int(one.exact) for one in pair)) for pair in doubles(search, ({},))}
    assert (1024, 5000) in found


def test_two_do_not_mend_three() -> None:
    """With three faults no two corrections fit, but three do."""
    code = raw() * const("4900UL", "VREF_MV") / const("1023") * const("12", "DIVIDER")
    search = next(views(question(DIVIDED, code))).search
    assert not list(doubles(search, ({},)))
    found = {tuple(sorted(int(one.exact) for one in three)) for three in triples(search, ({},))}
    assert (11, 1024, 5000) in found


def test_constants_folded_by_hand_are_no_pair() -> None:
    """Two nameless constants of many digits do not become a reference and a count."""
    search = next(views(question(Board(), raw() * const("5381") / const("9173")))).search
    assert not list(doubles(search, ({},)))
