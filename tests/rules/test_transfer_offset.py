"""Rule `transfer-offset`: an offset that no single constant explains."""

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight_rules.transfer_offset import RULE
from facts import C, case, findings_of


def shifted(offset: str) -> Expression:
    """raw * 5000 / 1024 + offset."""
    c = C()
    return c.op(c.op(c.op(c.code(), "*", "5000UL"), "/", "1024"), "+", c.number(offset, "TRIM"))


@pytest.mark.parametrize("offset", ["20", "100", "1500"])
def test_an_unexplained_offset_is_found(offset: str) -> None:
    """An offset beyond the allowed error is found, with both sides' offset."""
    (one,) = findings_of(RULE.check, case(shifted(offset)))
    assert one.expected == "0 V"


def test_rounding_and_bin_edge_idioms_are_silent() -> None:
    """Half a count added before the division, and half a bin added to the code, are no offset."""
    c = C()
    nearest = c.op(c.op(c.op(c.code(), "*", "5000UL"), "+", "512"), "/", "1024")
    edge = c.op(c.op(c.op(c.op(c.code(), "*", "2"), "+", "1"), "*", "5000UL"), "/", "2048")
    for expression in (nearest, edge, shifted("1")):
        assert not findings_of(RULE.check, case(expression))
