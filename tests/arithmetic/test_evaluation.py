"""Expressions over all codes: values, and faults counted only where they are evaluated."""

import numpy as np
import pytest

from bitweight.arithmetic import building
from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.expressions import Code, Expression, Literal, Unknown
from bitweight.arithmetic.types import MODELS, DataModel
from bitweight.arithmetic.values import FaultKind
from bitweight.limits import Limits
from properties.conversions import CONVERSIONS, PLACE, Conversion

AVR, HOST = MODELS["avr"], MODELS["host"]


def value_at(text: str, word: int, model: DataModel, reading: str = "uint16_t") -> float:
    """What `text` computes for one raw word."""
    node = Conversion(text, reading).build(model)
    return float(evaluate(node, lambda _: np.array([word])).values[0])


def kinds(text: str, words: np.ndarray, model: DataModel, reading: str = "uint16_t") -> set[str]:
    """The names of all faults of `text` over some words."""
    curve = evaluate(Conversion(text, reading).build(model), lambda _: words)
    return {fault.kind.name for fault in curve.faults}


@pytest.mark.parametrize(
    ("text", "reading", "word", "host", "avr"),
    [
        # measured with gcc 12 for x86-64 and avr-gcc 5.4 for ATmega328P
        ("x + (uint8_t)200", "uint8_t", 200, 400, 400),
        ("(uint8_t)~x >> 1", "uint8_t", 200, 27, 27),
        ("~x >> 4", "uint8_t", 200, -13, -13),
        ("x * 5000 / 1024", "uint16_t", 1023, 4995, 3),
        ("x * 5000L / 1024", "uint16_t", 1023, 4995, 4995),
        ("x * 5000UL / 1024", "uint16_t", 1023, 4995, 4995),
        ("x * 3300u / 4096", "uint16_t", 4095, 3299, 3),
        ("x * 3300ul / 4096", "uint16_t", 4095, 3299, 3299),
        ("(uint32_t)(x * 64)", "uint16_t", 1023, 65472, 65472),
        ("(uint32_t)(x * 65)", "uint16_t", 1023, 66495, 959),
        ("x - (uint16_t)513", "uint16_t", 512, -1, 65535),
        ("x - (uint8_t)200", "uint8_t", 100, -100, -100),
        ("x < (uint16_t)1023", "int16_t", -1, 1, 0),
        ("x < 1u", "int32_t", -1, 0, 1),
        ("x < (uint32_t)1023", "int32_t", -1, 0, 0),
        ("x + 1", "uint16_t", 65535, 65536, 0),
        ("0xFFFF + 1", "uint16_t", 0, 65536, 0),
        ("65535 + 1", "uint16_t", 0, 65536, 65536),
        ("-1 < 0x8000", "uint16_t", 0, 1, 0),
        ("x / 2", "int16_t", -7, -3, -3),
        ("x % 2", "int16_t", -7, -1, -1),
        ("x >> 1", "int16_t", -7, -4, -4),
        ("(int)3.99f", "uint16_t", 0, 3, 3),
        ("(int)-3.99f", "uint16_t", 0, -3, -3),
        ("(float)16777217", "uint16_t", 0, 16777216, 16777216),
        ("1.1 == 1.1f", "uint16_t", 0, 0, 1),
    ],
)
def test_values_measured_on_two_compilers(
    text: str, reading: str, word: int, host: float, avr: float
) -> None:
    """An expression has the value that was measured with 32-bit and with 16-bit int."""
    assert value_at(text, word, HOST, reading) == host
    assert value_at(text, word, AVR, reading) == avr


@pytest.mark.parametrize(
    ("text", "reading", "kind", "first"),
    [
        ("x * 33", "int16_t", FaultKind.OVERFLOW, 993),
        ("x * 70u", "uint16_t", FaultKind.WRAP, 937),
        ("100 / (x - 5)", "int16_t", FaultKind.DIVISION, 5),
        ("100 % (x - 5)", "int16_t", FaultKind.DIVISION, 5),
        ("1.0f / (x - 7)", "int16_t", FaultKind.DIVISION, 7),
        ("1 << x", "int16_t", FaultKind.SHIFT, 16),
        ("1L << (x - 3)", "int16_t", FaultKind.SHIFT, 0),
        ("x << 6", "int16_t", FaultKind.SIGNED_SHIFT, 512),
        ("(x - 1) << 1", "int16_t", FaultKind.NEGATIVE_SHIFT, 0),
        ("(uint16_t)(x * 100.0f)", "uint16_t", FaultKind.CONVERSION, 656),
        ("(uint8_t)(x * 1.0f)", "uint16_t", FaultKind.CONVERSION, 256),
        ("(uint8_t)x", "uint16_t", FaultKind.TRUNCATED, 256),
        ("store(uint8_t, x + 6)", "uint16_t", FaultKind.TRUNCATED, 250),
        ("(x - 2) + 0u", "int16_t", FaultKind.SIGN, 0),
        ("-x - 32760", "int16_t", FaultKind.OVERFLOW, 9),
    ],
)
def test_the_first_code_of_a_fault(text: str, reading: str, kind: FaultKind, first: int) -> None:
    """A fault is reported with its kind, its operator and the first code at which it happens."""
    curve = evaluate(Conversion(text, reading).build(AVR), lambda _: np.arange(1024))
    found = [fault for fault in curve.faults if fault.kind is kind]
    assert [fault.first_index for fault in found] == [first]
    assert found[0].mask[first]
    assert not found[0].mask[:first].any()


@pytest.mark.parametrize(
    "text",
    ["x * 5000UL / 1024", "(x * 33) >> 1", "x ? 100 / x : 0", "x && 100 / x", "!x || 100 % x > 3",
     "(int16_t)(x << 4)", "x * 1.0f", "x < 5 ? 1 << x : 0", "(uint8_t)(x & 0xFF)", "-x"],
)  # fmt: skip
def test_sound_expressions_have_no_fault(text: str) -> None:
    """Nothing is reported where all codes are computed as C defines it."""
    assert kinds(text, np.arange(993), AVR, "int16_t") == set()


def test_the_most_negative_value_by_minus_one_overflows() -> None:
    """The quotient that does not fit wraps to itself, its remainder is 0 (two's complement)."""
    words = np.array([-32768, 5])
    for text, wanted in (("x / -1", [-32768, -5]), ("x % -1", [0, 0])):
        curve = evaluate(Conversion(text, "int16_t").build(AVR), lambda _: words)
        assert curve.values.tolist() == wanted
        assert curve.faulty(FaultKind.OVERFLOW).tolist() == [True, False]


@pytest.mark.parametrize(
    ("text", "word", "value"),
    [
        ("x * 4294967296u", 2**33, 0),
        ("x * x", 2**32 + 1, 2**33 + 1),
        ("x + 18446744073709551615u", 5, 4),
        ("x - 6", 5, 2**64 - 1),
        ("x / 10", 2**63 + 7, (2**63 + 7) // 10),
        ("x % 1000", 2**63 + 7, (2**63 + 7) % 1000),
        ("x >> 1", 2**63 + 7, 2**62 + 3),
        ("~x", 0, 2**64 - 1),
    ],
)
def test_unsigned_64_bit_values_are_exact(text: str, word: int, value: int) -> None:
    """64-bit unsigned arithmetic keeps every bit; words above 2**63 arrive as negative int64."""
    node = Conversion(text, "uint64_t").build(HOST)
    raw = np.array([word - (1 << 64) if word >> 63 else word])
    curve = evaluate(node, lambda _: raw)
    assert curve.values.dtype == np.uint64
    assert int(curve.values[0]) == value


@pytest.mark.parametrize(
    ("text", "faulty"),
    [
        ("x + 1", [False, True, False]),
        ("x * 2", [False, True, True]),
        ("x * -1", [False, False, True]),
        ("x - 1", [False, False, True]),
        ("-x", [False, False, True]),
        ("x / -1", [False, False, True]),
    ],
)
def test_64_bit_overflow_is_found(text: str, faulty: list[bool]) -> None:
    """Signed 64-bit overflow is reported at exactly the words that overflow."""
    words = np.array([5, 2**63 - 1, -(2**63)])
    curve = evaluate(Conversion(text, "int64_t").build(HOST), lambda _: words)
    assert curve.faulty(FaultKind.OVERFLOW).tolist() == faulty


def test_integers_become_float_in_one_rounding() -> None:
    """A 64-bit integer is rounded straight to binary32, not through binary64."""
    word = 2**61 + 2**37 + 1  # rounds up directly, but to even (down) if rounded to binary64 first
    assert value_at("(float)x", word, HOST, "int64_t") == 2.0**61 + 2.0**38


def test_a_constant_is_an_array_of_one() -> None:
    """An expression without readings has one value."""
    curve = evaluate(Conversion("5000 / 1024").build(HOST), lambda _: np.arange(9))
    assert curve.values.tolist() == [4]


def test_an_unknown_matters_only_where_it_is_taken() -> None:
    """An unknown arm is reported for the codes that choose it."""
    reading = Conversion("x").build(HOST)
    many = building.binary(HOST, ">", reading, Literal(value=6, type=HOST.int_), PLACE)
    hidden = Unknown(reason="tank_trim is not defined", type=HOST.int_)
    node = building.choose(HOST, many, hidden, reading, PLACE)
    curve = evaluate(node, lambda _: np.arange(8))
    assert curve.faulty(FaultKind.UNKNOWN).tolist() == [False] * 7 + [True]
    assert [fault.node for fault in curve.faults] == [hidden]


def test_a_shared_operand_is_faulty_wherever_it_is_used() -> None:
    """An operand of both arms is evaluated for all codes, one of a single arm for its codes."""
    reading = Conversion("x", "int16_t").build(AVR)
    product = building.binary(AVR, "*", reading, Literal(value=33, type=AVR.int_), PLACE)
    shown = building.unary(AVR, "-", product, PLACE)
    once = building.choose(AVR, Conversion("0").build(AVR), reading, product, PLACE)
    both = building.merge(
        building.binary(AVR, "<", reading, Literal(value=1000, type=AVR.int_), PLACE),
        product, shown, PLACE,
    )  # fmt: skip
    words = np.arange(990, 1010)
    for node in (once, both):
        assert evaluate(node, lambda _: words).faulty(FaultKind.OVERFLOW).tolist() == [
            word > 992 for word in words
        ]


def test_a_word_that_the_reading_cannot_hold_is_cut() -> None:
    """A ten-bit word read through an eight-bit type loses its top; two's complement does not."""
    assert kinds("x", np.array([255]), AVR, "uint8_t") == set()
    assert kinds("x", np.array([256]), AVR, "uint8_t") == {"TRUNCATED"}
    assert kinds("x", np.array([0xFFF0]), AVR, "int16_t") == set()
    assert value_at("x", 0xFFF0, AVR, "int16_t") == -16


@pytest.mark.parametrize("conversion", CONVERSIONS, ids=lambda c: c.text)
@pytest.mark.parametrize("model", [AVR, HOST], ids=["avr", "host"])
def test_blocks_change_nothing(conversion: Conversion, model: DataModel) -> None:
    """Values and faults are the same whatever the size of the blocks."""
    node, words = conversion.build(model), np.arange(5000)
    whole = evaluate(node, lambda _: words)
    parts = evaluate(node, lambda _: words, Limits(block_codes=777))
    np.testing.assert_array_equal(whole.values, parts.values)
    assert len(whole.faults) == len(parts.faults)
    for one, other in zip(whole.faults, parts.faults, strict=True):
        assert (one.kind, one.node, one.first_index) == (other.kind, other.node, other.first_index)
        np.testing.assert_array_equal(one.mask, other.mask)


@pytest.mark.parametrize("text", ["x * 3 / 7", "(int)(x * 0.5f)", "5 << x", "x ? 1 / x : 2"])
def test_no_codes_give_no_values(text: str) -> None:
    """A reading without words gives an empty curve."""
    curve = evaluate(Conversion(text).build(HOST), lambda _: np.array([], dtype=np.int64))
    assert curve.values.size == 0
    assert curve.faults == ()


def test_readings_must_be_of_one_length() -> None:
    """Two readings with different numbers of words are refused."""
    pair = [Code(channels=(), text=name, type=HOST.int_, place=PLACE) for name in "ab"]
    node = building.binary(HOST, "+", *pair, PLACE)
    with pytest.raises(ValueError, match="different lengths"):
        evaluate(node, lambda code: np.arange(3 if code.text == "a" else 4))


def test_deep_expressions_are_no_recursion() -> None:
    """A chain of a hundred thousand operators is evaluated, also where each is a condition."""
    reading: Expression = Conversion("x").build(HOST)
    one = Literal(value=1, type=HOST.int_)
    node = reading
    for turn in range(50_000):
        node = building.binary(HOST, "+", node, one, PLACE)
        if turn % 2:
            node = building.binary(HOST, "&&", node, one, PLACE)
    assert evaluate(node, lambda _: np.arange(3)).values.tolist() == [1, 1, 1]
