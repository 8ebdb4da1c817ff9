"""The board file's expressions, found where they stand in the code: readings and stated values."""

from collections.abc import Iterator
from dataclasses import replace

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Code, Expression, Literal
from bitweight.arithmetic.types import DataModel
from bitweight.firmware.objects import ANYWHERE, Arithmetic, Location, ObjectType
from bitweight.firmware.syntax import (
    Call,
    Cast,
    Expr,
    Index,
    Marked,
    Member,
    Name,
    Number,
    Operation,
    Pair,
)
from bitweight.firmware.units import Unit
from bitweight.trace.contexts import Given, Reading, Wanted
from bitweight.trace.lvalues import Lvalues
from bitweight.trace.memory import is_number
from bitweight.trace.patterns import delivered, head, is_object, matches, object_name

_UNARY = ("-", "+", "~", "!")


class Matching(Lvalues):
    """Recognises the board file's expressions."""

    def given(self, node: Expr) -> Expression | None:
        """The code, or the stated value, if the board file names this expression."""
        candidates = self.context.wanted(self.unit).get(head(node))
        if not candidates or isinstance(node, Number | Marked):
            return None
        found = [wanted for wanted in candidates if self._matches(wanted, node)]
        return self._delivered(_shared(found), node) if found else None

    def is_reading(self, node: Expr) -> bool:
        """Whether the board file names this object as a reading: its writes are not followed."""
        candidates = self.context.wanted(self.unit).get(head(node), ())
        near = self.near
        found = any(
            isinstance(one.source, Reading) and self._matches(one, node) for one in candidates
        )
        self.near = near
        return found

    def located(self, location: Location, node: Expr) -> Expression | None:
        """The code, if what a pointer leads to is an object that a reading names."""
        if location.root.kind == "local" or not self.context.names_objects:
            return None
        found = [
            wanted
            for place, wanted in self._reading_objects()
            if _is_element(location, place)
            and wanted.source.pattern.applies(self.frame.function, self.unit)
        ]
        return self._delivered(_shared(found), node) if found else None

    def _reading_objects(self) -> list[tuple[Location, Wanted]]:
        """The objects that readings name, in any unit."""
        units = tuple(self.context.program.units.values())
        known = self.context.reading_objects
        for unit in units:
            if unit.path not in known:
                known[unit.path] = []
                known[unit.path] = [*self._objects_read(unit)]
        return list({one: None for some in known.values() for one in some})

    def _objects_read(self, unit: Unit) -> Iterator[tuple[Location, Wanted]]:
        outside = type(self)(self.context, unit)
        for some in self.context.wanted(unit).values():
            for wanted in some:
                if isinstance(wanted.source, Reading) and is_object(wanted.tree):
                    found = outside.lvalue(wanted.tree)
                    if found is not None:
                        yield found[0], wanted

    def _matches(self, wanted: Wanted, node: Expr) -> bool:
        pattern = wanted.source.pattern
        if not pattern.applies(self.frame.function, self.unit):
            return False
        if isinstance(node, Name) and pattern.where is None:
            local = self.frame.local(node.text)
            if local is not None and self.context.program.variable(node.text, None) is not None:
                return False
        if matches(wanted.tree, node, self._outside_constant, self.constant):
            return True
        if isinstance(node, Call | Index):
            self.near = True
        return False

    # --- constants of a pattern -----------------------------------------------------------------

    def _outside_constant(self, node: Expr) -> int | float | None:
        """A constant of a pattern: no local is meant by it."""
        known = self.context.pattern_constants
        key = (self.unit.path, id(node))
        if key not in known:
            outside = type(self)(self.context, self.unit)
            known[key] = (node, outside.plain_constant(node))
        return known[key][1]

    def plain_constant(self, node: Expr) -> int | float | None:
        """A constant whose expression is not itself looked for among the patterns."""
        match node:
            case Name():
                return self.fixed(self.name(node))
            case Number():
                end = len(self.unit.translation.text)
                return self.fixed(self.context.literal(self.unit, end, node.text))
            case Cast():
                return self.plain_constant(node.operand)
            case Operation():
                return self._plain_operation(node)
            case Pair():
                return self._plain_pair(node)
            case _:
                return None

    def _plain_operation(self, node: Operation) -> int | float | None:
        inner = self.plain_constant(node.operand)
        if inner is None or node.operator not in _UNARY:
            return None
        operand = unspelled(inner, self.model)
        return self.fixed(building.unary(self.model, node.operator, operand, self.nowhere))

    def _plain_pair(self, node: Pair) -> int | float | None:
        left, right = self.plain_constant(node.left), self.plain_constant(node.right)
        if left is None or right is None or node.operator == ",":
            return None
        made = building.binary(
            self.model,
            node.operator,
            unspelled(left, self.model),
            unspelled(right, self.model),
            self.nowhere,
        )
        return self.fixed(made)

    # --- what a match stands for ----------------------------------------------------------------

    def _delivered(self, wanted: Wanted, node: Expr) -> Expression:
        source = wanted.source
        if isinstance(source, Given):
            return unspelled(source.value, self.model)
        target = delivered(wanted.tree, node)
        if target is None:
            code = self._code(source, self.declared_type(node), node)
            clash = self.clash(object_name(wanted.tree)) if is_object(wanted.tree) else None
            return code if clash is None else self.unknown(clash, node, code.type)
        if isinstance(target, Operation) and target.operator == "&":
            found = self.lvalue(target.operand)
        else:
            found = self.pointee(target)
        if found is not None:
            location, type_ = found
            if location.plain is not location:
                location = location.plain
                type_ = self.type_at(location)
            self.put(location, type_, self._code(source, type_, node), node)
        return self.unknown(f"the status that {_word(node)} returns", node)

    def _code(self, source: Reading, type_: ObjectType | None, node: Expr) -> Code:
        self.note_registers(source, node)
        for channel in source.channels:
            self.context.seen.setdefault(channel, self.used(node))
        return Code(
            channels=source.channels,
            text=source.pattern.text,
            type=type_.type if isinstance(type_, Arithmetic) else source.type,
            place=self.used(node),
        )

    def note_registers(self, source: Reading, node: Expr) -> None:
        """Record what the family's registers hold where this reading is taken."""
        for register in self.context.registers:
            name = Name(start=node.start, end=node.start, text=register)
            found = self.lvalue(name)
            held = self.value(name)
            if is_number(held) and found is not None:
                place = self.stores.get(found[0], (self.used(node), ""))[0]
                self.note("register", register, held, place, channels=source.channels)

    def declared_type(self, node: Expr) -> ObjectType | None:
        """The type that declarations give an expression, which is not evaluated."""
        match node:
            case Call(function=Name(text=name)):
                return self.returned(name)
            case Name() | Index() | Member() | Operation(operator="*"):
                before = self.state.copy()
                found = self.lvalue(node)
                self.state = before
                return found[1] if found is not None else None
            case Marked():
                return self.declared_type(node.operand)
            case Cast():
                return self.resolved(node.type)
            case _:
                return None


def _is_element(location: Location, wanted: Location) -> bool:
    """Whether a location is the one that a reading names, `$any` subscripts considered."""
    return (
        location.root == wanted.root
        and len(location.path) == len(wanted.path)
        and all(
            mine == theirs or (theirs == ANYWHERE and isinstance(mine, int))
            for mine, theirs in zip(location.path, wanted.path, strict=True)
        )
    )


def _shared(found: list[Wanted]) -> Wanted:
    """The first of several matches; a reading with the channels of all, which may share one."""
    first = found[0]
    if not isinstance(first.source, Reading):
        return first
    some = [one.source.channels for one in found if isinstance(one.source, Reading)]
    channels = tuple(dict.fromkeys(name for names in some for name in names))
    return replace(first, source=replace(first.source, channels=channels))


def unspelled(value: int | float, model: DataModel) -> Literal:
    """A number that no source text spells."""
    if isinstance(value, float):
        return Literal(value=value, type=model.double)
    for type_ in (model.int_, model.long, model.long_long):
        if type_.low <= value <= type_.high:
            return Literal(value=value, type=type_)
    return Literal(value=value, type=model.unsigned_long_long)


def _word(node: Expr) -> str:
    if isinstance(node, Call) and isinstance(node.function, Name):
        return f"{node.function.text}()"
    return "the call"
