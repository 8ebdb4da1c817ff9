"""Types of objects with everything that takes computing: array lengths, members, sizes."""

from collections.abc import Callable, Iterator
from dataclasses import replace

from bitweight.arithmetic.types import CType
from bitweight.firmware.objects import (
    Arithmetic,
    Array,
    FunctionType,
    Location,
    ObjectType,
    Pointer,
    Record,
    Strange,
)
from bitweight.firmware.syntax import ArrayOf, Expr, TypeSyntax
from bitweight.firmware.units import Unit, Variable
from bitweight.trace.contexts import Declared
from bitweight.trace.initialisers import element_count
from bitweight.trace.machines import Machine

_SIZE_DEPTH = 16


class Shapes(Machine):
    """Knows the types of objects, members and results."""

    def object_type(self, variable: Variable) -> ObjectType:
        """The type of an object with its array sizes filled in."""
        type_ = self.sized(variable.type, variable.syntax.type, variable.unit)
        return self.counted(type_, variable.value, variable.unit)

    def clash(self, name: str) -> str | None:
        """Why an object has no type to rely on: units declare it with different ones."""
        own = self.unit.variables.get(name)
        if own is None or own.location.root.scope:
            return None
        for unit in self.context.program.units.values():
            other = unit.variables.get(name)
            if other is not None and not other.location.root.scope:
                first, second = _number_in(own.type), _number_in(other.type)
                if first is not None and second is not None and first != second:
                    return f"{name} is declared as {first.name} and, in another file, {second.name}"
        return None

    def whole_type(self, declared: Declared) -> ObjectType:
        """The type of an object with static storage, its array sizes filled in."""
        type_ = self.sized(declared.type, declared.written, declared.unit)
        return self.counted(type_, declared.value, declared.unit)

    def counted(self, type_: ObjectType, value: Expr | None, unit: Unit) -> ObjectType:
        """A type whose open array length is that of its initialiser."""
        if isinstance(type_, Array) and type_.length is None:
            return replace(type_, length=element_count(value, self.subscript_in(unit)))
        return type_

    def resolved(self, syntax: TypeSyntax) -> ObjectType:
        """A type name as this unit means it."""
        return self.sized(self.unit.type_of(syntax), syntax, self.unit)

    def sized(self, type_: ObjectType, syntax: TypeSyntax, unit: Unit) -> ObjectType:
        """A declared type with the sizes of its arrays computed."""
        outermost = next(iter(syntax.derivations), None)
        if not isinstance(type_, Array) or not isinstance(outermost, ArrayOf):
            return type_
        if outermost.size is None:
            return type_
        inner = self.sized(type_.of, replace(syntax, derivations=syntax.derivations[1:]), unit)
        count = self.context.constant(self.elsewhere(unit, outermost.size))
        return Array(of=inner, length=int(count) if count is not None else None)

    def subscript_in(self, unit: Unit) -> Callable[[Expr], int | None]:
        """Evaluates the subscript of a designator as a unit means it."""

        def subscript(node: Expr) -> int | None:
            value = self.context.constant(self.elsewhere(unit, node))
            return int(value) if value is not None else None

        return subscript

    def field_names(self, record: Record) -> tuple[tuple[str, ObjectType], ...]:
        """Members of a record in order."""
        known = self.context.members
        if record not in known:
            known[record] = tuple(self._fields(record))
        return known[record]

    def _fields(self, record: Record) -> Iterator[tuple[str, ObjectType]]:
        unit = self.context.program.units.get(record.scope)
        if unit is None:
            return
        for one in unit.declarations.fields(record):
            type_ = self.sized(unit.declarations.field_type(one), one.type, unit)
            yield one.name, type_

    def sharing(self, record: Record, name: str) -> tuple[str, ...]:
        """The members that share their storage with a member of a union."""
        if record.kind == "union":
            return tuple(one for one in self._names(record) if one != name)
        for own, type_ in self.field_names(record):
            if not own and isinstance(type_, Record) and name in self._names(type_):
                return self.sharing(type_, name)
        return ()

    def _names(self, record: Record, depth: int = 0) -> Iterator[str]:
        """Member names of a record, those of unnamed inner records too."""
        for own, type_ in self.field_names(record):
            if own:
                yield own
            elif isinstance(type_, Record) and depth < _SIZE_DEPTH:
                yield from self._names(type_, depth + 1)

    def member_type(self, type_: ObjectType, name: str) -> ObjectType | None:
        """The type of a member of a record."""
        if not isinstance(type_, Record):
            return None
        for own, inner in self.field_names(type_):
            if own == name:
                return inner
            found = self.member_type(inner, name) if not own else None
            if found is not None:
                return found
        for unit in self.context.program.units.values():
            found = unit.member(type_, name)
            if found is not None:
                return found
        return None

    def type_at(self, location: Location) -> ObjectType:
        """The type of an object that was written, or of the declared object it is part of."""
        if location in self.types:
            return self.types[location]
        declared = self.context.declared(location, self.unit)
        if declared is None:
            return Strange(name="")
        type_ = self.whole_type(declared)
        for step in location.path:
            if isinstance(type_, Array):
                type_ = type_.of
            else:
                type_ = self.member_type(type_, str(step)) or Strange(name="")
        return type_

    def returned(self, name: str) -> ObjectType | None:
        """What a function is declared to return."""
        program = self.context.program
        for function in program.function(name, self.unit):
            return _result(function.unit.type_of(function.syntax.type))
        for unit in (self.unit, *program.units.values()):
            if name in unit.prototypes:
                return _result(unit.type_of(unit.prototypes[name].type))
        return self.vendor_type(name)

    def vendor_type(self, name: str) -> ObjectType | None:
        """The type that the family's data gives a register or call that nothing declares."""
        for family in self.context.families:
            if name in family.types:
                known = self.model.named(tuple(family.types[name].split()))
                return Arithmetic(type=known) if known is not None else None
        return None

    def size(self, type_: ObjectType, depth: int = 0) -> int | None:
        """Bytes of an object with natural alignment (the usual ABI; none on 8-bit targets)."""
        match type_:
            case Arithmetic():
                return max(1, type_.type.bits // 8)
            case Pointer():
                return self.model.pointer_bits // 8
            case Array(length=int()):
                inner = self.size(type_.of, depth + 1) if depth < _SIZE_DEPTH else None
                return inner * type_.length if inner is not None and type_.length else None
            case _:
                return None


def _result(type_: ObjectType) -> ObjectType | None:
    return type_.returns if isinstance(type_, FunctionType) else None


def _number_in(type_: ObjectType) -> CType | None:
    """The type of a number, or of the numbers of an array."""
    while isinstance(type_, Array):
        type_ = type_.of
    return type_.type if isinstance(type_, Arithmetic) else None
