"""What an expression means in real numbers: losses left out, bits taken apart followed."""

import math
from fractions import Fraction

import numpy as np
import pytest

from bitweight.arithmetic import building
from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.expressions import Literal, Unknown, walk
from bitweight.arithmetic.reals import affine, exact, meant, real_form, reals
from bitweight.arithmetic.types import MODELS
from properties.conversions import CONVERSIONS, PLACE, Conversion, leaves

AVR, HOST = MODELS["avr"], MODELS["host"]


def meaning(text: str, word: int, reading: str = "uint16_t") -> Fraction | None:
    """The exact real value of `text` on a target with 32-bit int."""
    return exact(Conversion(text, reading).build(HOST), word)


@pytest.mark.parametrize(
    ("text", "word", "value"),
    [
        ("x * 5000UL / 1024", 1023, Fraction(5000 * 1023, 1024)),
        ("x / 4 * 4", 5, Fraction(5)),
        ("x >> 2", 5, Fraction(5, 4)),
        ("x << 3", 5, Fraction(40)),
        ("x * 3.3f / 4096.0f", 100, Fraction(330, 4096)),
        ("(uint32_t)(3.3 / 4096 * 1e6) * x", 10, Fraction(33 * 10**6, 4096)),
        ("(int)(x * 0.1f)", 7, Fraction(7, 10)),
        ("store(uint16_t, x * 70u)", 1023, Fraction(71610)),
        ("(uint16_t)(x * 70u)", 1023, Fraction(71610)),
        ("(uint16_t)(x * 3300) / 1023", 1023, Fraction(3300)),
        ("(int16_t)(x * 40u)", 1000, Fraction(40000)),
        ("store(int16_t, x * 40u)", 1000, Fraction(40000)),
        ("store(uint8_t, x)", 1023, Fraction(1023)),
        ("(uint8_t)x", 1023, Fraction(1023)),
        ("store(uint16_t, x - 512)", 500, Fraction(-12)),
        ("(uint8_t)(x >> 8) * 20", 0x1280, Fraction(370)),
        ("x * 4000000000u", 2, Fraction(8000000000)),
        ("-(x * 1u)", 5, Fraction(-5)),
    ],
)
def test_losses_are_left_out(text: str, word: int, value: Fraction) -> None:
    """Truncation, wrap, overflow and narrowing of quantities are not part of the meaning."""
    assert meaning(text, word) == value


@pytest.mark.parametrize(
    ("text", "word", "value"),
    [
        ("x / 64 * 64 + x % 64", 100, Fraction(100)),
        ("(x / 64) * 6600u / 64u + (x % 64) * 6600u / 4096u", 1521, Fraction(6600 * 1521, 4096)),
        ("(x >> 6) * 64 + (x & 63)", 100, Fraction(100)),
        ("(x >> 6) * 64 + (x & 31)", 100, Fraction(104)),
        ("x / 64 * 64 + x % 32", 100, Fraction(104)),
        ("(x >> 11) == 0 ? x : 7", 2047, Fraction(2047)),
        ("(x >> 11) == 1 ? x / 2 : 7", 2049, Fraction(2049, 2)),
        ("x / 100 > 10 ? 1 : 0", 1099, Fraction(0)),
    ],
)
def test_whole_parts_that_are_meant_stay(text: str, word: int, value: Fraction) -> None:
    """A quotient beside its own remainder, and what only decides, keep their whole part."""
    assert meaning(text, word) == value


@pytest.mark.parametrize(
    ("text", "word", "value"),
    [
        ("(int16_t)(x << 4) >> 4", 0x800, -2048),
        ("(int16_t)(x << 4) >> 4", 0x7FF, 2047),
        ("(int16_t)(x << 4) / 16", 0xFFF, -1),
        ("(int16_t)x >> 4", 0xFFF0, -1),
        ("((int32_t)x << 20) >> 20", 0xFFF, -1),
        ("((uint32_t)x << 20) >> 20", 0xF123, 0x123),
        ("x > 2047 ? x - 4096 : x", 2048, -2048),
        ("((x & 0x0FFF) ^ 0x800) - 0x800", 0x800, -2048),
        ("(int8_t)x", 200, -56),
        ("(int8_t)x", 0x3C8, -56),
        ("store(int16_t, x)", 0xFFF0, -16),
        ("store(int16_t, (uint32_t)x)", 0xFFF0, -16),
        ("(int16_t)(x ^ 0x8000)", 0, -32768),
        ("(int16_t)(x - 0x8000)", 0, -32768),
        ("(int16_t)(x + 0x8000)", 1, -32767),
        ("store(uint16_t, ~x)", 1000, 64535),
        ("~x & 0x3FF", 1000, 23),
        ("~(x * 1u) & 0xFFFF", 1000, 64535),
        ("(uint16_t)((x << 8) | (x >> 8))", 0x1234, 0x3412),
        ("store(uint16_t, (x << 8) | (x >> 8))", 0x1234, 0x3412),
        ("((x & 0xFF) << 8) + (x >> 8)", 0x1234, 0x3412),
        ("(uint16_t)(int16_t)x", 0xFFFF, 65535),
        ("(uint32_t)(int16_t)x", 0xFFFF, -1),
        ("(int16_t)x * 3300u / 32768", 0x8000, -3300),
        ("(x & 0xF000) >> 12", 0xA123, 0xA),
        ("x % 256", 0x1234, 0x34),
        ("(x * 5) % 100", 50, 50),
        ("-(x * 3) % 100", 50, -50),
    ],
)
def test_bits_taken_apart_are_followed(text: str, word: int, value: int) -> None:
    """Two's complement, sign extension, masks, complements and byte order are decoded."""
    assert meaning(text, word) == value


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("~0u", 4294967295),
        ("(uint16_t)-1", 65535),
        ("store(uint8_t, ~0x0F)", 240),
        ("store(uint8_t, 300)", 300),
        ("(int16_t)0x8000", -32768),
        ("(1 << 12) - 1", 4095),
        ("5000 / 1024", Fraction(5000, 1024)),
        ("3.30f", Fraction(33, 10)),
        ("0.1 == 0.1f", 1),
        ("!0 + !5", 1),
        ("3 && 0 || 0", 0),
        ("2 || 1 / 0", 1),
        ("0 && 1 / 0", 0),
        ("1 ? 4 : 1 / 0", 4),
    ],
)
def test_constants_mean_what_they_spell(text: str, value: Fraction | int) -> None:
    """Constants are exact decimals; complements and masks of constants keep their bits."""
    assert meaning(text, 0) == value


@pytest.mark.parametrize("text", ["x / 0", "x % 0", "1 / (x - x)", "x << 300", "x & (1 / 0)"])
def test_what_has_no_value_is_none(text: str) -> None:
    """Division by zero and absurd shifts have no value; nothing is raised."""
    assert meaning(text, 5) is None
    assert np.isnan(reals(Conversion(text).build(HOST), lambda _: np.array([5]))).all()


def test_an_unknown_spoils_only_what_depends_on_it() -> None:
    """A condition that avoids the unknown has a value, one that takes it has none."""
    reading = Conversion("x").build(HOST)
    hidden = Unknown(reason="trim is not defined", type=HOST.unsigned_short)
    node = building.merge(Conversion("x > 3").build(HOST), hidden, reading, PLACE)
    assert exact(node, 2) == 2
    assert exact(node, 4) is None
    assert np.isnan(reals(node, lambda _: np.array([2, 4]))).tolist() == [False, True]


def test_growing_fractions_are_bounded() -> None:
    """Squaring over and over ends in no value instead of endless digits."""
    node = Conversion("x").build(HOST)
    for _ in range(64):
        node = building.binary(HOST, "*", node, node, PLACE)
    assert exact(node, 3) is None


def test_replacing_a_constant_replaces_all_its_uses() -> None:
    """A replaced constant changes the value wherever the same spelling is used."""
    node = Conversion("x * 5000UL / 1024").build(HOST)
    leaf = leaves(walk(node))["1024"]
    twice = building.binary(HOST, "+", node, node, PLACE)
    replace = {(leaf.place, leaf.text): Fraction(1000)}
    assert exact(twice, 10, replace) == 100
    assert reals(twice, lambda _: np.array([10]), replace).tolist() == [100.0]
    assert exact(twice, 10) == Fraction(2 * 50000, 1024)


@pytest.mark.parametrize(
    ("text", "line"),
    [
        ("x * 5000UL / 1024", (Fraction(5000, 1024), 0)),
        ("(x * 3300u + 2048) / 4096 - 50", (Fraction(3300, 4096), Fraction(1, 2) - 50)),
        ("(x - 512) * 2.5f", (Fraction(5, 2), -1280)),
        ("42", (0, 42)),
        ("x * x", None),
        ("100 / x", None),
        ("x > 900 ? 900 : x", None),
    ],
)
def test_an_exact_line_or_none(text: str, line: tuple[Fraction, Fraction] | None) -> None:
    """Gain and offset are exact where the meaning is a line, and absent where it is none."""
    assert affine(Conversion(text).build(HOST), (0, 1, 512, 1023)) == line


def test_a_line_needs_two_words() -> None:
    """A single word, however often, makes no line."""
    node = Conversion("x * 2").build(HOST)
    assert affine(node, (3,)) is None
    assert affine(node, (3, 3)) is None


@pytest.mark.parametrize(
    ("value", "type_name", "number"),
    [
        (0.1, "double", Fraction(1, 10)),
        (3.299999952316284, "float", Fraction(33, 10)),
        (1e300, "double", Fraction(10) ** 300),
        (math.inf, "double", None),
        (7, "int", Fraction(7)),
        (2, "float", Fraction(2)),
    ],
)
def test_a_number_without_spelling_means_its_shortest_decimal(
    value: float, type_name: str, number: Fraction | None
) -> None:
    """A computed constant stands for the shortest decimal that reads back as it."""
    assert meant(Literal(value=value, type=HOST.types[type_name])) == number


@pytest.mark.parametrize("conversion", CONVERSIONS, ids=lambda c: c.text)
def test_both_forms_agree(conversion: Conversion) -> None:
    """The quick form over all codes is the exact form, to the digits of binary64."""
    form = real_form(conversion.build(HOST))
    words = np.array([0, 1, 2, 5, 127, 128, 255, 256, 1023, 2047, 2048, 4095, 32768, 65535])
    quick = np.broadcast_to(form.floats(lambda _: words), words.shape)
    for word, value in zip(words.tolist(), quick.tolist(), strict=True):
        wanted = form.exact(word)
        if wanted is None:
            assert math.isnan(value)
        else:
            assert value == pytest.approx(float(wanted), rel=1e-12, abs=1e-12)


@pytest.mark.parametrize("conversion", CONVERSIONS[:10], ids=lambda c: c.text)
def test_meaning_and_target_differ_by_truncation_only(conversion: Conversion) -> None:
    """Below the first fault the target's value lies within its truncations of the meaning."""
    node, words = conversion.build(HOST), np.arange(4096)
    curve = evaluate(node, lambda _: words)
    sound = ~curve.faulty()
    difference = np.abs(curve.values - reals(node, lambda _: words))[sound]
    assert sound.sum() >= 20
    assert difference.max() <= 3
