"""C expressions written with Python operators, and questions about them, for tests of the judge."""

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from bitweight.arithmetic.building import binary, convert
from bitweight.arithmetic.expressions import Code, Expression, Leaf, Literal, Purpose, Unary
from bitweight.arithmetic.literals import literal
from bitweight.arithmetic.types import MODELS, CType, DataModel
from bitweight.board.converters import Coding
from bitweight.board.facts import BoardFact, Role
from bitweight.judge.questions import BoardLine, Question, StatedRole
from bitweight.places import Place
from bitweight.quantities import parse_quantity
from bitweight.trace.conversions import Conversion
from bitweight.units import Unit

HOST = MODELS["host"]
_USE = Place("level.c", 40, 12)


@dataclass(frozen=True)
class Operand:
    """An expression under construction; operators convert their operands as C does."""

    node: Expression
    model: DataModel = HOST

    def _with(self, operator: str, other: "Operand", *, swapped: bool = False) -> "Operand":
        left, right = (other, self) if swapped else (self, other)
        node = binary(self.model, operator, left.node, right.node, _USE)
        return Operand(node, self.model)

    def __add__(self, other: "Operand") -> "Operand":
        return self._with("+", other)

    def __sub__(self, other: "Operand") -> "Operand":
        return self._with("-", other)

    def __mul__(self, other: "Operand") -> "Operand":
        return self._with("*", other)

    def __truediv__(self, other: "Operand") -> "Operand":
        return self._with("/", other)

    def __rshift__(self, other: "Operand") -> "Operand":
        return self._with(">>", other)

    def __lshift__(self, other: "Operand") -> "Operand":
        return self._with("<<", other)

    def __and__(self, other: "Operand") -> "Operand":
        return self._with("&", other)

    def __neg__(self) -> "Operand":
        return Operand(Unary(operator="-", operand=self.node, type=self.node.type, place=_USE))

    def cast(self, name: str, purpose: Purpose = Purpose.CAST) -> "Operand":
        """The operand converted to a type by name."""
        type_ = self.model.named((name,))
        assert type_ is not None
        return Operand(convert(self.node, type_, purpose, _USE), self.model)


def raw(type_name: str = "uint16_t", model: DataModel = HOST) -> Operand:
    """The reading."""
    type_ = model.named((type_name,))
    assert type_ is not None
    node = Code(channels=("tank",), text="raw", type=type_, place=Place("level.c", 40, 5))
    return Operand(node, model)


def const(text: str, name: str | None = None, *, comment: str = "", line: int = 0) -> Operand:
    """A constant as spelled, behind a macro `name` if there is one."""
    value, type_ = literal(text, HOST)
    where = line or (sum(map(ord, name)) if name else 41)
    place = Place(
        "board.h" if name else "level.c", where, 1 + len(text) + (0 if name else hash_of(text))
    )
    leaf = Leaf(
        name=name, text=text, place=place, end_column=place.column + len(text), use=_USE,
        names=(name,) if name else (), comment=comment,
    )  # fmt: skip
    return Operand(Literal(value=value, type=type_, leaf=leaf))


def hash_of(text: str) -> int:
    """A column that differs between texts and is the same in every run."""
    return sum(index * ord(char) for index, char in enumerate(text, 1)) % 900


def fact(role: Role, name: str, quantity: str, rule: str) -> BoardFact:
    """A board fact from a quantity's text."""
    parsed = parse_quantity(quantity)
    return BoardFact(
        role=role, name=name, value=parsed.value, unit=parsed.unit, rule=rule,
        place=Place("board.toml", 3), text=quantity,
    )  # fmt: skip


def number(role: Role, name: str, value: Fraction | int, rule: str) -> BoardFact:
    """A board fact that is a plain number."""
    return BoardFact(
        role=role, name=name, value=Fraction(value), unit=Unit(text=""), rule=rule,
        place=Place("board.toml", 3), text=str(value),
    )  # fmt: skip


@dataclass(frozen=True, kw_only=True)
class Board:
    """The board's side of a test: reference in volts, full-scale counts, gain after the pin.

    `per_volt` is channel units per volt at the pin, `zero` channel units at 0 V.
    """

    bits: int = 10
    counts: tuple[int, ...] = (1024,)
    volts: str = "5 V"
    per_volt: Fraction = Fraction(1)
    zero: Fraction = Fraction(0)
    more: tuple[BoardFact, ...] = ()
    coding: Coding = Coding.UNSIGNED
    shift: int = 0
    count_stated: bool = True

    @property
    def facts(self) -> tuple[BoardFact, ...]:
        """What constants may stand for."""
        return (
            *(number(Role.FULL_SCALE, "full-scale count", n, "full-scale") for n in self.counts),
            number(Role.RESOLUTION, "resolution", self.bits, "resolution"),
            fact(Role.REFERENCE, "reference vref", self.volts, "reference-value"),
            *self.more,
        )

    def line(self, count: int) -> BoardLine:
        """q(c) by one full-scale count."""
        lsb = parse_quantity(self.volts).value / count
        return BoardLine(count=Fraction(count), gain=lsb * self.per_volt, offset=self.zero)


def question(
    board: Board,
    expression: Operand | Expression,
    scale: Fraction | None = Fraction(1, 1000),
    *,
    allowed: float | None = None,
    stated: Sequence[StatedRole] = (),
    unit: str = "V",
    word_stated: bool = False,
) -> Question:
    """The question whether the expression agrees with the board; `scale` is mV in V by default."""
    node = expression.node if isinstance(expression, Operand) else expression
    signed = board.coding.signed
    low = -(1 << (board.bits - 1)) if signed else 0
    codes = np.arange(low, low + (1 << board.bits), dtype=np.int64)
    first = board.line(board.counts[0])
    quantity = codes * float(first.gain) + float(first.offset)
    lsb = abs(float(first.gain))

    def limits(step: float) -> np.ndarray:
        return np.full(codes.shape, 1.5 * (lsb + step) if allowed is None else allowed)

    mask = (1 << board.bits) - 1 if board.coding is not Coding.TWOS_COMPLEMENT else 0xFFFF
    words = (
        (codes & mask) if board.coding is not Coding.OFFSET_BINARY else codes - low
    ) << board.shift
    return Question(
        conversion=conversion(node), model=HOST,
        lines=tuple(board.line(count) for count in board.counts),
        facts=board.facts, scale=scale, unit=unit, codes=codes, words=words,
        in_range=np.ones(codes.shape, dtype=np.bool_), quantity=quantity, allowed=limits, lsb=lsb,
        bits=board.bits, coding=board.coding, shift=board.shift, stated=tuple(stated),
        count_stated=board.count_stated, word_stated=word_stated,
    )  # fmt: skip


def conversion(node: Expression) -> Conversion:
    """A conversion of the channel `tank` that ends in `tank_mv`."""
    return Conversion(
        channel="tank", result="tank_mv", expression=node, place=Place("level.c", 40, 1),
        function="tank_read", formula="raw * ...",
    )  # fmt: skip


def stored(operand: Operand, name: str) -> Operand:
    """The operand assigned to an object of a type."""
    return operand.cast(name, Purpose.STORE)


def ctype(name: str) -> CType:
    """A type of the host by name."""
    found = HOST.named((name,))
    assert found is not None
    return found
