"""The controlling expression of `#if` and `#elif` (C11 6.10.1), in 64-bit arithmetic.

Expanded tokens enter, the value leaves: every operand is `intmax_t` or `uintmax_t`, names that are
left are 0, and an operand that is not evaluated may divide by zero.
"""

import re
from collections.abc import Callable, Sequence
from typing import NamedTuple

from bitweight.firmware.tokens import Kind, Token

_BITS = 64
_MODULUS = 1 << _BITS
_DEPTH = 160
"""Nested operands and conditionals; a parenthesis takes two (C11 5.2.4.1: at least 63)."""
_INTEGER = re.compile(
    r"(0[xX][0-9a-fA-F]+|0[bB][01]+|0[0-7]*|[1-9][0-9]*)(?:([uU])(?:ll?|LL?)?|(?:ll?|LL?)([uU]?))?"
)
_CHARACTER = re.compile(r"(?:u8|[uUL])?'((?:[^'\\]|\\.[^'\\]*)+)'", re.DOTALL)
_ESCAPE = re.compile(r"\\(?:x([0-9a-fA-F]+)|([0-7]{1,3})|(.))|(.)", re.DOTALL)
_ESCAPED = {"n": 10, "t": 9, "r": 13, "a": 7, "b": 8, "f": 12, "v": 11, "e": 27}
_PRECEDENCE = {
    operator: level
    for level, operators in enumerate(
        ("||", "&&", "|", "^", "&", "== !=", "< > <= >=", "<< >>", "+ -", "* / %"), 1
    )
    for operator in operators.split()
}


class _Value(NamedTuple):
    number: int
    unsigned: bool = False


class ConditionError(ValueError):
    """An expression that has no value; the message says why."""


def condition_holds(tokens: Sequence[Token]) -> bool:
    """Whether the expression is not 0. Raises `ConditionError` for one that has no value."""
    parser = _Parser(tokens)
    value = parser.comma(live=True)
    parser.expect_end()
    return value.number != 0


class _Parser:
    """Precedence climbing; `live` is false in an operand that is not evaluated."""

    def __init__(self, tokens: Sequence[Token]) -> None:
        self._tokens = tokens
        self._index = 0
        self._depth = 0

    def expect_end(self) -> None:
        if self._index < len(self._tokens):
            raise ConditionError(f"'{self._next}' does not belong in a condition")

    @property
    def _next(self) -> str:
        return self._tokens[self._index].text if self._index < len(self._tokens) else ""

    def _accept(self, text: str) -> bool:
        found = self._next == text and self._tokens[self._index].kind is Kind.PUNCTUATOR
        self._index += found
        return found

    def _expect(self, text: str) -> None:
        if not self._accept(text):
            raise ConditionError(f"'{text}' is missing")

    def _deeper(self) -> None:
        self._depth += 1
        if self._depth > _DEPTH:
            raise ConditionError("a condition is nested too deep")

    def comma(self, live: bool) -> _Value:
        value = self._conditional(live)
        while self._accept(","):
            value = self._conditional(live)
        return value

    def _conditional(self, live: bool) -> _Value:
        self._deeper()
        value = self._binary(1, live)
        if self._accept("?"):
            holds = value.number != 0
            then = self.comma(live and holds)
            self._expect(":")
            other = self._conditional(live and not holds)
            chosen = then if holds else other
            value = _made(chosen.number, then.unsigned or other.unsigned)
        self._depth -= 1
        return value

    def _binary(self, lowest: int, live: bool) -> _Value:
        self._deeper()
        left = self._unary(live)
        while (level := _PRECEDENCE.get(self._next, 0)) >= lowest:
            operator = self._next
            self._index += 1
            if operator == "||":
                right = self._binary(level + 1, live and left.number == 0)
                left = _Value(int(left.number != 0 or right.number != 0))
            elif operator == "&&":
                right = self._binary(level + 1, live and left.number != 0)
                left = _Value(int(left.number != 0 and right.number != 0))
            else:
                left = _applied(operator, left, self._binary(level + 1, live), live)
        self._depth -= 1
        return left

    def _unary(self, live: bool) -> _Value:
        signs = []
        while self._next in ("+", "-", "~", "!"):
            signs.append(self._next)
            self._index += 1
        value = self._primary(live)
        for sign in reversed(signs):
            value = _signed(sign, value)
        return value

    def _primary(self, live: bool) -> _Value:
        if self._accept("("):
            value = self.comma(live)
            self._expect(")")
            return value
        if self._index >= len(self._tokens):
            raise ConditionError("a condition ends where a value is expected")
        token = self._tokens[self._index]
        self._index += 1
        match token.kind:
            case Kind.NUMBER:
                return _integer(token.text)
            case Kind.CHARACTER:
                return _character(token.text)
            case Kind.NAME:
                return _Value(0)
            case _:
                raise ConditionError(f"'{token.text}' has no value in a condition")


def _made(number: int, unsigned: bool) -> _Value:
    number %= _MODULUS
    return _Value(number if unsigned or number < _MODULUS // 2 else number - _MODULUS, unsigned)


def _signed(sign: str, value: _Value) -> _Value:
    match sign:
        case "-":
            return _made(-value.number, value.unsigned)
        case "~":
            return _made(~value.number, value.unsigned)
        case "!":
            return _Value(int(value.number == 0))
        case _:
            return value


def _applied(operator: str, left: _Value, right: _Value, live: bool) -> _Value:
    if operator in ("<<", ">>"):
        return _shifted(left, right.number if operator == "<<" else -right.number)
    unsigned = left.unsigned or right.unsigned
    one, other = _made(left.number, unsigned).number, _made(right.number, unsigned).number
    if operator in _COMPARISONS:
        return _Value(int(_COMPARISONS[operator](one, other)))
    if operator in ("/", "%"):
        if other == 0:
            if live:
                raise ConditionError("a condition divides by zero")
            return _Value(0, unsigned)
        quotient = abs(one) // abs(other) * (1 if (one < 0) == (other < 0) else -1)
        return _made(quotient if operator == "/" else one - quotient * other, unsigned)
    return _made(_ARITHMETIC[operator](one, other), unsigned)


def _shifted(value: _Value, places: int) -> _Value:
    """A value shifted left; as gcc does, a negative count shifts right and a large one empties."""
    if places >= _BITS:
        return _Value(0, value.unsigned)
    if places >= 0:
        return _made(value.number << places, value.unsigned)
    return _made(value.number >> min(-places, _BITS), value.unsigned)


_COMPARISONS: dict[str, Callable[[int, int], bool]] = {
    "==": lambda one, other: one == other,
    "!=": lambda one, other: one != other,
    "<": lambda one, other: one < other,
    ">": lambda one, other: one > other,
    "<=": lambda one, other: one <= other,
    ">=": lambda one, other: one >= other,
}
_ARITHMETIC: dict[str, Callable[[int, int], int]] = {
    "+": lambda one, other: one + other,
    "-": lambda one, other: one - other,
    "*": lambda one, other: one * other,
    "&": lambda one, other: one & other,
    "|": lambda one, other: one | other,
    "^": lambda one, other: one ^ other,
}


def _integer(text: str) -> _Value:
    match = _INTEGER.fullmatch(text)
    if match is None:
        raise ConditionError(f"'{text}' is no integer")
    digits = match[1]
    if len(digits) > 100:
        raise ConditionError("a number is too large")
    based = digits[:2].lower() in ("0x", "0b")
    octal = digits.startswith("0") and not based
    number = int(digits or "0", 8) if octal else int(digits, 0)
    unsigned = bool(match[2] or match[3]) or number >= _MODULUS // 2
    return _made(number, unsigned)


def _character(text: str) -> _Value:
    """A character constant as gcc reads it: 8 bits a character, the value of an `int`."""
    match = _CHARACTER.fullmatch(text)
    if match is None:
        raise ConditionError(f"{text} is no character")
    codes = [_code(escape) for escape in _ESCAPE.finditer(match[1])]
    number = 0
    for code in codes:
        number = (number << 8 | code & 0xFF) % (1 << 32)
    if len(codes) == 1:
        number = codes[0] & 0xFF
        return _Value(number - 0x100 if number >= 0x80 else number)
    return _Value(number - (1 << 32) if number >= 1 << 31 else number)


def _code(escape: re.Match[str]) -> int:
    if escape[1]:
        return int(escape[1][-8:], 16)
    if escape[2]:
        return int(escape[2], 8)
    if escape[3]:
        return _ESCAPED.get(escape[3], ord(escape[3]))
    return ord(escape[4])
