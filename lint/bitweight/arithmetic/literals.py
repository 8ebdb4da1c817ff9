"""C constants as text: their value and type (C11 6.4.4), and how exactly they are written.

Enters: the spelling of one integer, floating or character constant. Leaves: value and type for a
data model; the exact rational number; half of the last written digit.
"""

import re
from collections.abc import Iterator
from fractions import Fraction

from bitweight.arithmetic.scalars import nearest, wrap
from bitweight.arithmetic.types import CType, DataModel

_INTEGER = re.compile(
    r"(?P<digits>0[xX][0-9a-fA-F]+|0[bB][01]+|0[0-7]*|[1-9][0-9]*)"
    r"(?P<suffix>[uU]?(?:l|L|ll|LL)?|(?:l|L|ll|LL)[uU])"
)
_DECIMAL = re.compile(
    r"(?P<whole>[0-9]*)(?P<point>\.?)(?P<part>[0-9]*)(?:[eE](?P<exponent>[+-]?[0-9]+))?"
    r"(?P<suffix>[fFlL]?)"
)
_HEXADECIMAL = re.compile(
    r"0[xX](?P<whole>[0-9a-fA-F]*)(?P<point>\.?)(?P<part>[0-9a-fA-F]*)[pP](?P<exponent>[+-]?[0-9]+)"
    r"(?P<suffix>[fFlL]?)"
)
_CHARACTER = re.compile(
    r"'(?:\\(?P<octal>[0-7]{1,3})|\\x(?P<hex>[0-9a-fA-F]+)|\\(?P<escape>[abfnrtv\\'\"?])"
    r"|(?P<plain>[^'\\\n]))'"
)
_ESCAPES = {"a": 7, "b": 8, "f": 12, "n": 10, "r": 13, "t": 9, "v": 11}
_LARGEST_EXPONENT = 5_000
"""Powers beyond this are no quantity of any board; they would cost time without end."""
_LONGEST = 1_000
"""Characters of the longest constant that is read."""


def literal(text: str, model: DataModel) -> tuple[int | float, CType]:
    """Value and type of a constant; ValueError where the text is no constant of C."""
    if len(text) > _LONGEST:
        raise ValueError(f"a constant of {len(text)} characters is not read")
    if match := _INTEGER.fullmatch(text):
        value = _whole(match["digits"])
        return value, _integer_type(value, match["digits"], match["suffix"].lower(), model)
    if text.startswith("'"):
        return _character(text, model), model.int_
    match = _floating_match(text)
    type_ = {"f": model.float_, "l": model.long_double}.get(match["suffix"].lower(), model.double)
    return nearest(_fraction(match), type_.bits), type_


def literal_type(text: str, model: DataModel) -> CType:
    """The type of a constant; ValueError where the text is no constant of C."""
    return literal(text, model)[1]


def exact_value(text: str) -> Fraction | None:
    """The number a numeric constant spells, before any rounding; None for any other text."""
    try:
        if match := _INTEGER.fullmatch(text[:_LONGEST]):
            return Fraction(_whole(match["digits"]))
        return _fraction(_floating_match(text))
    except ValueError:
        return None


def half_digit(text: str) -> Fraction | None:
    """Half of the last written digit of a constant, None for any other text.

    "3.30" gives 0.005, "0x3FF" and "5000UL" 1/2, "1.50e3" 5. A mantissa without a decimal point
    before a positive power of ten, "1e3", is a way to write a whole number and gives 1/2.
    """
    if len(text) > _LONGEST:
        return None
    if _INTEGER.fullmatch(text) or _CHARACTER.fullmatch(text):
        return Fraction(1, 2)
    try:
        match = _floating_match(text)
        weight = _last_digit(match)
    except ValueError:
        return None
    return (weight if match["point"] else min(weight, Fraction(1))) / 2


def _whole(digits: str) -> int:
    if digits[:2].lower() in ("0x", "0b"):
        return int(digits, 0)
    return int(digits, 8 if digits.startswith("0") else 10)


def _candidates(digits: str, suffix: str, model: DataModel) -> Iterator[CType]:
    """The types a constant may have, in the order of the table of C11 6.4.4.1p5."""
    pairs = (
        (model.int_, model.unsigned),
        (model.long, model.unsigned_long),
        (model.long_long, model.unsigned_long_long),
    )
    decimal = not digits.startswith("0")
    for signed, unsigned in pairs[suffix.count("l") :]:
        if "u" not in suffix:
            yield signed
        if "u" in suffix or not decimal:
            yield unsigned
    # Compilers give a decimal constant beyond long long the unsigned type, with a warning.
    yield model.unsigned_long_long


def _integer_type(value: int, digits: str, suffix: str, model: DataModel) -> CType:
    for type_ in _candidates(digits, suffix, model):
        if value <= type_.high:
            return type_
    raise ValueError(f"{digits} is too large for any integer type")


def _character(text: str, model: DataModel) -> int:
    match = _CHARACTER.fullmatch(text)
    if match is None:
        raise ValueError(f"{text} is not a character constant of one character")
    if match["octal"]:
        value = int(match["octal"], 8)
    elif match["hex"]:
        value = int(match["hex"], 16)
    elif match["escape"]:
        value = _ESCAPES.get(match["escape"], ord(match["escape"]))
    else:
        value = ord(match["plain"])
    if value > model.unsigned_char.high:
        raise ValueError(f"{text} does not fit a char")
    return wrap(value, model.char)


def _floating_match(text: str) -> re.Match[str]:
    short = text if len(text) <= _LONGEST else ""
    match = _HEXADECIMAL.fullmatch(short) or _DECIMAL.fullmatch(short)
    if match is None or not (match["whole"] or match["part"]):
        raise ValueError(f"{text[:40]} is not a constant")
    if not (match["point"] or match["exponent"]):
        raise ValueError(f"{text[:40]} is not a constant")
    if abs(int(match["exponent"] or 0)) > _LARGEST_EXPONENT:
        raise ValueError(f"the exponent of {text[:40]} is out of range")
    return match


def _last_digit(match: re.Match[str]) -> Fraction:
    """What one step of the last written digit is worth."""
    exponent = int(match["exponent"] or 0)
    if match.re is _HEXADECIMAL:
        return Fraction(2) ** (exponent - 4 * len(match["part"]))
    return Fraction(10) ** (exponent - len(match["part"]))


def _fraction(match: re.Match[str]) -> Fraction:
    base = 16 if match.re is _HEXADECIMAL else 10
    return int(match["whole"] + match["part"], base) * _last_digit(match)
