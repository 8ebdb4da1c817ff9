"""Resolution thrown away before it is needed."""

import pytest

import facts
from bitweight.arithmetic.expressions import Expression
from bitweight.board.hardware import Channel
from bitweight.judge.losses import Loss
from facts import C


def _loss(expression: Expression, of: Channel | None = None) -> Loss | None:
    judgement = facts.case(expression, of=of).judgement
    assert judgement is not None
    return judgement.loss


@pytest.mark.parametrize(
    ("operator", "by", "left"),
    [("/", "8", "128"), ("/", "16", "64"), (">>", "4", "64"), ("/", "512", "2")],
)
def test_division_before_multiplication(operator: str, by: str, left: str) -> None:
    """A division that comes first loses up to its divisor less one, less what is allowed."""
    c = C()
    early = c.op(c.code(), operator, by)
    loss = _loss(c.op(c.op(early, "*", "5000"), "/", left))
    assert loss is not None
    assert loss.node is early
    assert loss.counts == pytest.approx(
        -5000 / 1024 * (2 ** (10 - int(left).bit_length() + 1) - 1), abs=1.5
    )


@pytest.mark.parametrize("by", ["1", "2"])
def test_small_loss_is_none(by: str) -> None:
    """Losing up to one LSB and one step is what any rounding does."""
    c = C()
    loss = _loss(c.op(c.op(c.op(c.code(), "/", by), "*", "5000"), "/", str(1024 // int(by))))
    assert loss is None


def test_coarse_unit_is_none() -> None:
    """A result that counts whole volts on purpose loses nothing before the end."""
    c = C()
    assert _loss(c.op(c.op(c.code(), "*", "5"), "/", "1024"), facts.channel(count="1 V")) is None


def test_rounding_is_none() -> None:
    """Half the divisor added before the division is no loss."""
    c = C()
    rounded = c.op(c.op(c.op(c.code(), "*", "5000"), "+", "512"), "/", "1024")
    assert _loss(rounded) is None


def test_float_result_of_an_integer_division() -> None:
    """An integer quotient stored in a float has lost its fraction."""
    c = C()
    quotient = c.op(c.op(c.code(), "*", "5"), "/", "1024")
    loss = _loss(c.store("float", quotient), facts.channel(count="1 V"))
    assert loss is not None
    assert loss.node is quotient


def test_conversion_to_integer_on_the_way() -> None:
    """A floating intermediate stored in an integer is to blame itself."""
    c = C()
    volts = c.store("int", c.op(c.code(), "*", "0.0048828125f"))
    loss = _loss(c.op(volts, "*", "1000"))
    assert loss is not None
    assert loss.node is volts


def test_last_lossy_operator_is_named() -> None:
    """An exact division before the lossy one is not blamed."""
    c = C()
    exact = c.op(c.op(c.code(), "*", "4"), "/", "4")
    early = c.op(exact, "/", "64")
    loss = _loss(c.op(c.op(early, "*", "5000"), "/", "16"))
    assert loss is not None
    assert loss.node is early


def test_constant_ratio_in_integers() -> None:
    """(R1 + R2) / R2 in integers loses its fraction for every code."""
    c = C()
    ratio = c.op(c.op("47", "+", "10"), "/", "10")
    tank = facts.channel(chain=(facts.divider("47k", "10k"),), ends=("0 V", "20 V"))
    loss = _loss(c.op(c.op(c.op(c.code(), "*", "5000"), "/", "1024"), "*", ratio), tank)
    assert loss is not None
    assert loss.node is ratio


@pytest.mark.parametrize(("allowed", "found"), [("10 mV", True), ("500 mV", True), ("1 V", False)])
def test_coarse_end(allowed: str, found: bool) -> None:
    """Whole counts that alone leave a stated allowed error are told, at the last division."""
    c = C()
    scaled = c.op(c.op(c.code(), "*", "5"), "/", "1024")
    loss = _loss(scaled, facts.channel(count="1 V", allowed=allowed))
    assert (loss is not None) == found
    if loss is not None:
        assert loss.at_end
        assert loss.node is scaled


def test_coarse_end_is_not_blamed_for_a_wrong_constant() -> None:
    """Where the real value is outside already, the last division is not to blame."""
    c = C()
    scaled = c.op(c.op(c.code(), "*", "4"), "/", "1024")
    assert _loss(scaled, facts.channel(count="1 V", allowed="100 mV")) is None


def test_a_shift_that_only_decides_loses_nothing() -> None:
    """The shift under a case selects a branch; no operator of its own is to blame."""
    c = C()
    code = c.code()
    scaled = c.op(c.op(code, "*", "5000"), "/", "1024")
    high = c.op(c.op(c.op(code, "*", "5000"), "+", "20480"), "/", "1024")
    assert _loss(c.choose(c.op(code, ">>", "9"), high, scaled)) is None


def test_truncation_that_does_not_fit_is_told_once() -> None:
    """A shift that leaves too many bits for the type it is put in is a matter of the store."""
    c = C()
    held = c.store("uint8_t", c.op(c.code(), ">>", "1"))
    judgement = facts.case(c.op(c.op(held, "*", "5000"), "/", "512")).judgement
    assert judgement is not None
    assert judgement.operations
    assert judgement.loss is None
