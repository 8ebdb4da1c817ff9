"""Types, promotions and usual conversions against C11 and the compilers measured."""

import pytest

from bitweight.arithmetic.types import MODELS, CType, DataModel, Kind, type_for

AVR, HOST, DEFAULT = MODELS["avr"], MODELS["host"], DataModel()


@pytest.mark.parametrize(
    ("words", "name"),
    [
        ("int", "int"),
        ("unsigned", "unsigned int"),
        ("long unsigned", "unsigned long"),
        ("int long unsigned long", "unsigned long long"),
        ("short int", "short"),
        ("const volatile unsigned char", "unsigned char"),
        ("signed", "int"),
        ("long double", "long double"),
        ("_Bool", "_Bool"),
        ("bool", "_Bool"),
        ("static const float", "float"),
        ("float32_t", "float"),
        ("byte", "unsigned char"),
    ],
)
def test_specifiers_in_any_order_name_a_type(words: str, name: str) -> None:
    """A list of specifiers names the type of C11 6.7.2, whatever its order and qualifiers."""
    type_ = DEFAULT.named(tuple(words.split()))
    assert type_ is not None
    assert type_.name == name


@pytest.mark.parametrize("words", ["", "long long long", "unsigned float", "sensor_t", "int int"])
def test_other_words_name_no_type(words: str) -> None:
    """Words that name no arithmetic type give None."""
    assert DEFAULT.named(tuple(words.split())) is None


@pytest.mark.parametrize(
    ("name", "bits", "signed"),
    [
        ("uint8_t", 8, False),
        ("int16_t", 16, True),
        ("uint32_t", 32, False),
        ("int64_t", 64, True),
        ("uint_least16_t", 16, False),
        ("u8", 8, False),
        ("s32", 32, True),
        ("U16", 16, False),
        ("q15_t", 16, True),
        ("q31_t", 32, True),
        ("uintmax_t", 64, False),
    ],
)
@pytest.mark.parametrize("model", MODELS.values(), ids=MODELS.keys())
def test_a_width_in_a_name_holds_on_every_target(
    model: DataModel, name: str, bits: int, signed: bool
) -> None:
    """A name with a width has that width on every target, and a type of that target."""
    type_ = model.named((name,))
    assert type_ is not None
    assert (type_.bits, type_.signed) == (bits, signed)
    assert type_ in model.types.values()


@pytest.mark.parametrize(
    ("architecture", "name", "bits"),
    [
        ("avr", "size_t", 16),
        ("arm", "size_t", 32),
        ("host", "size_t", 64),
        ("avr", "uint_fast8_t", 8),
        ("avr", "int_fast16_t", 16),
        ("arm", "uint_fast8_t", 32),
        ("arm", "int_fast16_t", 32),
        ("host", "uint_fast8_t", 8),
        ("host", "int_fast16_t", 64),
        ("avr", "double", 32),
        ("stm8", "double", 32),
        ("msp430", "double", 64),
        ("avr", "int", 16),
        ("avr", "long", 32),
    ],
)
def test_widths_follow_the_target(architecture: str, name: str, bits: int) -> None:
    """Types without a width in their name follow the target (compilers' headers, from memory)."""
    type_ = MODELS[architecture].named((name,))
    assert type_ is not None
    assert type_.bits == bits


@pytest.mark.parametrize(
    ("architecture", "signed"),
    [("avr", True), ("host", True), ("arm", False), ("msp430", False), ("riscv32", False)],
)
def test_plain_char_follows_the_compiler(architecture: str, signed: bool) -> None:
    """Plain char has the sign that the target's compiler gives it without options."""
    assert MODELS[architecture].char.signed is signed


@pytest.mark.parametrize(
    ("model", "name", "promoted"),
    [
        (HOST, "unsigned short", "int"),
        (AVR, "unsigned short", "unsigned int"),
        (AVR, "unsigned char", "int"),
        (AVR, "short", "int"),
        (HOST, "_Bool", "int"),
        (HOST, "char", "int"),
        (HOST, "long", "long"),
        (HOST, "float", "float"),
    ],
)
def test_promotion_keeps_every_value(model: DataModel, name: str, promoted: str) -> None:
    """Small types become int where it holds all their values, else unsigned int (6.3.1.1p2)."""
    assert model.promote(model.types[name]).name == promoted


@pytest.mark.parametrize(
    ("model", "left", "right", "common"),
    [
        (HOST, "unsigned char", "unsigned short", "int"),
        (HOST, "int", "unsigned int", "unsigned int"),
        (HOST, "unsigned int", "long", "long"),
        (DEFAULT, "unsigned int", "long", "unsigned long"),
        (AVR, "unsigned int", "long", "long"),
        (AVR, "unsigned short", "int", "unsigned int"),
        (HOST, "long", "unsigned long", "unsigned long"),
        (HOST, "unsigned long", "long long", "unsigned long long"),
        (HOST, "float", "unsigned long long", "float"),
        (HOST, "float", "double", "double"),
        (HOST, "_Bool", "_Bool", "int"),
    ],
)
def test_usual_conversions(model: DataModel, left: str, right: str, common: str) -> None:
    """Two operands meet in the type of C11 6.3.1.8, in either order."""
    pair = model.types[left], model.types[right]
    assert model.usual(*pair).name == common
    assert model.usual(*reversed(pair)).name == common


def test_bounds_of_types() -> None:
    """A type knows its smallest and largest value."""
    assert (AVR.int_.low, AVR.int_.high) == (-32768, 32767)
    assert (AVR.unsigned.low, AVR.unsigned.high) == (0, 65535)
    assert (AVR.bool_.low, AVR.bool_.high) == (0, 1)
    assert AVR.bool_.kind is Kind.BOOL


def test_models_of_equal_widths_are_equal() -> None:
    """A model is its widths: two of the same compare equal and hash alike."""
    assert DataModel() == MODELS["arm"]
    assert hash(DataModel()) == hash(MODELS["arm"])
    assert DataModel(int_bits=16) != DataModel()


def test_no_type_is_wider_than_long_long() -> None:
    """More bits than long long has are refused; between two widths the larger is taken."""
    assert DEFAULT.integer(24, True).bits == 32
    with pytest.raises(ValueError, match="65 bits"):
        DEFAULT.integer(65, False)


def test_every_type_has_a_rank_of_its_kind() -> None:
    """Signed and unsigned forms share a rank, and wider ranks are never narrower."""
    types: list[CType] = sorted(
        (t for t in AVR.types.values() if t.is_integer), key=lambda t: t.rank
    )
    assert [t.bits for t in types] == sorted(t.bits for t in types)
    assert AVR.long.rank == AVR.unsigned_long.rank


@pytest.mark.parametrize(
    ("low", "high", "name"),
    [
        (0, 255, "uint8_t"),
        (0, 256, "uint16_t"),
        (-1, 127, "int8_t"),
        (-1, 128, "int16_t"),
        (-32768, 0, "int16_t"),
        (-32769, 0, "int32_t"),
        (0, 5115000, "uint32_t"),
        (0, 1 << 32, "uint64_t"),
    ],
)
def test_type_for(low: int, high: int, name: str) -> None:
    """The narrowest type of stdint.h that holds both ends is named (C11 7.20.1.1)."""
    assert type_for(low, high) == name
