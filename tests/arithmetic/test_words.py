"""Which parts of an expression are bits of a word and which are quantities."""

import pytest

from bitweight.arithmetic.expressions import walk
from bitweight.arithmetic.types import MODELS
from bitweight.arithmetic.words import Word, disjoint, words
from properties.conversions import Conversion

HOST = MODELS["host"]


def word_of(text: str) -> Word | None:
    """The word that a whole expression is, if it is one."""
    order = tuple(walk(Conversion(text).build(HOST)))
    return words(order).get(id(order[-1]))


@pytest.mark.parametrize(
    ("text", "word"),
    [
        ("x", Word(16, 0xFFFF)),
        ("x & 0x0FFF", Word(16, 0x0FFF)),
        ("x << 4", Word(16, 0xFFFF0)),
        ("x >> 8", Word(16, 0xFF)),
        ("(uint8_t)x", Word(8, 0xFF)),
        ("(int16_t)x", Word(16, -1)),
        ("(int16_t)(x & 0xFF)", Word(16, 0xFF)),
        ("(uint32_t)x << 16", Word(32, 0xFFFF0000)),
        ("~x", Word(16, -1)),
        ("x ^ 0x8000", Word(16, 0xFFFF)),
        ("(x << 16) + 5", Word(16, 0xFFFF0005)),
        ("x - 0x8000", Word(16, -1)),
        ("x % 256", Word(16, 0xFF)),
        ("x > 3 ? x : 7", Word(16, 0xFFFF)),
        ("1 << 12", Word(13, 4096, 4096)),
        ("(1 << 12) - 1", Word(12, 4095, 4095)),
        ("-1", Word(1, -1, -1)),
    ],
)
def test_what_is_a_word(text: str, word: Word) -> None:
    """Moving, masking, complementing and joining leaves a word of known bits."""
    assert word_of(text) == word


@pytest.mark.parametrize(
    "text",
    ["x * 2", "x / 16", "x + x", "x + 100", "x - 512", "x * 1.0f", "(uint16_t)(x * 3)", "x < 5",
     "!x", "x << x", "x % 100", "(x * 3) & 0xFF", "x ? x * 2 : x", "-x", "(float)x", "(bool)x"],
)  # fmt: skip
def test_what_is_a_quantity(text: str) -> None:
    """Scaling, offsets, sums and truth values are no words."""
    assert word_of(text) is None


@pytest.mark.parametrize(
    ("text", "low"), [("1023", True), ("0xFFF", True), ("1", True), ("0", False), ("1024", False)]
)
def test_low_masks(text: str, low: bool) -> None:
    """A low mask is a constant of ones from bit 0 up."""
    word = word_of(text)
    assert word is not None
    assert word.is_low_mask is low


def test_parts_without_a_common_bit_are_disjoint() -> None:
    """Two parts are disjoint when no bit may be set in both."""
    assert disjoint(Word(16, 0xFF00), Word(8, 0xFF))
    assert not disjoint(Word(16, 0xFFF0), Word(8, 0xFF))
    assert not disjoint(Word(16, -1), Word(8, 1))
