"""Macros of the target's own."""

import pytest

from bitweight.arithmetic.types import MODELS, DataModel
from bitweight.firmware.predefined import predefined


@pytest.mark.parametrize(
    ("architecture", "name", "value"),
    [
        ("avr", "__AVR__", "1"),
        ("avr", "__INT_MAX__", "32767"),
        ("avr", "__SIZEOF_DOUBLE__", "4"),
        ("avr", "__SIZEOF_POINTER__", "2"),
        ("arm", "__INT_MAX__", "2147483647"),
        ("arm", "__LONG_MAX__", "2147483647L"),
        ("arm", "__LONG_LONG_MAX__", "9223372036854775807LL"),
        ("host", "__SIZEOF_LONG__", "8"),
        ("host", "__linux__", "1"),
        ("stm8", "__SDCC", "1"),
        ("riscv32", "__riscv", "1"),
        ("msp430", "__SIZEOF_INT__", "2"),
        ("arm", "__GNUC__", "12"),
    ],
)
def test_a_target_has_its_macros(architecture: str, name: str, value: str) -> None:
    """Names and limits are those that the compiler of the target defines (common practice)."""
    assert predefined(architecture, MODELS[architecture])[name] == value


def test_without_an_architecture_there_are_only_widths() -> None:
    """Widths stated on their own define no architecture."""
    found = predefined(None, DataModel(int_bits=16))
    assert found["__INT_MAX__"] == "32767"
    assert "__arm__" not in found
    assert "__STDC__" in found


def test_the_compiler_of_stm8_is_not_gcc() -> None:
    """SDCC does not define __GNUC__ (common practice)."""
    assert "__GNUC__" not in predefined("stm8", MODELS["stm8"])
