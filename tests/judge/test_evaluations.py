"""How codes become words, and a conversion computed both ways."""

from fractions import Fraction

import numpy as np
import pytest

import facts
from bitweight.board.converters import Coding
from bitweight.judge.evaluations import code_grid, presented, reader, steady_words
from facts import C


def _words(converter_bits: int, codes: list[int], gain: int = 1) -> list[list[int]]:
    converter = facts.converter(converter_bits, coding=Coding.TWOS_COMPLEMENT)
    ways = presented(converter, np.array(codes), Fraction(gain))
    return [way.tolist() for way in ways]


def test_twos_complement_comes_three_ways() -> None:
    """Extended to its word, as bare bits, and as a negative number."""
    assert _words(12, [-1, 1]) == [[0xFFFF, 1], [0xFFF, 1], [-1, 1]]


def test_bare_words_come_without_a_negative_number() -> None:
    """Where the firmware sees the bare word no negative number arrives."""
    converter = facts.converter(12, coding=Coding.TWOS_COMPLEMENT, word_bits=12)
    (words,) = presented(converter, np.array([-1, 1]), Fraction(1), bare=True)
    assert words.tolist() == [0xFFF, 1]


def test_sum_of_signed_codes() -> None:
    """A sum of samples multiplies the number, not its bits."""
    assert _words(12, [-3, 5], gain=8) == [[-24, 40]]


@pytest.mark.parametrize(("gain", "word"), [("8", 800), ("1/4", 25)])
def test_reading_gain(gain: str, word: int) -> None:
    """The words of a reading with a gain are that many times the code, cut to whole counts."""
    (words,) = presented(facts.converter(), np.array([100]), Fraction(gain))
    assert words.tolist() == [word]


@pytest.mark.parametrize("bits", [8, 16, 18])
def test_all_codes(bits: int) -> None:
    """Up to 18 bits every code is held."""
    assert len(code_grid(facts.converter(bits))) == 1 << bits


def test_grid() -> None:
    """Beyond 18 bits a grid of odd step with both ends stands for them."""
    grid = code_grid(facts.converter(24))
    assert (grid[0], grid[-1]) == (0, (1 << 24) - 1)
    assert (grid[1] - grid[0]) % 2 == 1
    assert len(grid) < 1 << 17


@pytest.mark.parametrize(("nominal", "word"), [(None, 512), ("1 V", 205), ("9 V", 1023)])
def test_steady_word_of_another_channel(nominal: str | None, word: int) -> None:
    """Another channel's reading stands at its nominal quantity, else in the middle of its range."""
    quantity = None if nominal is None else facts.parse_quantity(nominal)
    assert steady_words([facts.channel("supply", nominal=quantity)]) == {"supply": word}


def test_reader() -> None:
    """The channel's own readings follow the codes, others stand still."""
    c = C()
    read = reader(facts.channel(), np.array([1, 2, 3]), {"supply": 700})
    assert read(c.code()).tolist() == [1, 2, 3]
    assert read(c.code("uint16_t", "tank", "pump")).tolist() == [1, 2, 3]
    assert read(c.code("uint16_t", "supply")).tolist() == [700, 700, 700]
