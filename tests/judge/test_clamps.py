"""Limits in the code that cut the reading off inside the range."""

import pytest

import facts
from bitweight.judge.clamps import Clamp
from facts import C


def _clamps(top: str, ends: tuple[str, str] = ("0 V", "5 V")) -> tuple[Clamp, ...]:
    c = C()
    scaled = c.op(c.op(c.code(), "*", "5000"), "/", "1024")
    clamp = c.choose(c.op(scaled, ">", top), top, scaled)
    judgement = facts.case(clamp, of=facts.channel(ends=ends)).judgement
    assert judgement is not None
    return judgement.clamps


@pytest.mark.parametrize(("top", "first"), [("1000", 207), ("4000", 822), ("4900", 1006)])
def test_clamp_inside_range(top: str, first: int) -> None:
    """A clamp below the top of the range spoils the codes above it, beyond the allowed error."""
    (clamp,) = _clamps(top)
    assert int(clamp.mask.argmax()) == first
    assert clamp.mask[-1]


@pytest.mark.parametrize(
    ("top", "ends"), [("5000", ("0 V", "5 V")), ("4990", ("0 V", "5 V")), ("4000", ("0 V", "4 V"))]
)
def test_clamp_at_the_end_is_none(top: str, ends: tuple[str, str]) -> None:
    """A clamp at or above the top of the range, or within the allowed error of it, is no fault."""
    assert _clamps(top, ends) == ()


def test_clamp_of_the_code() -> None:
    """A clamp on the code, before it is scaled, is found as well."""
    c = C()
    code = c.code()
    held = c.choose(c.op(code, "<", "100"), "100", code)
    judgement = facts.case(c.op(c.op(held, "*", "5000"), "/", "1024")).judgement
    assert judgement is not None
    (clamp,) = judgement.clamps
    assert (int(clamp.mask.argmax()), int(clamp.mask.sum())) == (0, 99)


@pytest.mark.parametrize("held", ["0", "50", "4095"])
def test_a_jump_is_no_clamp(held: str) -> None:
    """Codes in between that are replaced cut no end of the range off: that bends the curve."""
    c = C()
    code = c.code()
    inside = c.op(c.op(code, ">", "400"), "&&", c.op(code, "<", "500"))
    jumping = c.choose(inside, held, code)
    judgement = facts.case(c.op(c.op(jumping, "*", "5000"), "/", "1024")).judgement
    assert judgement is not None
    assert judgement.clamps == ()
    assert judgement.explanation.residual == "curve"
