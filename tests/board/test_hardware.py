"""Facts of the board: what a channel offers directly."""

import dataclasses

import pytest

from bitweight.board import hardware
from board.parts import channel


def test_reading_and_value_come_from_the_firmware_table() -> None:
    """A channel gives its C expressions as tuples, one or several."""
    made = channel(channel="firmware = { reading = 'adc()', value = ['a', 'b'] }")
    assert (made.reading, made.value) == (("adc()",), ("a", "b"))


def test_a_channel_without_firmware_has_no_reading() -> None:
    """Nothing given is nothing, not a guess."""
    assert (channel().reading, channel().value, channel().firmware.unit) == ((), (), None)


@pytest.mark.parametrize("name", [name for name in hardware.__all__ if name != "Codes"])
def test_facts_are_frozen(name: str) -> None:
    """Every fact of the board is an unchanging dataclass or an enumeration."""
    fact = getattr(hardware, name)
    if dataclasses.is_dataclass(fact):
        assert fact.__dataclass_params__.frozen  # type: ignore[attr-defined]
        assert hasattr(fact, "__slots__")
