"""How a corrected constant is written, in the style of the one it replaces.

The text of a constant and an exact number enter; text leaves: same base, suffix and digits.
"""

import re
from fractions import Fraction

from bitweight.arithmetic.literals import literal
from bitweight.arithmetic.scalars import nearest
from bitweight.arithmetic.types import DataModel

_HEXADECIMAL = re.compile(r"(?P<prefix>0[xX])(?P<digits>[0-9a-fA-F]+)(?P<suffix>[uUlL]*)")
_OTHER_WHOLE = re.compile(r"(?P<prefix>0[bB]|0(?=[0-7])|)(?P<digits>[0-9]+)(?P<suffix>[uUlL]*)")
_DECIMAL = re.compile(
    r"(?P<whole>[0-9]*)(?:(?P<point>\.)(?P<part>[0-9]*))?(?:(?P<mark>[eE])(?P<exponent>[+-]?[0-9]{1,3}))?"
    r"(?P<suffix>[fFlL]?)"
)
_FORMATS = {"0x": "x", "0b": "b", "0": "o", "": "d"}
_SIGNIFICANT = 6
"""Digits that a correction of a fraction is given, if it is not exact with fewer."""
_MOST_DECIMALS = 15


def spelled(text: str, value: Fraction) -> str | None:
    """The constant `text` with another value; None where its form cannot say it."""
    if value < 0:
        return None
    if match := _whole_match(text):
        return _whole(match, round(value))
    match = _DECIMAL.fullmatch(text)
    if match is None or not (match["whole"] or match["part"]):
        return None
    return _decimal(match, value)


def replacement(text: str, value: Fraction, model: DataModel) -> str | None:
    """`spelled`, if C gives it the type that the constant has now."""
    new = spelled(text, value)
    try:
        same_type = new is not None and literal(new, model)[1] == literal(text, model)[1]
    except ValueError:
        return None
    return new if same_type else None


def plain(text: str) -> str:
    """The constant without its suffix, for people: "1023" for "1023UL"."""
    if match := _whole_match(text):
        return match["prefix"] + match["digits"]
    return text.rstrip("fFlL") if _DECIMAL.fullmatch(text) else text


def shown(value: Fraction, digits: int = _SIGNIFICANT) -> str:
    """A number for people: whole ones in full, others with some significant digits."""
    if value.denominator == 1:
        return str(value.numerator)
    return f"{nearest(value, 64):.{digits}g}"


def is_coarse(written: Fraction, exact: Fraction, finest: Fraction) -> bool:
    """Whether a value says another so badly that the difference matters: nothing, for something.

    `finest` is the share of a constant that matters.
    """
    return written != exact and (not written or abs(written / exact - 1) > finest)


def _whole_match(text: str) -> re.Match[str] | None:
    return _HEXADECIMAL.fullmatch(text) or _OTHER_WHOLE.fullmatch(text)


def _whole(match: re.Match[str], value: int) -> str:
    prefix, digits = match["prefix"], match["digits"]
    text = format(value, _FORMATS[prefix.lower()])
    if digits == digits.upper():
        text = text.upper()
    padded = text.zfill(len(digits)) if prefix else text
    return f"{prefix}{padded}{match['suffix']}"


def _decimal(match: re.Match[str], value: Fraction) -> str | None:
    exponent = int(match["exponent"] or 0)
    mantissa = value / Fraction(10) ** exponent
    written = len(match["part"] or "")
    decimals = _decimals(mantissa, written)
    digits = _fixed(mantissa, decimals)
    if value and not digits.strip("0."):
        return None
    if not decimals and match["point"]:
        digits += "."
    mark = f"{match['mark']}{match['exponent']}" if match["mark"] else ""
    return f"{digits}{mark}{match['suffix']}"


def _decimals(value: Fraction, written: int) -> int:
    """Decimals as written where they are exact, else as many as say it well."""
    for decimals in range(written, _MOST_DECIMALS):
        scaled = value * 10**decimals
        if scaled.denominator == 1 or round(scaled) >= 10 ** (_SIGNIFICANT - 1):
            return decimals
    return _MOST_DECIMALS


def _fixed(value: Fraction, decimals: int) -> str:
    digits = str(round(value * 10**decimals)).zfill(decimals + 1)
    return f"{digits[:-decimals]}.{digits[-decimals:]}" if decimals else digits
