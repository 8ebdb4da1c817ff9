"""Converters: codes, full scale, words."""

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.board.converters import Converter, Oversampling, result_width
from board.parts import channel


def converter(text: str) -> Converter:
    """A converter with these keys."""
    return channel(converter=text).converter


@pytest.mark.parametrize(
    ("text", "low", "high", "full_scale"),
    [
        ("bits = 8", 0, 255, 256),
        ("bits = 12", 0, 4095, 4096),
        ("bits = 12\nfull_scale_count = 4095", 0, 4095, 4095),
        ("bits = 12\nfull_scale_count = [4096, 4095]", 0, 4095, 4096),
        ("bits = 12\ncoding = 'twos-complement'", -2048, 2047, 2048),
        ("bits = 12\ncoding = 'offset-binary'", -2048, 2047, 2048),
        ("bits = 8\ncoding = 'complementary'", 0, 255, 256),
        # 16 samples of 10 bits, shifted by 2: 12 bits (AVR121, decimation by >> n)
        ("bits = 10\noversampling = { samples = 16, shift = 2 }", 0, 4092, 4096),
        ("bits = 12\noversampling = { samples = 16 }", 0, 65520, 65536),
        # 1023 counts for the reference, 64 accumulated: top 65472 (tinyAVR 0/1 data sheet)
        ("bits = 10\nfull_scale_count = 1023\noversampling = { samples = 64 }", 0, 65472, 65472),
        (
            "bits = 12\ncoding = 'twos-complement'\noversampling = { samples = 4, shift = 1 }",
            -4096,
            4094,
            4096,
        ),
        ("bits = 1", 0, 1, 2),
        ("bits = 32", 0, 2**32 - 1, 2**32),
    ],
)
def test_codes_and_full_scale_follow_from_bits_and_coding(
    text: str, low: int, high: int, full_scale: int
) -> None:
    """The deliverable codes end where the coding and the hardware's oversampling end them."""
    device = converter(text)
    assert (device.code_low, device.code_high, device.full_scale) == (low, high, full_scale)


def test_every_accepted_full_scale_is_oversampled() -> None:
    """A list of counts is accepted as a whole; shifting may leave fractions."""
    device = converter(
        "bits = 10\nfull_scale_count = [1024, 1023]\noversampling = { samples = 1, shift = 1 }"
    )
    assert device.accepted_full_scales == (512, Fraction(1023, 2))


@pytest.mark.parametrize(
    ("text", "code", "word"),
    [
        # ATmega164A..1284, DS40002070A: -400 is 0x270 right-adjusted, 0x9C00 left-adjusted.
        ("bits = 10\ncoding = 'twos-complement'\njustified = 'left'", -400, 0x9C00),
        ("bits = 10\ncoding = 'twos-complement'", -400, 0xFE70),
        ("bits = 10\ncoding = 'twos-complement'\nword_bits = 10", -400, 0x270),
        # ATtiny26 data sheet: 800 is 0x320, left-adjusted 0xC800.
        ("bits = 10\njustified = 'left'", 800, 0xC800),
        # ADS1015 (SBASAV7): 3.3 V at 4.096 V is 672h, in the register 6720h.
        ("bits = 12\ncoding = 'twos-complement'\nshift = 4", 0x672, 0x6720),
        # dsPIC33F: 1023 as a left-justified fraction is FFC0h, 513 is 8040h.
        ("bits = 10\njustified = 'left'", 1023, 0xFFC0),
        ("bits = 10\njustified = 'left'", 513, 0x8040),
        # ADS1115 (SBAS444): -FS/2^15 is FFFFh, -FS is 8000h.
        ("bits = 16\ncoding = 'twos-complement'", -1, 0xFFFF),
        ("bits = 16\ncoding = 'twos-complement'", -32768, 0x8000),
        # INA219 (SBOS448F): bus voltage 0BB3h stands 3 bits up, 5D98h.
        ("bits = 13\nshift = 3", 0x0BB3, 0x5D98),
        # Offset binary: 0x800 is zero at 12 bits (common practice).
        ("bits = 12\ncoding = 'offset-binary'", 0, 0x800),
        ("bits = 12\ncoding = 'offset-binary'", -2048, 0),
        # Active-low outputs: 2**N - 1 - code (common practice).
        ("bits = 8\ncoding = 'complementary'", 0, 0xFF),
        ("bits = 8\ncoding = 'complementary'", 200, 55),
    ],
)
def test_words_are_as_data_sheets_print_them(text: str, code: int, word: int) -> None:
    """Coding, justification and shift turn a code into the word that the firmware reads."""
    assert converter(text).words(np.array([code])).tolist() == [word]


@pytest.mark.parametrize(
    ("text", "names"),
    [
        ("bits = 12", ["bare"]),
        ("bits = 12\ncoding = 'twos-complement'", ["sign-extended", "bare"]),
        ("bits = 12\ncoding = 'twos-complement'\nword_bits = 12", ["bare"]),
        ("bits = 12\ncoding = 'twos-complement'\nword_bits = 16", ["sign-extended", "bare"]),
        ("bits = 12\ncoding = 'twos-complement'\njustified = 'left'", ["bare"]),
        ("bits = 16\ncoding = 'twos-complement'", ["bare"]),
        ("bits = 12\ncoding = 'offset-binary'", ["bare"]),
    ],
)
def test_a_narrow_signed_code_has_two_presentations(text: str, names: list[str]) -> None:
    """Sign-extended comes first; where both would be the same word there is one."""
    assert [way.name for way in converter(text).presentations] == names


def test_a_wide_result_takes_a_wide_word() -> None:
    """Without word_bits the word is 16 bits, or 32 where the result needs more."""
    assert (converter("bits = 16").word_bits, converter("bits = 17").word_bits) == (16, 32)


@pytest.mark.parametrize(
    ("text", "lsb"),
    [
        ("bits = 12", Fraction(25, 40960)),
        ("bits = 12\nreference_gain = 2", Fraction(50, 40960)),
        ("bits = 12\ninput_gain = 10", Fraction(25, 409600)),
        ("bits = 12\ncoding = 'offset-binary'", Fraction(25, 20480)),
    ],
)
def test_a_count_is_worth_its_share_of_the_reference(text: str, lsb: Fraction) -> None:
    """One LSB at the pin: reference * reference_gain / (full scale * input_gain)."""
    assert converter(text).lsb == lsb


@pytest.mark.parametrize(
    ("text", "shift"),
    [
        ("bits = 12", Fraction(0)),
        ("bits = 12\nfirst_transition = '1 LSB'", Fraction(1, 2)),
        ("bits = 8\ncode_offset = 1", Fraction(1)),
    ],
)
def test_the_middle_of_a_bin_follows_from_its_first_transition(text: str, shift: Fraction) -> None:
    """A truncating converter's code stands for half an LSB more (IEEE 1241, T[k])."""
    assert converter(text).code_shift == shift


@pytest.mark.parametrize(
    ("bits", "samples", "shift", "signed", "width"),
    [
        (12, 1, 0, False, 12),
        (12, 16, 0, False, 16),
        (10, 16, 2, False, 12),
        (12, 1, 0, True, 12),
        (12, 16, 4, True, 12),
        (12, 3, 0, True, 14),
        (12, 1024, 5, False, 17),
        (4, 1, 8, False, 1),
    ],
)
def test_results_are_as_wide_as_their_largest_code(
    bits: int, samples: int, shift: int, signed: bool, width: int
) -> None:
    """1024 samples of 12 bits shifted by 5 are 17 bits (AVR121), and so on."""
    oversampling = Oversampling(samples=samples, shift=shift)
    assert result_width(bits, signed=signed, oversampling=oversampling) == width


CODINGS = st.sampled_from(["unsigned", "twos-complement", "offset-binary", "complementary"])


@given(st.integers(2, 12), CODINGS, st.integers(0, 4), st.booleans())
def test_words_differ_for_every_code_and_fit_their_word(
    bits: int, coding: str, shift: int, left: bool
) -> None:
    """No two codes share a word, and no word is wider than stated, in every presentation."""
    place = "justified = 'left'" if left else f"shift = {shift}"
    device = converter(f"bits = {bits}\ncoding = '{coding}'\n{place}")
    codes = np.arange(device.code_low, device.code_high + 1)
    for way in device.presentations:
        words = way.words(codes)
        assert len(np.unique(words)) == len(codes)
        assert words.min() >= 0
        assert words.max() < 1 << device.word_bits
        assert not (words & ((1 << device.shift) - 1)).any()
