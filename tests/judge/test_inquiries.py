"""What the search for wrong constants is asked."""

from fractions import Fraction

import facts
from bitweight.board.chains import ideal
from bitweight.board.hardware import ConstantFact
from bitweight.judge.cases import Case
from bitweight.judge.inquiries import accepted_line, board_lines, stated_roles
from bitweight.units import parse_unit
from facts import C


def _fact(role: str | None) -> ConstantFact:
    return ConstantFact(
        expression="VREF_MV",
        where=None,
        role=role,
        name="vref",
        unit=parse_unit("mV"),
        at=None,
        value=None,
        place=facts.at(30),
    )


def test_one_line_for_each_count() -> None:
    """Each accepted full-scale count has its line; the chain's own offset stays."""
    either = facts.converter(12, full_scale_counts=(4096, 4095), first_transition=Fraction(1))
    tank = facts.channel(converter=either, chain=(facts.amplifier("1", "1 V"),), ends=None)
    first, second = board_lines(ideal(tank))
    assert (first.count, first.gain) == (4096, Fraction(5, 4096))
    assert (second.count, second.gain) == (4095, Fraction(5, 4095))
    assert first.offset == -1 + Fraction(5, 4096) / 2
    assert second.offset == -1 + Fraction(5, 4095) / 2


def test_accepted_line() -> None:
    """The line of an accepted count replaces the preferred one, any other leaves it."""
    side = ideal(facts.channel(converter=facts.converter(12, full_scale_counts=(4096, 4095))))
    assert accepted_line(side, Fraction(4095)).gain == Fraction(5, 4095)
    assert accepted_line(side, Fraction(1000)) is side
    assert accepted_line(side, None) is side


def test_stated_roles() -> None:
    """Constants with a role are passed on with their unit; those with a value or code are not."""
    board = facts.board(constants=(_fact("reference"), _fact("code"), _fact(None)))
    (role,) = stated_roles(board)
    assert (role.name, role.role, role.subject) == ("VREF_MV", "reference", "vref")
    assert role.unit == Fraction(1, 1000)


def test_meant_outside_is_never_silent() -> None:
    """A line outside what is allowed that no constant explains leaves a residual."""
    c = C()
    cases: list[Case] = [
        facts.case(c.op(c.op(c.code(), "/", "256"), "*", "5"), of=facts.channel(allowed="1 %")),
        facts.case(c.op(c.op(c.code("int16_t"), "*", "37"), "/", "1000")),
        facts.case(c.op(c.op(c.code(), "*", c.code()), "/", "77")),
    ]
    for case in cases:
        assert case.judgement is not None
        explanation = case.judgement.explanation
        assert explanation.wrong or explanation.residual
