"""What [constants] says of C expressions."""

from fractions import Fraction

import pytest

from bitweight.board.decoding.constants import ROLES
from bitweight.board.hardware import ConstantFact
from board.mistaken import mistakes_of
from board.parts import SUPPLIES, board

DIVIDER = "{ kind='divider', top='R1 10k', bottom='10k' }"


def constant(text: str) -> ConstantFact:
    """The only constant of a board."""
    return board(DIVIDER, rest=f"[constants]\n{text}\n").constants[0]


@pytest.mark.parametrize("role", [role for role in ROLES if role != "code"])
def test_every_role_is_known_alone(role: str) -> None:
    """A role without a name is that of the channel at hand."""
    made = constant(f"X = '{role}'")
    assert (made.role, made.name) == (role, None)


@pytest.mark.parametrize(
    ("text", "role", "name"),
    [
        ("'reference vref'", "reference", "vref"),
        ("'resistance R1'", "resistance", "R1"),
        ("'divider x'", "divider", "x"),
        ("'inverse divider x'", "inverse divider", "x"),
        ("'full-scale adc'", "full-scale", "adc"),
        ("{ is = 'code x', at = '1 V' }", "code", "x"),
    ],
)
def test_a_role_may_have_a_name(text: str, role: str, name: str) -> None:
    """The name is a reference, part, channel or converter."""
    made = constant(f"X = {text}")
    assert (made.role, made.name) == (role, name)


def test_an_expression_may_be_limited_to_a_place() -> None:
    """What follows @ is the function or file."""
    made = constant("'offset @ motor.c' = 'offset'")
    assert (made.expression, made.where) == ("offset", "motor.c")
    plain = constant("'cfg->scale' = 'divider'")
    assert (plain.expression, plain.where) == ("cfg->scale", None)


def test_a_value_stands_in_for_run_time_data() -> None:
    """A number is exact and has no role."""
    made = constant("X = { value = 13.164 }")
    assert (made.value, made.role) == (Fraction("13.164"), None)


def test_a_unit_says_what_one_count_is() -> None:
    """VREF_MV in millivolts."""
    made = constant("X = { is = 'reference', unit = 'mV' }")
    assert made.unit is not None
    assert made.unit.scale == Fraction(1, 1000)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("X = 'refrence'", "unknown role \"refrence\", did you mean 'reference'?"),
        ("X = 'zzz'", 'unknown role "zzz"; known roles: full-scale'),
        ("X = 'resistance R9'", "'R9' is not known as a resistance; known: R1"),
        ("X = { is = 'gain', value = 3 }", "is and value are both given"),
        ("X = { unit = 'mV' }", "missing key 'is' or 'value'"),
        ("X = { is = 'code x' }", "missing key 'at'"),
        ("X = { is = 'code x', at = '1 A' }", "at is in A but the channel's unit is V"),
        ("X = true", "expected a role like"),
        ("X = { is = 'full-scale', unit = 'V' }", "a full-scale is in a plain number, found"),
        ("X = { is = 'reference', unit = 'furlong' }", "a reference is in V, found the unit"),
        ("'x @ ' = 'gain'", "expected a function or a file after @"),
        ("' @ motor.c' = 'gain'", "expected a C expression as the key"),
    ],
)
def test_a_wrong_constant_is_a_mistake(text: str, message: str) -> None:
    """Each says what was expected."""
    found = mistakes_of(
        f"{SUPPLIES}[converter.adc]\nbits = 12\n[channel.x]\nchain = [{DIVIDER}]\n"
        f"[constants]\n{text}\n"
    )
    assert [message in mistake.message for mistake in found] == [True]
