"""Rows of published figures: a converter as its document describes it, and what that prints."""

from dataclasses import dataclass
from fractions import Fraction
from pathlib import Path

from bitweight.board.chains import Ideal, ideal
from bitweight.board.decoding.boards import board_from_text
from bitweight.judge.outcomes import Outcome
from bitweight.pipeline import verify
from bitweight.requests import Request


@dataclass(frozen=True, slots=True, kw_only=True)
class Part:
    """A converter and what is in front of it.

    `source` names document and section. `converter` and `stages` are board-file text, `reference`
    is a voltage, `supply` one more (named v5) or none, `unit` the channel's.
    """

    source: str
    converter: str
    reference: str
    stages: str = ""
    unit: str = "V"
    supply: str = ""
    target: str = ""

    @property
    def board(self) -> str:
        """The tables of a board file that say this, with one channel `x`."""
        target = f'[target]\narchitecture = "{self.target}"\n' if self.target else ""
        supply = f'[supply.v5]\nvoltage = "{self.supply}"\n' if self.supply else ""
        source = 'supply = "v5"' if self.supply else f'voltage = "{self.reference}"'
        return (
            f"{target}{supply}[reference.vref]\n{source}\n"
            f"[converter.part]\n{self.converter}\n"
            f'[channel.x]\nunit = "{self.unit}"\nchain = [{self.stages}]\n'
        )

    @property
    def ideal(self) -> Ideal:
        """q(c) of its channel."""
        return ideal(board_from_text(self.board, file="board.toml").channels[0])


@dataclass(frozen=True, slots=True, kw_only=True)
class Firmware:
    """C that a part's document asks for, and a mistake people make with it.

    `code` is one file of C that reads `reading` and ends in `result`, one count of which is
    `count`; `slip` is what is right and what is written for it; `rules` may name the slip.
    """

    part: Part
    code: str
    slip: tuple[str, str]
    rules: tuple[str, ...]
    count: str = "1 mV"
    reading: str = "part_read()"
    result: str = "result"

    @property
    def board(self) -> str:
        """The whole board file."""
        return (
            f"{self.part.board}[channel.x.firmware]\n"
            f'reading = "{self.reading}"\nvalue = "{self.result}"\nunit = "{self.count}"\n'
        )

    @property
    def mistaken(self) -> str:
        """The C with the slip in it."""
        right, wrong = self.slip
        assert self.code.count(right) == 1
        return self.code.replace(right, wrong)


def run(folder: Path, board: str, code: str) -> Outcome:
    """The outcome of `verify` over one file of C in this folder."""
    source = folder / "src" / "part.c"
    source.parent.mkdir()
    source.write_text(code)
    file = folder / "board.toml"
    file.write_text(board)
    return verify(Request(board=str(file), sources=(str(source),)), lambda *_: None)


def half_digit(printed: str) -> Fraction:
    """Half of the last digit that a document prints of a number."""
    decimals = len(printed.partition(".")[2])
    return Fraction(1, 2 * 10**decimals)
