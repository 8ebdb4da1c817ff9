"""The board file's C expressions, matched by structure after macro expansion.

`$any` stands for any expression, `$code` for where the code is delivered, `EXPR @ WHERE` limits the
place.
"""

import re
from collections.abc import Callable
from dataclasses import dataclass, replace

from bitweight.firmware.syntax import (
    Call,
    Cast,
    Conditional,
    Expr,
    Index,
    Marked,
    Member,
    Name,
    Number,
    Operation,
    Pair,
    Text,
)
from bitweight.firmware.units import Function, Unit
from bitweight.places import Place

ANY = "bitweight_any_"
CODE = "bitweight_code_"
_WORD = re.compile(r"[A-Za-z_]\w*")

Constant = Callable[[Expr], int | float | None]


@dataclass(frozen=True, slots=True, kw_only=True)
class Pattern:
    """One expression of the board file. `where` is a function or file it is limited to."""

    text: str
    where: str | None
    place: Place

    @property
    def names(self) -> frozenset[str]:
        """The identifiers it mentions."""
        return frozenset(_WORD.findall(self.text)) - {"any", "code"}

    def applies(self, function: Function | None, unit: Unit) -> bool:
        """Whether the pattern may match in this function of this unit."""
        if self.where is None:
            return True
        if function is not None and function.name == self.where:
            return True
        files = {unit.path, function.key.file if function is not None else unit.path}
        return any(file == self.where or file.endswith("/" + self.where) for file in files)


def pattern(text: str, place: Place) -> Pattern:
    """A pattern from the board file's text, its `@` split off."""
    body, at, where = text.rpartition("@")
    if not at:
        return Pattern(text=text.strip(), where=None, place=place)
    return Pattern(text=body.strip(), where=where.strip(), place=place)


def spelled(text: str) -> str:
    """A pattern's text as C: placeholders as names, without the semicolon of a statement."""
    return text.replace("$any", ANY).replace("$code", CODE).rstrip("; \t")


def excerpt(text: str, unit: Unit) -> Unit:
    """The unit of a pattern: its text with the macros of `unit` expanded."""
    return unit.excerpt(spelled(text))


def parsed(text: str, unit: Unit) -> Expr | None:
    """The tree of a pattern with the macros of a unit expanded; None if it is no C expression."""
    definitions = unit.translation.macros.final.at(0)
    if any(word in definitions or unit.parser.is_type(word) for word in _WORD.findall(text)):
        return excerpt(text, unit).parser.expression()
    if text not in unit.plain_trees:
        unit.plain_trees[text] = excerpt(text, unit).parser.expression()
    return unit.plain_trees[text]


def head(tree: Expr) -> tuple[str, str]:
    """A key that a pattern shares with every expression it can match."""
    tree = _bare(tree)
    match tree:
        case Name():
            return ("name", tree.text)
        case Call(function=Name(text=name)):
            return ("call", name)
        case Member():
            return ("member", tree.name)
        case Index():
            return ("index", head(tree.base)[1])
        case Operation():
            return ("operation", tree.operator)
        case Pair():
            return ("pair", tree.operator)
        case _:
            return (type(tree).__name__, "")


def matches(wanted: Expr, given: Expr, ours: Constant, theirs: Constant) -> bool:
    """Whether an expression has the structure of a pattern.

    `ours` evaluates constants of the pattern, `theirs` those of the expression where it stands.
    """
    wanted, given = _bare(wanted), _bare(given)
    if isinstance(wanted, Name) and wanted.text == ANY:
        return True
    if _is_delivery(wanted):
        return True
    if _same_shape(wanted, given, ours, theirs):
        return True
    if isinstance(wanted, Call | Text) or isinstance(given, Call | Text):
        return False
    value = ours(wanted)
    return value is not None and value == theirs(given)


def _same_shape(wanted: Expr, given: Expr, ours: Constant, theirs: Constant) -> bool:
    def both(one: Expr, other: Expr) -> bool:
        return matches(one, other, ours, theirs)

    match wanted, given:
        case Name(), Name():
            return wanted.text == given.text
        case Number(), Number():
            return wanted.text == given.text
        case Text(), Text():
            return wanted.text == given.text
        case Call(), Call():
            return (
                len(wanted.arguments) == len(given.arguments)
                and both(wanted.function, given.function)
                and all(map(both, wanted.arguments, given.arguments))
            )
        case Index(), Index():
            return both(wanted.base, given.base) and both(wanted.index, given.index)
        case Member(), Member():
            return wanted.name == given.name and both(wanted.base, given.base)
        case Operation(), Operation():
            return wanted.operator == given.operator and both(wanted.operand, given.operand)
        case Pair(), Pair():
            return (
                wanted.operator == given.operator
                and both(wanted.left, given.left)
                and both(wanted.right, given.right)
            )
        case Cast(), Cast():
            return wanted.type == given.type and both(wanted.operand, given.operand)
        case Conditional(), Conditional():
            return both(wanted.condition, given.condition) and both(wanted.other, given.other)
        case _:
            return False


def _bare(tree: Expr) -> Expr:
    """Without marks, and with `&*x` and `*&x` gone."""
    while True:
        match tree:
            case Marked():
                tree = tree.operand
            case Operation(operator="*", operand=Operation(operator="&") as inner):
                tree = inner.operand
            case Operation(operator="&", operand=Operation(operator="*") as inner):
                tree = inner.operand
            case _:
                return tree


def _is_delivery(wanted: Expr) -> bool:
    """Whether a pattern's part is where the code arrives; any pointer may stand there."""
    if isinstance(wanted, Operation) and wanted.operator == "&":
        wanted = wanted.operand
    return isinstance(wanted, Name) and wanted.text == CODE


def delivered(wanted: Expr, given: Expr) -> Expr | None:
    """The part of a matching expression that stands where the pattern has `$code` or `&$code`."""
    wanted, given = _bare(wanted), _bare(given)
    if _is_delivery(wanted):
        return given
    match wanted, given:
        case Call(), Call():
            pairs = list(zip(wanted.arguments, given.arguments, strict=False))
        case Operation(), Operation():
            pairs = [(wanted.operand, given.operand)]
        case Cast(), Cast():
            pairs = [(wanted.operand, given.operand)]
        case _:
            return None
    for one, other in pairs:
        found = delivered(one, other)
        if found is not None:
            return found
    return None


def substituted(tree: Expr, name: str, by: Expr) -> Expr:
    """A call with one of its arguments replaced where it is the name given."""
    if isinstance(tree, Name) and tree.text == name:
        return by
    if isinstance(tree, Call):
        return replace(tree, arguments=tuple(substituted(one, name, by) for one in tree.arguments))
    return tree


def is_object(tree: Expr) -> bool:
    """Whether a pattern names an object: names, members, subscripts and `*` alone."""
    return bool(object_name(tree))


def object_name(tree: Expr) -> str:
    """The object that a pattern starts from; empty where it is no object."""
    while True:
        match tree:
            case Name():
                return "" if tree.text in (ANY, CODE) else tree.text
            case Member() | Index():
                tree = tree.base
            case Operation(operator="*") | Marked():
                tree = tree.operand
            case _:
                return ""
