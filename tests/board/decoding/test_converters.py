"""Supplies, references and converters as the board file states them."""

from fractions import Fraction

from bitweight.board.converters import Coding, ConverterKind, Justification
from bitweight.board.decoding.boards import board_from_text
from bitweight.board.parts import ReferenceSource
from board.parts import channel
from board.samples import HATCHERY


def test_references_know_their_source_and_whether_it_was_stated() -> None:
    """External is the default; the file's word is remembered as such."""
    vref, ratio = board_from_text(HATCHERY, file="b").references
    assert (vref.source, vref.source_stated) == (ReferenceSource.EXTERNAL, False)
    assert (ratio.source, ratio.source_stated) == (ReferenceSource.SUPPLY, True)
    assert (vref.pin, ratio.supply is None) == ("AREF", False)


def test_a_converter_keeps_every_key() -> None:
    """Clock, sampling, oversampling and total error arrive as facts."""
    slow, fast, *_ = board_from_text(HATCHERY, file="b").converters
    assert slow.clock is not None
    assert slow.clock.frequency is not None
    assert (slow.clock.frequency.value, slow.clock.cycles) == (125_000, 13)
    assert slow.sampling is not None
    assert slow.sampling.time is not None
    assert slow.sampling.time.text == "1.5 cycles"
    assert slow.total_error is not None
    assert slow.total_error.value == 2
    assert (fast.oversampling.samples, fast.oversampling.shift) == (16, 4)
    assert (fast.justified, fast.shift, fast.word_bits) == (Justification.LEFT, 4, 16)
    assert fast.full_scale_counts == (4096, 4095)


def test_what_is_not_stated_is_a_default_and_says_so() -> None:
    """A bare converter is an unsigned, right-justified ADC of its bits."""
    device = channel().converter
    assert (device.kind, device.coding, device.justified, device.shift) == (
        ConverterKind.ADC,
        Coding.UNSIGNED,
        Justification.RIGHT,
        0,
    )
    assert (device.reference_gain, device.input_gain, device.code_offset) == (1, 1, 0)
    assert device.first_transition == Fraction(1, 2)
    stated = (device.full_scale_stated, device.coding_stated, device.justified_stated)
    assert stated == (False, False, False)


def test_justification_needs_no_word_bits() -> None:
    """Left-justified in an unstated word is left-justified in 16 bits."""
    assert channel(converter="bits = 10\njustified = 'left'").converter.shift == 6
    wide = channel(converter="bits = 12\njustified = 'left'\nword_bits = 24").converter
    assert wide.shift == 12
