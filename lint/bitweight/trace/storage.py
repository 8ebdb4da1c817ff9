"""Reading and writing objects within a run."""

from collections.abc import Iterator
from dataclasses import replace
from itertools import islice

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Expression, Literal, Purpose
from bitweight.firmware.objects import (
    ANYWHERE,
    Arithmetic,
    Array,
    FunctionType,
    Location,
    ObjectType,
    Path,
    Pointer,
    Record,
    Root,
    Strange,
)
from bitweight.firmware.syntax import Expr, Node
from bitweight.places import Place
from bitweight.trace.contexts import shown
from bitweight.trace.memory import Address, Copy, Routine, State, Value, is_number
from bitweight.trace.shapes import Shapes

_DECLARED = frozenset({"object", "local"})
_MOST_LEAVES = 256
"""Members and elements of a struct that are copied one by one."""
_MOST_ELEMENTS = 4096
"""Elements of an array that are told apart in its initialiser."""


class Storage(Shapes):
    """Reads and writes objects."""

    # --- reading ------------------------------------------------------------------------------

    def read(self, location: Location, type_: ObjectType, node: Node) -> Value:
        """The value of an object now."""
        if location.plain is not location:
            reason = f"{shown(location.plain)} is read as another type than its own"
            return self.unknown(reason, node, type_.type if isinstance(type_, Arithmetic) else None)
        known = self.state.values.get(location)
        if known is not None and not isinstance(known, Copy):
            return self._as_declared(known, type_, node)
        if isinstance(type_, Array):
            return Address(target=location.part(0), type=type_.of)
        if isinstance(type_, FunctionType):
            return Routine(name=location.root.name, function=None)
        if isinstance(type_, Record):
            return Copy(
                parts=self.state.parts(location),
                source=known.source if isinstance(known, Copy) else location,
                type=type_,
            )
        if ANYWHERE in location.path:
            if any(shown(location).startswith(one) for one in self.context.reading_names):
                self.near = True
            reason = f"{shown(location)} is read at a subscript that is not constant"
            return self.unknown(reason, node)
        inherited = self.inherited(self.state, location, type_, node)
        if inherited is not None:
            return inherited
        return self.initial(location, type_, self.used(node))

    def _as_declared(self, value: Value, type_: ObjectType, node: Node) -> Value:
        """A number as the type it is read with, which may differ in its sign alone."""
        if not isinstance(type_, Arithmetic) or not is_number(value):
            return value
        return building.convert(value, type_.type, Purpose.CAST, self.used(node))

    def inherited(
        self, state: State, location: Location, type_: ObjectType, node: Node
    ) -> Value | None:
        """What an object has that was not written itself; None where nothing touched it.

        It may be a part of what was written as a whole, what an unknown subscript means, or share
        its storage with another member of a union.
        """
        for known in state.values:
            if ANYWHERE in known.path and location.may_be_in(known):
                reason = f"{location.root.name} is written at a subscript that is not constant"
                return self.unknown(reason, node)
        other = next((one for one in self.sharing_with(location) if state.holds(one)), None)
        if other is not None:
            return self.unknown(f"{shown(location)} is read as {shown(other)} was written", node)
        for depth in range(len(location.path) - 1, -1, -1):
            outer = state.values.get(Location(location.root, location.path[:depth]))
            if isinstance(outer, Copy):
                source = outer.source.at(location.path[depth:])
                return self.initial(source, type_, self.used(node))
            if outer is not None:
                return self.unknown(f"{shown(location)} is part of something set as a whole", node)
        return None

    def sharing_with(self, location: Location) -> Iterator[Location]:
        """The union members that share storage with an object or with what it is part of."""
        for depth in range(1, len(location.path) + 1):
            part = Location(location.root, location.path[:depth])
            yield from self.context.sharing.get(part, ())

    def initial(self, location: Location, type_: ObjectType, place: Place) -> Value:
        """The value an object has before this run writes it."""
        if location.root.kind == "local":
            return self.context.unknown(f"{shown(location)} is read before it is set", place)
        if location.root.kind == "object":
            fixed = self.never_written(location, type_, place)
            if fixed is not None:
                return fixed
        match type_:
            case Pointer():
                return Address(target=Location(Root("pointee", shown(location))), type=type_.to)
            case Record():
                return Copy(parts=(), source=location, type=type_)
            case Array():
                return Address(target=location.part(0), type=type_.of)
            case Strange(name=name) if name and location.root.kind == "object":
                return self.context.unknown(_untyped(location, name), place)
            case _:
                return self.context.object(location, type_, place)

    def never_written(self, location: Location, type_: ObjectType, place: Place) -> Value | None:
        """The initialiser of an object that nothing in the sources writes."""
        raise NotImplementedError

    # --- writing ------------------------------------------------------------------------------

    def store(self, location: Location, type_: ObjectType, value: Value, node: Node) -> Value:
        """Write an object; the value it then has."""
        if location.plain is not location:
            reason = f"{shown(location.plain)} is written as another type than its own"
            self.forget(location.plain, self.type_at(location.plain), reason, node)
            return value
        value = self.fitted(location, type_, value, node)
        self.put(location, type_, value, node)
        self.remember_store(location, self.used(node))
        return value

    def fitted(self, location: Location, type_: ObjectType, value: Value, node: Node) -> Value:
        """A value as an object of a type holds it."""
        if isinstance(type_, Pointer) and isinstance(value, Address):
            return self.retyped(value, type_.to)
        if not is_number(value):
            return value
        if isinstance(type_, Arithmetic):
            return building.convert(value, type_.type, Purpose.STORE, self.used(node))
        if isinstance(type_, Strange) and type_.name and location.root.kind in _DECLARED:
            return self.unknown(_untyped(location, type_.name), node)
        return value

    def put(self, location: Location, type_: ObjectType, value: Value, node: Node) -> None:
        """Let an object have a value; a struct is copied member by member."""
        for other in self.sharing_with(location):
            self.state.forget(other)
        if isinstance(value, Copy):
            value = replace(value, parts=tuple(self.taken_apart(value, node)))
        self.state.write(location, value)
        self.types[location] = type_

    def forget(self, location: Location, type_: ObjectType, reason: str, node: Node) -> None:
        """Make unknown what an object and its parts hold."""
        for known in [one for one in self.state.values if one.within(location)]:
            value = self.state.values[known]
            if is_number(value):
                made = self.context.unknown(reason, self.used(node), value.type, shown(known))
                self.state.values[known] = made
            else:
                del self.state.values[known]
        if isinstance(type_, Arithmetic):
            made = self.context.unknown(reason, self.used(node), type_.type, shown(location))
            self.put(location, type_, made, node)
        elif location.root.kind == "local":
            outside = Location(Root("pointee", shown(location), f"lost at {self.used(node)}"))
            self.context.lost[outside.root] = reason
            self.state.values[location] = Copy(parts=(), source=outside, type=type_)

    def doubt(self, before: State, reason: str, node: Node) -> None:
        """Make unknown what has changed since a state."""
        for location, value in self.state.values.items():
            if before.values.get(location) is not value:
                type_ = value.type if is_number(value) else None
                made = self.context.unknown(reason, self.used(node), type_, shown(location))
                self.state.values[location] = made

    def retyped(self, address: Address, to: ObjectType) -> Address:
        """A pointer after conversion to a pointer to another type."""
        own = address.type
        if isinstance(to, Strange) or own == to:
            return address
        if isinstance(own, Array) and own.of == to:
            return Address(target=address.target.part(0), type=to)
        if self._looks_alike(own, to):
            return replace(address, type=to)
        return Address(target=address.target.viewed(_type_name(to)), type=to)

    def _looks_alike(self, own: ObjectType, to: ObjectType) -> bool:
        """Whether an object of one type may be used through a pointer to the other."""
        if isinstance(own, Arithmetic) and isinstance(to, Arithmetic):
            same = own.type.bits == to.type.bits
            return same and own.type.is_integer and to.type.is_integer
        if isinstance(own, Record) and isinstance(to, Record):
            ours = [name for name, _ in self.field_names(own)]
            theirs = [name for name, _ in self.field_names(to)]
            return ours == theirs or not ours or not theirs
        return not isinstance(own, Arithmetic | Record) and not (
            isinstance(own, Array) and isinstance(to, Arithmetic | Record)
        )

    # --- structs, part by part ----------------------------------------------------------------

    def taken_apart(self, value: Copy, node: Node) -> Iterator[tuple[Path, Value]]:
        """The parts of a struct value: all of them if they can be listed, else those known."""
        known = dict(value.parts)
        leaves = list(islice(self.leaves(value.type), _MOST_LEAVES + 1))
        if len(leaves) <= _MOST_LEAVES:
            for path, type_ in leaves:
                if path not in known:
                    known[path] = self.initial(value.source.at(path), type_, self.used(node))
        yield from known.items()

    def leaves(self, type_: ObjectType, path: Path = ()) -> Iterator[tuple[Path, ObjectType]]:
        """The parts of a struct that are no structs themselves; unions are left out."""
        match type_:
            case Record(kind="struct") if len(path) < _MOST_LEAVES:
                for name, inner in self.field_names(type_):
                    yield from self.leaves(inner, (*path, name) if name else path)
            case Array(length=int() as length) if length <= _MOST_ELEMENTS:
                for index in range(length):
                    yield from self.leaves(type_.of, (*path, index))
            case Arithmetic() | Pointer() if path:
                yield path, type_
            case _:
                return

    def zero(self, type_: ObjectType) -> Expression | None:
        """What an object holds whose initialiser leaves it out (C11 6.7.9p21)."""
        return Literal(value=0, type=type_.type) if isinstance(type_, Arithmetic) else None

    def fill(self, location: Location, type_: ObjectType, node: Expr) -> None:
        """Initialise an object from a braced list or a value."""
        raise NotImplementedError


def _untyped(location: Location, name: str) -> str:
    return f"{shown(location)} has the type {name}, which the given sources do not define"


def _type_name(type_: ObjectType) -> str:
    match type_:
        case Arithmetic():
            return type_.type.name
        case Record():
            return f"{type_.kind} {type_.tag}"
        case _:
            return "another type"
