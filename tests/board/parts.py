"""Small builders of parts, stages and channels."""

from bitweight.board.decoding.boards import board_from_text
from bitweight.board.hardware import Board, Channel
from bitweight.board.parts import Part
from bitweight.board.stages import Stage
from bitweight.places import Place
from bitweight.quantities import parse_quantity

HERE = Place("board.toml", 1, 1)

SUPPLIES = """\
[supply.v33]
voltage = "3.3 V 2%"
[supply.v5]
voltage = "5 V"
[reference.vref]
voltage = "2.5 V 0.5%"
"""


def part(text: str, key: str = "") -> Part:
    """A part of this value."""
    quantity = parse_quantity(text)
    return Part(key=key or text, label=key or "part", quantity=quantity, place=HERE)


def board(
    stages: str = "",
    *,
    converter: str = "bits = 12",
    channel: str = "",
    supplies: str = SUPPLIES,
    rest: str = "",
) -> Board:
    """A board with one converter and one channel `x`."""
    reference = "" if "reference" in converter else 'reference = "vref"\n'
    return board_from_text(
        f"{supplies}[converter.adc]\n{reference}{converter}\n"
        f"[channel.x]\nchain = [{stages}]\n{channel}\n{rest}",
        file="board.toml",
    )


def channel(
    stages: str = "",
    *,
    converter: str = "bits = 12",
    channel: str = "",
    supplies: str = SUPPLIES,
) -> Channel:
    """The channel `x` of such a board."""
    return board(stages, converter=converter, channel=channel, supplies=supplies).channels[0]


def stage(text: str, *, extra: str = "") -> Stage:
    """One stage as a board file states it."""
    return channel(text, channel=extra).chain[0]
