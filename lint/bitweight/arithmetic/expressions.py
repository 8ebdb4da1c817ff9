"""The language between tracing and evaluation: C arithmetic as a tree of typed nodes.

Lowering makes these nodes from C text, with every implicit conversion written out as `Convert`;
evaluation runs them for every code. Trees share sub-trees: walk them with a memo by identity.
"""

from collections.abc import Container, Iterator
from dataclasses import dataclass
from enum import Enum

from bitweight.arithmetic.types import CType
from bitweight.places import Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Leaf:
    """A constant as the source spells it: what a finding names and a replacement edits.

    `name` is the macro, enumerator or object whose definition is just this constant, else None.
    `place` to `end_column` is the spelling itself, on one line. `use` is where the expression that
    bites mentions it. `names` are the macros it came through, innermost first. `comment` is
    the text of a comment on the definition's line, if any.
    """

    name: str | None
    text: str
    place: Place
    end_column: int
    use: Place
    names: tuple[str, ...] = ()
    comment: str = ""


class Purpose(Enum):
    """Why a conversion happens; findings word themselves by it."""

    PROMOTION = "promotion"
    BALANCE = "usual conversion"
    CAST = "cast"
    STORE = "assignment"
    ARGUMENT = "argument"
    RETURN = "return"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Literal:
    """A constant. `leaf` is None for a number that no source text spells."""

    value: int | float
    type: CType
    leaf: Leaf | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Code:
    """A reading: the raw word of the converter. `channels` are those whose `reading` matched."""

    channels: tuple[str, ...]
    text: str
    type: CType
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Unknown:
    """A value that could not be followed; `reason` is in words a user can act on."""

    reason: str
    type: CType
    place: Place | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Default:
    """An object whose declared initialiser is used although the program may overwrite it."""

    name: str
    operand: "Expression"
    type: CType
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Convert:
    """Conversion to `type` (C11 6.3.1)."""

    operand: "Expression"
    type: CType
    purpose: Purpose
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Unary:
    """`-`, `+`, `~` or `!` on an operand already promoted."""

    operator: str
    operand: "Expression"
    type: CType
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Binary:
    """An operator on operands already converted; `type` is the type of the result.

    Operators: `* / % + - << >> < > <= >= == != & ^ | && ||`.
    """

    operator: str
    left: "Expression"
    right: "Expression"
    type: CType
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Choose:
    """`condition ? then : other`, also what if/else, switch and early returns become."""

    condition: "Expression"
    then: "Expression"
    other: "Expression"
    type: CType
    place: Place


Expression = Literal | Code | Unknown | Default | Convert | Unary | Binary | Choose


def children(node: Expression) -> tuple[Expression, ...]:
    """The operands of a node, in source order."""
    match node:
        case Literal() | Code() | Unknown():
            return ()
        case Default() | Convert() | Unary():
            return (node.operand,)
        case Binary():
            return (node.left, node.right)
        case Choose():
            return (node.condition, node.then, node.other)


def walk(root: Expression, known: Container[int] = ()) -> Iterator[Expression]:
    """Every distinct node below `root`, operands before operators, without recursion.

    Nodes whose identity is among the `known` are left out with all that is below them.
    """
    seen: set[int] = set()
    pending: list[tuple[Expression, bool]] = [(root, False)]
    while pending:
        node, ready = pending.pop()
        if ready:
            yield node
            continue
        if id(node) in seen or id(node) in known:
            continue
        seen.add(id(node))
        pending.append((node, True))
        pending.extend(
            (child, False) for child in reversed(children(node)) if id(child) not in seen
        )
