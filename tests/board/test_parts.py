"""Parts and voltages: their identity and values."""

from fractions import Fraction

from bitweight.board.parts import Share, nominal
from board.parts import HERE, board, part


def test_a_reference_that_is_a_supply_is_the_same_quantity() -> None:
    """A reference taken from a supply shares its key, so both cancel."""
    made = board(
        converter='bits = 12\nreference = "r"',
        supplies='[supply.v5]\nvoltage = "5 V 5%"\n[reference.r]\nsupply = "v5"\n',
    )
    assert made.references[0].part.key == made.supplies[0].part.key
    assert made.references[0].voltage == made.supplies[0].voltage


def test_a_reference_of_its_own_is_another_quantity() -> None:
    """A reference with a voltage is named after itself."""
    made = board()
    assert made.references[0].part.key == "reference vref"


def test_a_share_follows_its_supply() -> None:
    """Half a supply is half of whatever the supply is."""
    supply = board().supplies[0]
    share = Share(source=supply, factor=Fraction(1, 2), text="v33 / 2", place=HERE)
    assert share.volts(nominal) == Fraction("1.65")
    assert share.volts(lambda _: Fraction(4)) == 2


def test_the_nominal_value_is_the_stated_one() -> None:
    """Nominal means what the board file says, in coherent units."""
    assert nominal(part("4k7 1%")) == 4700
