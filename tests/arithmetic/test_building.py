"""Expressions built from operators, and the constants folded from them."""

import pytest

from bitweight.arithmetic import building
from bitweight.arithmetic.building import Folder
from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Convert,
    Default,
    Expression,
    Literal,
    Purpose,
    Unknown,
)
from bitweight.arithmetic.types import MODELS, DataModel
from properties.conversions import PLACE, Conversion

AVR, HOST = MODELS["avr"], MODELS["host"]
HIDDEN = Unknown(reason="tank_trim is set by other code", type=HOST.int_, place=PLACE)
READING = Conversion("x").build(HOST)


def whole(value: int, model: DataModel = HOST) -> Literal:
    """An int constant."""
    return Literal(value=value, type=model.int_)


def test_implicit_conversions_are_written_out() -> None:
    """A small operand is converted to the common type, one that has it already is left alone."""
    node = building.binary(HOST, "+", READING, whole(1), PLACE)
    left, right = node.left, node.right  # type: ignore[union-attr]
    assert isinstance(left, Convert)
    assert (left.purpose, left.type) == (Purpose.BALANCE, HOST.int_)
    assert isinstance(right, Literal)


def test_a_shift_has_the_type_of_its_left_operand() -> None:
    """The operands of a shift are promoted apart (C11 6.5.7p3)."""
    node = building.binary(HOST, "<<", READING, Literal(value=3, type=HOST.long_long), PLACE)
    assert node.type == HOST.int_


@pytest.mark.parametrize("operator", ["<", "==", "&&", "||"])
def test_truth_values_are_int(operator: str) -> None:
    """Comparisons and logical operators give int, whatever their operands."""
    double = Literal(value=0.5, type=HOST.double)
    assert building.binary(HOST, operator, READING, double, PLACE).type == HOST.int_
    assert building.unary(HOST, "!", double, PLACE).type == HOST.int_


@pytest.mark.parametrize("operator", ["+", "<<", "<", "&&", "%"])
def test_an_unknown_operand_keeps_its_reason(operator: str) -> None:
    """A result that depends on an unknown is unknown for the same reason, on either side."""
    for pair in ((HIDDEN, READING), (READING, HIDDEN)):
        node = building.binary(HOST, operator, *pair, PLACE)
        assert isinstance(node, Unknown)
        assert (node.reason, node.place) == (HIDDEN.reason, HIDDEN.place)
    assert isinstance(building.unary(HOST, "-", HIDDEN, PLACE), Unknown)
    assert isinstance(building.convert(HIDDEN, HOST.long, Purpose.CAST, PLACE), Unknown)


@pytest.mark.parametrize(("operator", "value"), [("&&", 0), ("||", 3)])
def test_a_deciding_constant_outweighs_an_unknown(operator: str, value: int) -> None:
    """`0 && unknown` is 0 and `3 || unknown` is 1, on either side; else the unknown stays."""
    for pair in ((whole(value), HIDDEN), (HIDDEN, whole(value))):
        node = building.binary(HOST, operator, *pair, PLACE)
        assert isinstance(node, Literal)
        assert node.value == int(value != 0)
    other = building.binary(HOST, operator, whole(int(not value)), HIDDEN, PLACE)
    assert isinstance(other, Unknown)


@pytest.mark.parametrize("operator", ["&&", "||"])
def test_a_known_left_side_is_evaluated_all_the_same(operator: str) -> None:
    """A constant on the right decides the value, but the left side is still computed."""
    right = whole(int(operator == "||"))
    assert isinstance(building.binary(HOST, operator, READING, right, PLACE), Binary)


def test_zero_times_unknown_stays_unknown() -> None:
    """No algebra is done on unknowns."""
    assert isinstance(building.binary(HOST, "*", whole(0), HIDDEN, PLACE), Unknown)


@pytest.mark.parametrize("operator", ["%", "&", "|", "^", "<<", ">>"])
def test_integer_operators_refuse_floating_operands(operator: str) -> None:
    """What a compiler would refuse becomes an unknown that says so."""
    node = building.binary(HOST, operator, READING, Literal(value=1.0, type=HOST.float_), PLACE)
    assert isinstance(node, Unknown)
    assert "float" in node.reason


def test_arms_take_their_common_type() -> None:
    """Both arms of a condition are promoted and balanced (C11 6.5.15p5)."""
    node = building.choose(HOST, READING, READING, whole(1), PLACE)
    assert isinstance(node, Choose)
    assert node.type == node.then.type == node.other.type == HOST.int_


def test_a_constant_condition_leaves_one_arm() -> None:
    """The arm that is never taken disappears, an unknown in it too."""
    assert building.merge(whole(0), HIDDEN, READING, PLACE) is READING
    assert building.merge(whole(1), READING, HIDDEN, PLACE) is READING


def test_an_unknown_condition_matters_unless_the_arms_are_one() -> None:
    """An unknown condition makes the result unknown, except between an expression and itself."""
    assert isinstance(building.merge(HIDDEN, READING, whole(1), PLACE), Unknown)
    assert building.merge(HIDDEN, READING, READING, PLACE) is READING


def test_an_unknown_arm_stays_an_arm() -> None:
    """One unknown arm leaves a condition to be decided by code; two leave an unknown."""
    assert isinstance(building.merge(READING, HIDDEN, whole(1), PLACE), Choose)
    assert isinstance(building.merge(READING, HIDDEN, HIDDEN, PLACE), Unknown)


@pytest.mark.parametrize(
    ("text", "host", "avr"),
    [
        ("1 << 12", 4096, 4096),
        ("(1 << 12) - 1", 4095, 4095),
        ("1023 * 64", 65472, -64),
        ("5000 / 1024", 4, 4),
        ("3.3f * 2", 6.599999904632568, 6.599999904632568),
        ("(uint8_t)300", 44, 44),
        ("1 / 0", None, None),
        ("1 % 0", None, None),
        ("1.0 / 0", None, None),
        ("1 << 20", 1 << 20, None),
        ("(uint8_t)1000.0", None, None),
        ("1 ? 5 : x", 5, 5),
        ("0 ? x : 2.0", 2.0, 2.0),
        ("0 && x", 0, 0),
        ("x && 0", 0, 0),
        ("x || 1", 1, 1),
        ("x + 1", None, None),
        ("x ? 1 : 2", None, None),
        ("0 && 1 / 0", 0, 0),
    ],
)
def test_values_of_constant_expressions(text: str, host: float | None, avr: float | None) -> None:
    """A constant expression has its C value on the target, or none if C or a reading denies it."""
    for model, value in ((HOST, host), (AVR, avr)):
        found = Folder(model).constant(Conversion(text).build(model))
        assert found == value
        assert type(found) is type(value)


def test_a_default_folds_to_its_initialiser() -> None:
    """An object with a declared default stands for that default."""
    node = Default(name="gain", operand=whole(7), type=HOST.int_, place=PLACE)
    assert Folder(HOST).constant(node) == 7


def test_a_long_chain_is_folded_step_by_step() -> None:
    """Each step of an unrolled loop costs only itself, and no recursion."""
    folder = Folder(HOST)
    node: Expression = whole(0)
    for _ in range(20_000):
        node = building.binary(HOST, "+", node, whole(1), PLACE)
        folder.constant(node)
    assert folder.constant(node) == 20_000
    assert Folder(HOST).constant(node) == 20_000
