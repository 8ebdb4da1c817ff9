"""Reading and writing objects within a run."""

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Literal, Purpose
from bitweight.firmware.objects import (
    ANYWHERE,
    Arithmetic,
    Array,
    FunctionType,
    Location,
    ObjectType,
    Pointer,
    Record,
    Root,
    Strange,
)
from bitweight.firmware.syntax import Braces, Expr, Node
from bitweight.places import Place
from bitweight.trace.contexts import named, shown
from bitweight.trace.initialisers import component, element_count
from bitweight.trace.machines import Frame
from bitweight.trace.memory import Address, Copy, Routine, Value, is_number
from bitweight.trace.shapes import Shapes

_MOST_ELEMENTS = 4096
"""Elements of an array that are initialised one by one."""


class Storage(Shapes):
    """Reads, writes and initialises objects."""

    def read(self, location: Location, type_: ObjectType, node: Node) -> Value:
        """The value of an object now."""
        known = self.state.values.get(location)
        if known is not None and not isinstance(known, Copy):
            return known
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
        blurred = self._blurred(location)
        if blurred is not None:
            return self.unknown(blurred, node)
        return self._read_within(location, type_, node)

    def _read_within(self, location: Location, type_: ObjectType, node: Node) -> Value:
        """An object not written itself: part of what was written as a whole, or untouched."""
        for depth in range(len(location.path) - 1, -1, -1):
            outer = self.state.values.get(Location(location.root, location.path[:depth]))
            if isinstance(outer, Copy):
                source = Location(outer.source.root, (*outer.source.path, *location.path[depth:]))
                return self.initial(source, type_, self.used(node))
            if outer is not None:
                return self.unknown(f"{shown(location)} is part of something set as a whole", node)
        return self.initial(location, type_, self.used(node))

    def _blurred(self, location: Location) -> str | None:
        """Why an element cannot be told apart from others, if that is so."""
        if ANYWHERE in location.path:
            if any(shown(location).startswith(one) for one in self.context.reading_names):
                self.near = True
            return f"{shown(location)} is read at a subscript that is not constant"
        for known in self.state.values:
            if ANYWHERE in known.path and location.may_be_in(known):
                return f"{location.root.name} is written at a subscript that is not constant"
        return None

    def initial(self, location: Location, type_: ObjectType, place: Place) -> Value:
        """The value an object has before this run writes it."""
        if location.root.kind == "local":
            return self.context.unknown(f"{location.root.name} is read before it is set", place)
        if location.root.kind == "object":
            fixed = self._never_written(location, type_, place)
            if fixed is not None:
                return fixed
        match type_:
            case Pointer():
                return Address(target=Location(Root("pointee", shown(location))), type=type_.to)
            case Record():
                return Copy(parts=(), source=location, type=type_)
            case Array():
                return Address(target=location.part(0), type=type_.of)
            case _:
                return self.context.object(location, type_, place)

    def _never_written(self, location: Location, type_: ObjectType, place: Place) -> Value | None:
        """The initialiser of an object that nothing in the sources writes."""
        declared = self.context.declared(location, self.unit)
        if declared is None or not self.context.is_fixed(location.root, declared):
            return None
        if location.path in self.context.in_progress.get(location.root, ()):
            return None
        expression = component(
            declared.value,
            location.path,
            declared.type,
            self.field_names,
            self.subscript_in(declared.unit),
        )
        if expression is None:
            return None
        progress = self.context.in_progress.setdefault(location.root, set())
        progress.add(location.path)
        self.frames.append(Frame(declared.unit, declared.function, 0))
        try:
            value = self.value(expression)
        finally:
            self.frames.pop()
            progress.discard(location.path)
        if is_number(value) and isinstance(type_, Arithmetic):
            value = named(value, shown(location), place)
            return building.convert(value, type_.type, Purpose.STORE, place)
        return value

    def store(self, location: Location, type_: ObjectType, value: Value, node: Node) -> Value:
        """Write an object; the value it then has."""
        if isinstance(type_, Arithmetic) and is_number(value):
            value = building.convert(value, type_.type, Purpose.STORE, self.used(node))
        self.state.write(location, value)
        self.types[location] = type_
        self.remember_store(location, self.used(node))
        return value

    # --- initialisers ---------------------------------------------------------------------------

    def fill(self, location: Location, type_: ObjectType, node: Expr) -> None:
        """Initialise an object from a braced list or a value."""
        if not isinstance(node, Braces):
            self.store(location, type_, self.value(node), node)
            return
        if isinstance(type_, Arithmetic | Pointer | Strange) and len(node.entries) == 1:
            self.store(location, type_, self.value(node.entries[0].value), node)
            return
        for step, inner in self._parts_of(type_, node):
            expression = component(
                node, (step,), type_, self.field_names, self.subscript_in(self.unit)
            )
            if expression is not None:
                self.fill(location.part(step), inner, expression)
            elif isinstance(inner, Arithmetic):
                self.state.write(location.part(step), Literal(value=0, type=inner.type))

    def _parts_of(self, type_: ObjectType, node: Braces) -> list[tuple[str | int, ObjectType]]:
        """Members or elements of an object that a braced list initialises."""
        if isinstance(type_, Record):
            return list(self.field_names(type_))
        if not isinstance(type_, Array):
            return []
        length = type_.length
        if length is None:
            length = element_count(node, self.subscript_in(self.unit))
        return [(index, type_.of) for index in range(min(length or 0, _MOST_ELEMENTS))]
