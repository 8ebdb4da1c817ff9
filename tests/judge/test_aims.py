"""What tracing is asked for, from the board."""

import pytest

from bitweight.arithmetic.types import DataModel
from bitweight.board.decoding.boards import board_from_text
from bitweight.board.hardware import Board
from bitweight.judge.aims import aim, givens, limit_aims

CHANNEL = """\
[reference.vref]
voltage = "2.5 V"
[converter.adc]
bits = 12
{converter}
[channel.tank]
unit = "V"
{channel}
[channel.tank.firmware]
reading = ["adc_read(TANK)", "raw @ tank.c"]
value = "tank_mv @ update"
"""


def _board(converter: str = "", channel: str = "", rest: str = "") -> Board:
    text = CHANNEL.format(converter=converter, channel=channel) + rest
    return board_from_text(text, file="board.toml")


def test_readings_and_values_with_their_places() -> None:
    """Each expression is a pattern of its own, with what it is limited to."""
    board = _board()
    asked = aim(board.channels[0], board.target.model)
    assert [(one.pattern.text, one.pattern.where) for one in asked.readings] == [
        ("adc_read(TANK)", None),
        ("raw", "tank.c"),
    ]
    assert [(one.text, one.where) for one in asked.values] == [("tank_mv", "update")]
    assert {one.channels for one in asked.readings} == {("tank",)}


@pytest.mark.parametrize(
    ("converter", "type_"),
    [
        ("", "unsigned short"),
        ("word_bits = 32", "unsigned int"),
        ('coding = "twos-complement"', "short"),
        ('coding = "twos-complement"\nword_bits = 12', "unsigned short"),
    ],
)
def test_the_type_of_a_word_that_nothing_declares(converter: str, type_: str) -> None:
    """It is as wide as the word, and signed where the code may come sign-extended."""
    board = _board(converter)
    (first, _) = aim(board.channels[0], DataModel()).readings
    assert first.type.name == type_


def test_values_that_the_board_file_states() -> None:
    """A stated value is itself; an ideal code is that of the quantity; a bare role has none."""
    rest = (
        '[constants]\n"cal->gain" = { value = 13.25 }\n"count" = { value = 7 }\n'
        '"zero()" = { is = "code tank", at = "1.25 V" }\nVREF = "reference vref"\n'
    )
    stated = {one.pattern.text: one.value for one in givens(_board(rest=rest))}
    assert stated == {"cal->gain": 13.25, "count": 7, "zero()": 2048}


def test_limits_of_a_channel() -> None:
    """Each limit is asked for by its expression."""
    rest = '[[channel.tank.limit]]\nname = "full"\nat = "2 V"\nconstant = "FULL @ limits.h"\n'
    (one,) = limit_aims(_board(rest=rest).channels[0])
    assert (one.channel, one.name, one.pattern.text) == ("tank", "full", "FULL")
    assert one.pattern.where == "limits.h"
