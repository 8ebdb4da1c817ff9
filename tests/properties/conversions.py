"""Conversions as firmware writes them, for tests and benchmarks: C text over a 16-bit reading `x`.

The text is read by a small parser of its own, so that these tests depend on no reader of C files.
"""

import re
from collections.abc import Iterable
from dataclasses import dataclass

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Code, Expression, Leaf, Literal, Purpose
from bitweight.arithmetic.literals import literal
from bitweight.arithmetic.types import CType, DataModel
from bitweight.places import Place

PLACE = Place("conversion.c")
_TOKEN = re.compile(
    r"\s*(0[xX][0-9a-fA-F]+\w*|[0-9.]+(?:[eE][-+]?\d+)?\w*|\w+|<<|>>|[<>=!]=|&&|\|\||\S)"
)
_LEVELS = (
    *(("||",), ("&&",), ("|",), ("^",), ("&",), ("==", "!="), ("<", ">", "<=", ">=")),
    *(("<<", ">>"), ("+", "-"), ("*", "/", "%")),
)


class Reader:
    """Reads one C expression over `x`; an implicit store is written `store(type, expression)`."""

    def __init__(self, text: str, model: DataModel, reading: Code) -> None:
        self._tokens = [*_TOKEN.findall(text), ""]
        self._at = 0
        self._model = model
        self._reading = reading

    def whole(self) -> Expression:
        """The expression; the text must hold nothing else."""
        node = self._choice()
        assert not self._tokens[self._at], self._tokens[self._at :]
        return node

    def _next(self) -> str:
        self._at += 1
        return self._tokens[self._at - 1]

    def _accept(self, *texts: str) -> str:
        return self._next() if self._tokens[self._at] in texts and self._tokens[self._at] else ""

    def _choice(self) -> Expression:
        condition = self._level(0)
        if not self._accept("?"):
            return condition
        then = self._choice()
        assert self._accept(":")
        return building.choose(self._model, condition, then, self._choice(), PLACE)

    def _level(self, level: int) -> Expression:
        if level == len(_LEVELS):
            return self._unary()
        node = self._level(level + 1)
        while operator := self._accept(*_LEVELS[level]):
            node = building.binary(self._model, operator, node, self._level(level + 1), PLACE)
        return node

    def _unary(self) -> Expression:
        if operator := self._accept("-", "+", "~", "!"):
            return building.unary(self._model, operator, self._unary(), PLACE)
        if self._accept("("):
            if type_ := self._type():
                return building.convert(self._unary(), type_, Purpose.CAST, PLACE)
            node = self._choice()
            assert self._accept(")")
            return node
        return self._primary(self._next())

    def _type(self) -> CType | None:
        end = self._tokens.index(")", self._at)
        type_ = self._model.named(tuple(self._tokens[self._at : end]))
        if type_ is not None:
            self._at = end + 1
        return type_

    def _primary(self, token: str) -> Expression:
        if token == "x":
            return self._reading
        if token == "store":
            assert self._accept("(")
            type_ = self._model.named((self._next(),))
            assert type_ is not None
            assert self._accept(",")
            node = building.convert(self._choice(), type_, Purpose.STORE, PLACE)
            assert self._accept(")")
            return node
        value, type_ = literal(token, self._model)
        leaf = Leaf(
            name=None,
            text=token,
            place=Place(PLACE.file, 1, self._at),
            end_column=self._at + len(token),
            use=PLACE,
        )
        return Literal(value=value, type=type_, leaf=leaf)


@dataclass(frozen=True, slots=True)
class Conversion:
    """One conversion; `reading` names the type in which the reading arrives."""

    text: str
    reading: str = "uint16_t"

    def build(self, model: DataModel) -> Expression:
        """The expression on a target."""
        type_ = model.named((self.reading,))
        assert type_ is not None
        reading = Code(channels=("tank",), text="x", type=type_, place=PLACE)
        return Reader(self.text, model, reading).whole()


def leaves(nodes: Iterable[Expression]) -> dict[str, Leaf]:
    """The constants among some nodes by their spelling."""
    return {
        node.leaf.text: node.leaf
        for node in nodes
        if isinstance(node, Literal) and node.leaf is not None
    }


CONVERSIONS = tuple(
    Conversion(text)
    for text in (
        "x * 5000UL / 1024",
        "(uint32_t)x * 3300 / 4095",
        "x * 5000 / 1024",
        "(x * 3300u + 2048) / 4096",
        "(int32_t)x - 512",
        "((int32_t)x - 2048) * 3300 / 4096 * 10 / 132",
        "(uint16_t)(x * 75) >> 4",
        "(uint16_t)(x * 3300) / 1023",
        "x * 3.3f / 4096.0f",
        "x * 3.3f / 4096.0f * (10.0f + 3.3f) / 3.3f - 0.5f",
        "x * (3.3 / 4096) * 11",
        "(uint16_t)(x * 0.488f + 0.5f)",
        "(int16_t)(x << 4) >> 4",
        "x > 2047 ? x - 4096 : x",
        "((x & 0x0FFF) ^ 0x800) - 0x800",
        "(uint8_t)(x >> 8) * 20",
        "x * 5000 / 1023 > 4500 ? 4500 : x * 5000 / 1023",
        "(int64_t)x * 1000000 * 1000000 / 65536 * 7 % 1000003",
        "(uint64_t)x * x * x * x * 12345678901ULL",
        "1125300UL / (x + !x)",
        "(x << 3) + (x << 1) - (x >> 2)",
        "(x * 41UL >> 8) - 50 + (x % 100 >= 50)",
        "~x & 0x3FF",
        "(float)((uint64_t)x * 4503599627370497) / 3.0f",
        "(int8_t)(x * 2) * -37 / 10",
    )
)
