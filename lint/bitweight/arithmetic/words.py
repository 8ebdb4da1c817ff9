"""Which parts of an expression are still bits of a word, not yet scaled to a quantity.

Enters: nodes, operands before operators. Leaves: a `Word` for each node that is one. A word is a
reading or a whole constant that has only been moved, masked, complemented or put together.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

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
)
from bitweight.arithmetic.types import CType, Kind

SPELLED = frozenset((Purpose.CAST, Purpose.STORE, Purpose.ARGUMENT, Purpose.RETURN))
"""Conversions to a type that the source names; the others follow from the rules of C alone."""

_LARGEST_SHIFT = 128


@dataclass(frozen=True, slots=True)
class Word:
    """Bits not scaled yet.

    `width` is how many bits they are kept in, `bits` which may be set (negative: all above too),
    `constant` the value where it is the same for every code.
    """

    width: int
    bits: int
    constant: int | None = None

    @property
    def is_low_mask(self) -> bool:
        """Whether it is a constant 2**k - 1."""
        value = self.constant
        return value is not None and value > 0 and value & (value + 1) == 0


def words(nodes: Iterable[Expression]) -> dict[int, Word]:
    """The words among the nodes, by identity."""
    known: dict[int, Word] = {}
    for node in nodes:
        word = _word(node, known)
        if word is not None:
            known[id(node)] = word
    return known


def disjoint(left: Word, right: Word) -> bool:
    """Whether no bit can be set in both, so that their sum puts them together."""
    return left.bits & right.bits == 0


def _fixed(value: int) -> Word:
    """A constant; kept in as many bits as it takes."""
    width = value.bit_length() if value >= 0 else (~value).bit_length() + 1
    return Word(width, value, value)


def _full(type_: CType) -> int:
    return -1 if type_.signed else type_.high


def _word(node: Expression, known: Mapping[int, Word]) -> Word | None:
    match node:
        case Literal():
            return _fixed(int(node.value)) if node.type.is_integer else None
        case Code():
            return Word(node.type.bits, _full(node.type)) if node.type.is_integer else None
        case Unknown():
            return None
        case Default():
            return known.get(id(node.operand))
        case Convert():
            return _converted(node, known.get(id(node.operand)))
        case Unary():
            return _complement(node.operator, known.get(id(node.operand)))
        case Binary():
            left, right = known.get(id(node.left)), known.get(id(node.right))
            return _binary(node.operator, left, right) if left and right else None
        case Choose():
            left, right = known.get(id(node.then)), known.get(id(node.other))
            if left is None or right is None:
                return None
            return Word(max(left.width, right.width), left.bits | right.bits)


def _converted(node: Convert, word: Word | None) -> Word | None:
    if word is None or node.type.kind is not Kind.INTEGER:
        return None
    if node.purpose not in SPELLED:
        return word
    kept = word.bits if 0 <= word.bits <= node.type.high else _full(node.type)
    fits = word.constant is not None and node.type.low <= word.constant <= node.type.high
    return Word(node.type.bits, kept, word.constant if fits else None)


def _complement(operator: str, word: Word | None) -> Word | None:
    if word is None or operator == "+":
        return word
    if word.constant is not None and operator in ("-", "~"):
        return _fixed(-word.constant if operator == "-" else ~word.constant)
    return Word(word.width, -1) if operator == "~" else None


def _binary(operator: str, left: Word, right: Word) -> Word | None:
    width = max(left.width, right.width)
    match operator:
        case "&":
            return _put(width, left.bits & right.bits, left, right)
        case "|" | "^":
            return _put(width, left.bits | right.bits, left, right)
        case "<<" | ">>":
            return _shifted(operator, left, right)
        case "+" | "-":
            return _sum(operator, left, right)
        case "%":
            power = right.constant is not None and right.constant > 0 and left.bits >= 0
            mask = _fixed((right.constant or 0) - 1)
            return Word(width, left.bits & mask.bits) if power and mask.is_low_mask else None
        case _:
            return None


def _put(width: int, bits: int, left: Word, right: Word) -> Word:
    """Parts put together; of two constants a constant with all bits that may be set."""
    whole = left.constant is not None and right.constant is not None
    return _fixed(bits) if whole else Word(width, bits)


def _shifted(operator: str, word: Word, count: Word) -> Word | None:
    if count.constant is None or not 0 <= count.constant < _LARGEST_SHIFT:
        return None
    bits = word.bits << count.constant if operator == "<<" else word.bits >> count.constant
    return Word(word.width, bits) if word.constant is None else _fixed(bits)


def _sum(operator: str, left: Word, right: Word) -> Word | None:
    if left.constant is not None and right.constant is not None:
        offset = right.constant if operator == "+" else -right.constant
        return _fixed(left.constant + offset)
    if operator == "+" and disjoint(left, right):
        return Word(max(left.width, right.width), left.bits | right.bits)
    if right.constant is not None and right.constant == 1 << (left.width - 1):
        return Word(left.width, -1)
    return None
