"""The C tree: every kind of expression, statement and declaration that is followed.

`start` and `end` are offsets in the text of the translation unit. Parentheses are gone; what is not
followed is `Opaque` with the name of its kind, so that nothing is dropped in silence.
"""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Node:
    """A stretch of the unit's text."""

    start: int
    end: int


# --- types -------------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True, kw_only=True)
class Field:
    """A member of a struct or union, in order; `bits` is the width of a bit field.

    `start` is where the name stands.
    """

    name: str
    start: int = 0
    type: "TypeSyntax"
    bits: "Expr | None" = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Enumerator(Node):
    """`name = value` of an enum; without a value it is one more than the last."""

    name: str
    value: "Expr | None"


@dataclass(frozen=True, slots=True, kw_only=True)
class Specifiers:
    """The first part of a declaration: `words` (arithmetic, typedef names) or a tagged type.

    `like` is the operand of a GNU or C23 `typeof`.
    """

    words: tuple[str, ...] = ()
    record: str | None = None
    tag: str | None = None
    fields: tuple[Field, ...] | None = None
    enumerators: tuple[Enumerator, ...] | None = None
    storage: frozenset[str] = frozenset()
    qualifiers: frozenset[str] = frozenset()
    like: "Expr | None" = None


@dataclass(frozen=True, slots=True, kw_only=True)
class PointerTo:
    """`*`, with its qualifiers."""

    qualifiers: frozenset[str] = frozenset()


@dataclass(frozen=True, slots=True, kw_only=True)
class ArrayOf:
    """`[size]`."""

    size: "Expr | None"


@dataclass(frozen=True, slots=True, kw_only=True)
class FunctionOf:
    """`(parameters)`."""

    parameters: tuple["Declarator", ...]
    variadic: bool = False


Derivation = PointerTo | ArrayOf | FunctionOf


@dataclass(frozen=True, slots=True, kw_only=True)
class TypeSyntax:
    """A type as written: specifiers, then derivations from the outermost inwards.

    `char *a[3]` is derivations (ArrayOf 3, PointerTo) over `char`: an array of pointers.
    """

    specifiers: Specifiers
    derivations: tuple[Derivation, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Declarator(Node):
    """One declared name with its type and initialiser; `start` is where the name stands."""

    name: str
    type: TypeSyntax
    value: "Expr | None" = None


# --- expressions -------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True, kw_only=True)
class Name(Node):
    """An identifier that is no macro."""

    text: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Number(Node):
    """An integer, floating or character constant as written."""

    text: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Text(Node):
    """A string."""

    text: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Call(Node):
    """`function(arguments)`."""

    function: "Expr"
    arguments: tuple["Expr", ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Index(Node):
    """`base[index]`."""

    base: "Expr"
    index: "Expr"


@dataclass(frozen=True, slots=True, kw_only=True)
class Member(Node):
    """`base.name`; `p->name` is `(*p).name`."""

    base: "Expr"
    name: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Operation(Node):
    """A unary operator: `- + ~ ! * &`."""

    operator: str
    operand: "Expr"


@dataclass(frozen=True, slots=True, kw_only=True)
class Increment(Node):
    """`++` or `--`, before or after."""

    operator: str
    target: "Expr"
    prefix: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Pair(Node):
    """A binary operator, the comma included; `at` is the operator's own offset."""

    operator: str
    left: "Expr"
    right: "Expr"
    at: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Assign(Node):
    """`target operator value`; the operator is `=`, `+=`, ..."""

    operator: str
    target: "Expr"
    value: "Expr"
    at: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Conditional(Node):
    """`condition ? then : other`; GNU `a ?: b` has no `then`."""

    condition: "Expr"
    then: "Expr | None"
    other: "Expr"


@dataclass(frozen=True, slots=True, kw_only=True)
class Cast(Node):
    """`(type)operand`."""

    type: TypeSyntax
    operand: "Expr"


@dataclass(frozen=True, slots=True, kw_only=True)
class SizeOf(Node):
    """`sizeof` of a type or an expression."""

    type: TypeSyntax | None
    operand: "Expr | None"


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """One initialiser of a braced list with its designators (member names and subscripts)."""

    designators: tuple["str | Expr", ...]
    value: "Expr"


@dataclass(frozen=True, slots=True, kw_only=True)
class Braces(Node):
    """`{ ... }` as an initialiser; with `type` a compound literal."""

    entries: tuple[Entry, ...]
    type: TypeSyntax | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class StatementExpr(Node):
    """GNU `({ ... })`."""

    body: "Block"


@dataclass(frozen=True, slots=True, kw_only=True)
class Marked(Node):
    """An expression that is the whole expansion of a macro whose name is asked for."""

    name: str
    operand: "Expr"


@dataclass(frozen=True, slots=True, kw_only=True)
class Opaque(Node):
    """Something that is not followed; `kind` says what it is in plain words."""

    kind: str


Expr = (
    Name
    | Number
    | Text
    | Call
    | Index
    | Member
    | Operation
    | Increment
    | Pair
    | Assign
    | Conditional
    | Cast
    | SizeOf
    | Braces
    | StatementExpr
    | Marked
    | Opaque
)

# --- statements --------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True, kw_only=True)
class Block(Node):
    """`{ ... }`."""

    items: tuple["Stmt", ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Declare(Node):
    """A declaration inside a block, perhaps of nothing but a type."""

    specifiers: Specifiers
    declarators: tuple[Declarator, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Evaluate(Node):
    """An expression statement."""

    expression: Expr


@dataclass(frozen=True, slots=True, kw_only=True)
class If(Node):
    """`if (condition) then else other`."""

    condition: Expr
    then: "Stmt"
    other: "Stmt | None"


@dataclass(frozen=True, slots=True, kw_only=True)
class Loop(Node):
    """for, while and do: `before; while (condition) { body; step }`.

    `first` runs the body before the test.
    """

    before: "Stmt | None"
    condition: Expr | None
    step: Expr | None
    body: "Stmt"
    first: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Switch(Node):
    """`switch (subject) body`."""

    subject: Expr
    body: "Stmt"


@dataclass(frozen=True, slots=True, kw_only=True)
class Case(Node):
    """`case value:` with the statements up to the next label; `default` has no value."""

    value: Expr | None
    last: Expr | None
    items: tuple["Stmt", ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Return(Node):
    """`return value;`."""

    value: Expr | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Jump(Node):
    """`break`, `continue` or `goto label`."""

    kind: str
    label: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Label(Node):
    """`name: statement`."""

    name: str
    body: "Stmt"


Stmt = Block | Declare | Evaluate | If | Loop | Switch | Case | Return | Jump | Label | Opaque

# --- the outside of a unit ---------------------------------------------------------------------


@dataclass(frozen=True, slots=True, kw_only=True)
class FunctionSyntax(Node):
    """A function definition: the name stands at `start`, the body from `body_start` to `end`."""

    name: str
    type: TypeSyntax
    parameters: tuple[Declarator, ...]
    body_start: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Typedef:
    """`typedef type name`."""

    name: str
    type: TypeSyntax
