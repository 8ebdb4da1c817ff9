"""Board files with a mistake: the sign ¦ stands right before what a mistake must point at."""

from dataclasses import dataclass

from bitweight.board.decoding.boards import board_from_text
from bitweight.errors import BoardError, Mistake

MARK = "¦"

REFERENCE = '[reference.vref]\nvoltage = "2.5 V"\n'
CONVERTER = "[converter.adc]\nbits = 12\n"
CHANNEL = "[channel.tank]\n"
BOARD = REFERENCE + CONVERTER + CHANNEL


@dataclass(frozen=True, slots=True, kw_only=True)
class Case:
    """A board file with marks, and a piece of each message, in the order of the marks."""

    name: str
    text: str
    messages: tuple[str, ...]


def case(name: str, text: str, *messages: str) -> Case:
    """A row of a table of cases."""
    return Case(name=name, text=text, messages=messages)


def stage(inner: str) -> str:
    """A board whose only stage is this one."""
    return BOARD + f"chain = [{inner}]\n"


def mistakes_of(text: str) -> tuple[Mistake, ...]:
    """Every mistake of a board file; none when it is right."""
    try:
        board_from_text(text, file="board.toml")
    except BoardError as error:
        return error.mistakes
    return ()


def marked(text: str) -> tuple[str, list[tuple[int, int]]]:
    """The text without its marks, and the line and column of each."""
    places: list[tuple[int, int]] = []
    plain: list[str] = []
    for number, line in enumerate(text.split("\n"), start=1):
        while MARK in line:
            column = line.index(MARK)
            places.append((number, column + 1))
            line = line[:column] + line[column + 1 :]
        plain.append(line)
    return "\n".join(plain), places


def check(one: Case) -> None:
    """Assert that the file has exactly these mistakes, each at its mark and with its text."""
    text, places = marked(one.text)
    found = mistakes_of(text)
    assert [(mistake.place.line, mistake.place.column) for mistake in found] == places, found
    for mistake, message in zip(found, one.messages, strict=True):
        assert message in mistake.message
