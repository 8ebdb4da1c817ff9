"""Generators of C expressions, as text and as nodes, for properties and comparisons with gcc.

A generator asks `pick` to choose from a sequence: `random.Random(seed).choice` gives a fixed
series, `expressions` lets hypothesis choose (and shrink).
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Protocol

from hypothesis import strategies as st

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Code, Expression, Literal, Purpose
from bitweight.arithmetic.literals import literal
from bitweight.arithmetic.types import CType, DataModel
from bitweight.places import Place

PLACE = Place("x.c")

INTEGERS = (
    *("0", "1", "2", "3", "5", "7", "10", "16", "100", "255", "256", "1000", "1023", "1024"),
    *("3300", "4095", "4096", "5000", "32767", "32768", "65535", "65536", "2147483647"),
    *("2147483648", "4294967295", "0x7FFF", "0x8000", "0xFFFF", "0x7FFFFFFF", "0x80000000"),
    *("0xFFFFFFFF", "0777", "0b1010", "1u", "3U", "4096u", "65535U", "5000L", "5000UL", "3300ul"),
    *("1000000l", "1LL", "4294967296", "0x100000000", "7ull", "10LLU", "9223372036854775807"),
    *("0x8000000000000000", "18446744073709551615u", "'A'", r"'\n'", r"'\x7f'"),
)
FLOATINGS = (
    *("0.0", "0.5", "1.0", "3.3", "0.1", "2.5f", "3.3f", "0.1F", "4096.0f", "1e3", "1.5e-3f"),
    *("1e10", "1e20f", ".25", "5.", "0x1.8p3"),
)
ALWAYS = ("+", "-", "*", "/", "<", ">", "<=", ">=", "==", "!=", "&&", "||")
WHOLE_ONLY = ("%", "&", "|", "^", "<<", ">>")
TYPES = (
    "_Bool",
    "char",
    "signed char",
    "unsigned char",
    "short",
    "unsigned short",
    "int",
    "unsigned int",
    "long",
    "unsigned long",
    "long long",
    "unsigned long long",
    "float",
    "double",
)
CODE_TYPES = TYPES[2:12]
SMALL_COUNTS = ["0", "1", "2", "4", "7", "8", "12", "15", "16", "31"]
BOUNDARY_WORDS = (
    *(0, 1, 2, 3, 63, 64, 100, 127, 128, 200, 255, 256, 511, 512, 1000, 1023, 1024, 2047, 2048),
    *(4095, 4096, 32767, 32768, 65535, 65536, 2**31 - 1, 2**31, 2**32 - 1, 2**32, 2**53 + 1),
    *(2**63 - 1, -1, -2, -7, -128, -129, -32768, -32769, -(2**31), -(2**31) - 1, -(2**63)),
)


class Pick(Protocol):
    """Chooses one of several options."""

    def __call__(self, options: Sequence[Any], /) -> Any: ...


@dataclass(frozen=True, slots=True)
class Sample:
    """One expression as nodes and as text; the reading is called `x`.

    In `guarded` each operand is held by a macro `V(type, operand)`, so that no compiler which
    makes it a volatile object can simplify across operators.
    """

    text: str
    expression: Expression
    guarded: str


def _made(expression: Expression, form: str, *operands: Sample) -> Sample:
    """A sample from its operands; `form` has a place for each."""
    inside = form.format(*(operand.guarded for operand in operands))
    return Sample(
        form.format(*(operand.text for operand in operands)),
        expression,
        f"V({expression.type.name}, {inside})",
    )


def reading_sample(reading: Code) -> Sample:
    """The bare reading."""
    return _made(reading, "x")


def code(type_: CType) -> Code:
    """The reading `x`."""
    return Code(channels=(), text="x", type=type_, place=PLACE)


def constant(text: str, model: DataModel) -> Sample:
    """A constant as C spells it."""
    value, type_ = literal(text, model)
    return _made(Literal(value=value, type=type_), text)


def cast(model: DataModel, name: str, operand: Sample) -> Sample:
    """A cast to a type by its name."""
    node = building.convert(operand.expression, model.types[name], Purpose.CAST, PLACE)
    return _made(node, f"(({name}){{}})", operand)


def binary(model: DataModel, operator: str, left: Sample, right: Sample) -> Sample:
    """Two operands joined by an operator."""
    node = building.binary(model, operator, left.expression, right.expression, PLACE)
    return _made(node, f"({{}} {operator} {{}})", left, right)


def sample(pick: Pick, model: DataModel, reading: Code, depth: int) -> Sample:
    """An expression of at most `depth` nested operators."""
    if depth == 0:
        return _leaf(pick, model, reading)
    shape = pick((_binary, _binary, _binary, _binary, _unary, _cast, _cast, _choose, _leaf_only))
    made: Sample = shape(pick, model, reading, depth - 1)
    return made


def _leaf_only(pick: Pick, model: DataModel, reading: Code, depth: int) -> Sample:
    return _leaf(pick, model, reading)


def _leaf(pick: Pick, model: DataModel, reading: Code) -> Sample:
    pool = pick(("x", "x", "x", "integer", "floating"))
    if pool == "x":
        return reading_sample(reading)
    return constant(pick(INTEGERS if pool == "integer" else FLOATINGS), model)


def _binary(pick: Pick, model: DataModel, reading: Code, depth: int) -> Sample:
    left = sample(pick, model, reading, depth)
    right = sample(pick, model, reading, pick((0, depth)))
    whole = left.expression.type.is_integer and right.expression.type.is_integer
    common = (*ALWAYS[:4], *ALWAYS)
    operator = pick((*common, *WHOLE_ONLY, *WHOLE_ONLY) if whole else common)
    if operator in ("<<", ">>") and pick((True, True, False)):
        right = constant(pick(SMALL_COUNTS), model)
    return binary(model, operator, left, right)


def _unary(pick: Pick, model: DataModel, reading: Code, depth: int) -> Sample:
    operand = sample(pick, model, reading, depth)
    operator = pick("-+~!" if operand.expression.type.is_integer else "-+!")
    node = building.unary(model, operator, operand.expression, PLACE)
    return _made(node, f"({operator}{{}})", operand)


def _cast(pick: Pick, model: DataModel, reading: Code, depth: int) -> Sample:
    operand = sample(pick, model, reading, depth)
    return cast(model, pick(TYPES), operand)


def _choose(pick: Pick, model: DataModel, reading: Code, depth: int) -> Sample:
    condition = sample(pick, model, reading, depth)
    then = sample(pick, model, reading, depth)
    other = sample(pick, model, reading, 0)
    if other.expression is then.expression:
        other = constant("7", model)
    node = building.choose(model, condition.expression, then.expression, other.expression, PLACE)
    return _made(node, "({} ? {} : {})", condition, then, other)


@st.composite
def expressions(draw: st.DrawFn, model: DataModel, depth: int = 3) -> tuple[Sample, Code]:
    """Expressions over a reading of some integer type."""
    reading = code(model.types[draw(st.sampled_from(CODE_TYPES))])
    return sample(lambda options: draw(st.sampled_from(options)), model, reading, depth), reading
