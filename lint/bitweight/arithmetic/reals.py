"""The same expression in real numbers: what its author meant, before C rounds and wraps.

Enters: an expression, raw words, and other numbers for some of its constants. Leaves: the value
without truncation, wrap or overflow, exactly (`Fraction`) for single words or in binary64 for many.

Where C loses something, the loss is left out: division is exact, `>>` and `<<` multiply by powers
of two, conversions change nothing, a constant is the decimal number that its text spells. Where C
takes bits apart on purpose, the bits are followed, or two's complement could not be decoded:

- A *word* is a reading, or a whole constant, that has only been moved, masked, complemented or put
  together (`<< >> & | ^ ~`, `+` of parts that share no bit, `+` or `-` half of its range). As soon
  as it is multiplied, divided, averaged or offset it is a *quantity*.
- Converting a quantity to an integer type is the identity: what no longer fits is a loss.
- Converting a word to a signed type takes it as two's complement when a cast says so, when the
  type is as wide as the word (`int16_t s = word`), or when the word's value fits the unsigned type
  of that width (a 16-bit number in a `uint32_t`); else it is a loss.
- Converting a word to an unsigned type as wide as the word drops bits moved beyond it (a byte
  swap) and the sign bits of a complement; a narrower type (`uint8_t level = adc`) is a loss. A
  negative word that is widened keeps its value.
- Promotions and usual conversions never change anything.
- A word shifted left and then right within one type is sign extension: the bits pushed out go.
- `& (2**k - 1)` takes a number modulo 2**k; other bit operations use its whole part.
- A division keeps its whole part where that is meant: where it only decides, or where a sum puts
  it together with the remainder of the same division (`wholes`).

Conditions, clamps and comparisons follow their real operands. What has no value (an unknown,
division by zero) spoils only what depends on it.
"""

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from types import MappingProxyType
from typing import Any

import numpy as np

from bitweight.arithmetic import scalars
from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Literal,
    Purpose,
    Unary,
    Unknown,
    children,
    walk,
)
from bitweight.arithmetic.fields import ExactNumbers, FloatNumbers, Numbers
from bitweight.arithmetic.literals import exact_value
from bitweight.arithmetic.types import CType, Kind
from bitweight.arithmetic.values import Array, reading
from bitweight.arithmetic.wholes import wholes
from bitweight.arithmetic.words import SPELLED, Word, disjoint, words
from bitweight.limits import Limits
from bitweight.places import Place

LeafKey = tuple[Place, str]
"""Where a constant is spelled and how; the same for every use of it."""

Replacements = Mapping[LeafKey, Fraction]
_DEFAULT_LIMITS = Limits()
_NOTHING: Replacements = MappingProxyType({})

_BITWISE: Mapping[str, Callable[[Any, Any], Any]] = MappingProxyType(
    {
        "&": lambda left, right: left & right,
        "|": lambda left, right: left | right,
        "^": lambda left, right: left ^ right,
    }
)
_COMPARISONS: Mapping[str, Callable[[Any, Any], Any]] = MappingProxyType(
    {
        "<": lambda left, right: left < right,
        ">": lambda left, right: left > right,
        "<=": lambda left, right: left <= right,
        ">=": lambda left, right: left >= right,
        "==": lambda left, right: left == right,
        "!=": lambda left, right: left != right,
    }
)


@dataclass(frozen=True, slots=True)
class RealForm:
    """An expression made ready for many questions about its real value; see `real_form`."""

    order: tuple[Expression, ...]
    words: Mapping[int, Word]
    spent: tuple[tuple[int, ...], ...]
    """For each node the identities of the nodes that nothing after it uses."""
    whole: frozenset[int] = frozenset()

    def exact(self, word: int, replace: Replacements = _NOTHING) -> Fraction | None:
        """The exact value at a raw word; None where it has none."""
        result = self._value(ExactNumbers(), lambda node: Fraction(_read_word(word, node)), replace)
        return result if isinstance(result, Fraction) else None

    def floats(
        self,
        read: Callable[[Code], Array],
        replace: Replacements = _NOTHING,
        limits: Limits = _DEFAULT_LIMITS,
    ) -> Array:
        """The value at every code in binary64; NaN where it has none, one element without codes."""
        codes = (node for node in self.order if isinstance(node, Code))
        words = {id(node): np.asarray(read(node)) for node in codes}
        count = max((array.size for array in words.values()), default=1)
        starts = range(0, max(count, 1), limits.block_codes)
        parts = [slice(start, min(start + limits.block_codes, count)) for start in starts]
        blocks = [self._block(words, part, replace) for part in parts]
        return blocks[0] if len(blocks) == 1 else np.concatenate(blocks)

    def _block(self, words: Mapping[int, Array], part: slice, replace: Replacements) -> Array:
        def held(node: Code) -> Array:
            return reading(words[id(node)][part], node.type)[0].data.astype(np.float64)

        with np.errstate(all="ignore"):
            value = self._value(FloatNumbers(), held, replace)
        return np.broadcast_to(np.asarray(value, dtype=np.float64), part.stop - part.start)

    def affine(
        self, at: Sequence[int], replace: Replacements = _NOTHING
    ) -> tuple[Fraction, Fraction] | None:
        """Gain per word and offset if the values at all the raw words lie exactly on one line."""
        values = [self.exact(word, replace) for word in at]
        known = [value for value in values if value is not None]
        if len(known) != len(values) or len(set(at)) < 2:
            return None
        points = sorted(zip(at, known, strict=True))
        (first, low), (last, high) = points[0], points[-1]
        gain = (high - low) / (last - first)
        offset = low - gain * first
        straight = all(value == gain * word + offset for word, value in points)
        return (gain, offset) if straight else None

    def _value(self, numbers: Numbers, read: Callable[[Code], Any], replace: Replacements) -> Any:
        known: dict[int, Any] = {}
        for node, spent in zip(self.order, self.spent, strict=True):
            known[id(node)] = numbers.bounded(self._apply(numbers, node, known, read, replace))
            for key in spent:
                del known[key]
        return known[id(self.order[-1])]

    def _apply(
        self,
        numbers: Numbers,
        node: Expression,
        known: Mapping[int, Any],
        read: Callable[[Code], Any],
        replace: Replacements,
    ) -> Any:
        match node:
            case Literal():
                value = _meant(node, replace)
                return math.nan if value is None else numbers.literal(value)
            case Code():
                return read(node)
            case Unknown():
                return math.nan
            case Default():
                return known[id(node.operand)]
            case Convert():
                return self._convert(numbers, node, known[id(node.operand)])
            case Unary():
                return _unary(numbers, node, known[id(node.operand)])
            case Binary():
                return self._binary(numbers, node, known[id(node.left)], known[id(node.right)])
            case Choose():
                arms = known[id(node.then)], known[id(node.other)]
                return numbers.select(known[id(node.condition)], *arms)

    def _convert(self, numbers: Numbers, node: Convert, value: Any) -> Any:
        if id(node) in self.whole and node.type.is_integer and not node.operand.type.is_integer:
            value = _truncated(numbers, value)
        target, word = node.type, self.words.get(id(node.operand))
        if target.kind is Kind.BOOL:
            return numbers.holds(value != 0, value)
        if word is None or not target.is_integer or node.purpose not in SPELLED:
            return value
        if numbers.within(value, target.low, target.high):
            return value
        wrapped = _wrapped(numbers, value, target)
        return numbers.select(_decodes(node, word, value), wrapped, value)

    def _binary(self, numbers: Numbers, node: Binary, left: Any, right: Any) -> Any:
        first, second = self.words.get(id(node.left)), self.words.get(id(node.right))
        match node.operator:
            case "&" if second is not None and second.is_low_mask:
                return _modulo(numbers, left, right + 1)
            case "&" if first is not None and first.is_low_mask:
                return _modulo(numbers, right, left + 1)
            case "+" if first is not None and second is not None and disjoint(first, second):
                return numbers.floor(left) + numbers.floor(right)
            case ">>":
                pushed = _pushed_left(node.left)
                if pushed is not None and id(pushed) in self.words:
                    left = _wrapped(numbers, left, pushed.type)
                shifted = numbers.divide(left, numbers.power(right))
                return numbers.floor(shifted) if id(node) in self.whole else shifted
            case "/" if id(node) in self.whole and node.type.is_integer:
                return _truncated(numbers, numbers.divide(left, right))
            case _:
                return _operate(numbers, node.operator, left, right)


def real_form(expression: Expression) -> RealForm:
    """`expression` made ready for its real value to be asked many times."""
    order = tuple(walk(expression))
    return RealForm(order, MappingProxyType(words(order)), _spent(order), wholes(order))


def _spent(order: Sequence[Expression]) -> tuple[tuple[int, ...], ...]:
    """For each node those of its operands that no later node uses."""
    last: dict[int, int] = {}
    for index, node in enumerate(order):
        last |= {id(child): index for child in children(node)}
    found: list[list[int]] = [[] for _ in order]
    for key, index in last.items():
        found[index].append(key)
    return tuple(map(tuple, found))


def exact(expression: Expression, word: int, replace: Replacements = _NOTHING) -> Fraction | None:
    """The exact real value at a raw word; None where it has none."""
    return real_form(expression).exact(word, replace)


def reals(
    expression: Expression, read: Callable[[Code], Array], replace: Replacements = _NOTHING
) -> Array:
    """The real value at every code in binary64; NaN where it has none."""
    return real_form(expression).floats(read, replace)


def affine(
    expression: Expression, at: Sequence[int], replace: Replacements = _NOTHING
) -> tuple[Fraction, Fraction] | None:
    """Exact gain per word and offset, if the real values at all the raw words lie on one line."""
    return real_form(expression).affine(at, replace)


def meant(literal: Literal) -> Fraction | None:
    """The number a constant stands for: as spelled, else the shortest decimal that reads as it."""
    value, type_ = literal.value, literal.type
    if type_.is_integer:
        return Fraction(int(value))
    if not math.isfinite(value):
        return None
    spelled = None if literal.leaf is None else exact_value(literal.leaf.text)
    if spelled is not None and scalars.nearest(spelled, type_.bits) == value:
        return spelled
    return Fraction(str(np.float32(value)) if type_.bits == 32 else repr(float(value)))


def _meant(literal: Literal, replace: Replacements) -> Fraction | None:
    if literal.leaf is not None and replace:
        replaced = replace.get((literal.leaf.place, literal.leaf.text))
        if replaced is not None:
            return replaced
    return meant(literal)


def _read_word(word: int, node: Code) -> int:
    return scalars.wrap(word, node.type) if node.type.is_integer else word


def _unary(numbers: Numbers, node: Unary, value: Any) -> Any:
    match node.operator:
        case "!":
            return numbers.holds(value == 0, value)
        case "-":
            return -value
        case "~":
            top = -1 if node.type.signed else node.type.high
            return top - numbers.floor(value)
        case _:
            return value


def _operate(numbers: Numbers, operator: str, left: Any, right: Any) -> Any:
    if operator in _COMPARISONS:
        return numbers.holds(_COMPARISONS[operator](left, right), left, right)
    if operator in _BITWISE:
        return numbers.bitwise(_BITWISE[operator], left, right)
    match operator:
        case "+":
            return left + right
        case "-":
            return left - right
        case "*":
            return left * right
        case "/":
            return numbers.divide(left, right)
        case "%":
            return left - right * _truncated(numbers, numbers.divide(left, right))
        case "<<":
            return left * numbers.power(right)
        case "&&":
            both = numbers.holds(right != 0, right)
            return numbers.select(numbers.holds(left != 0, left), both, left * 0)
        case _:
            either = numbers.holds(right != 0, right)
            return numbers.select(numbers.holds(left == 0, left), either, left * 0 + 1)


def _truncated(numbers: Numbers, value: Any) -> Any:
    return numbers.select(
        numbers.holds(value < 0, value), -numbers.floor(-value), numbers.floor(value)
    )


def _modulo(numbers: Numbers, value: Any, modulus: Any) -> Any:
    return value - modulus * numbers.floor(numbers.divide(value, modulus))


def _wrapped(numbers: Numbers, value: Any, type_: CType) -> Any:
    """A value moved by a multiple of 2**bits into `type_`, fractions kept."""
    span = numbers.literal(Fraction(1 << type_.bits))
    turns = numbers.floor(numbers.divide(numbers.floor(value) - type_.low, span))
    return value - span * turns


def _decodes(node: Convert, word: Word, value: Any) -> Any:
    """Whether the conversion takes a word apart on purpose, at a value it may change."""
    target = node.type
    roomy = target.bits >= word.width
    if target.signed:
        return (node.purpose is Purpose.CAST) | roomy | ((value >= 0) & (value < 1 << target.bits))
    return roomy & ((value >= 0) | (target.bits <= node.operand.type.bits))


def _pushed_left(node: Expression) -> Binary | None:
    """The left shift whose value `node` is, with no conversion the source spells in between."""
    while isinstance(node, Convert) and node.purpose not in SPELLED:
        node = node.operand
    return node if isinstance(node, Binary) and node.operator == "<<" else None
