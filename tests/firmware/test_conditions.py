"""The controlling expression of a conditional."""

import pytest

from bitweight.firmware.conditions import ConditionError, condition_holds
from bitweight.firmware.files import SourceFile
from bitweight.firmware.outlines import Outline
from bitweight.firmware.tokens import tokens_of


def holds(text: str) -> bool:
    return condition_holds(list(tokens_of(Outline(SourceFile("a.c", text)), 0, len(text))))


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("0", False),
        ("1 + 2 * 3 == 7", True),
        ("-1 > 0u", True),
        ("-1 > 0", False),
        ("(1 ? -1 : 0u) > 0", True),
        ("UNKNOWN", False),
        ("0 && 1 / 0", False),
        ("1 || 1 / 0", True),
        ("1 ? 2 : 1 % 0", True),
        ("-7 / 2 == -3 && -7 % 2 == -1", True),
        ("-1 >> 70 == -1", True),
        ("1 << 64 == 0", True),
        ("0x7FFFFFFFFFFFFFFF + 1 < 0", True),
        ("0xFFFFFFFFFFFFFFFF > 0", True),
        ("18446744073709551615 == -1", True),
        ("0b101 == 5 && 010 == 8 && 0X1fUL == 31", True),
        ("'a' == 97 && '\\n' == 10 && '\\x41' == 65 && '\\101' == 65", True),
        ("'ab' == 24930 && '\\377' < 0", True),
        ("!0 && ~0 == -1 && +1", True),
        ("1 == 2 != 1", True),
        ("3 & 2 ^ 1 | 4", True),
        ("(1, 0)", False),
        ("0 ? 1 : 0 ? 2 : 3", True),
        ("1 < 2 == 1", True),
    ],
)
def test_a_condition_has_its_value_in_the_widest_type(text: str, value: bool) -> None:
    """C11 6.10.1 paragraph 4, with gcc's answers where the standard has none."""
    assert holds(text) is value


@pytest.mark.parametrize(
    "text",
    [
        "",
        "1 +",
        "(1",
        "1 / 0",
        "1 % 0",
        "1.5",
        '"a"',
        "1 2",
        "= 1",
        "09",
        "''",
        "1 ? 2",
        ")",
        "0x",
        "(" * 10_000,
        "-" * 10_000,
        "1?" * 10_000,
        "1" * 10_000 + "u",
    ],
    ids=lambda text: text[:6],
)
def test_a_condition_without_value_is_an_error(text: str) -> None:
    """What gcc refuses, and what nests without end, says so."""
    with pytest.raises(ConditionError):
        holds(text)


def test_sixty_parentheses_are_followed() -> None:
    """C11 5.2.4.1 asks for 63 nested parentheses."""
    assert holds("(" * 63 + "1" + ")" * 63)
