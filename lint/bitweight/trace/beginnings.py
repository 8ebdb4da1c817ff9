"""What objects hold from the start: their initialisers."""

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Purpose
from bitweight.firmware.objects import (
    ANYWHERE,
    Arithmetic,
    Array,
    Location,
    ObjectType,
    Path,
    Record,
)
from bitweight.firmware.syntax import Braces, Call, Expr, Name
from bitweight.places import Place
from bitweight.trace.contexts import Declared, named, shown
from bitweight.trace.initialisers import Parts, Reader, parts_of
from bitweight.trace.machines import Frame
from bitweight.trace.memory import Value, is_number
from bitweight.trace.storage import Storage


class Beginnings(Storage):
    """Evaluates initialisers."""

    # --- static storage -----------------------------------------------------------------------

    def never_written(self, location: Location, type_: ObjectType, place: Place) -> Value | None:
        """The initialiser of an object that nothing in the sources writes."""
        declared = self.context.declared(location, self.unit)
        if declared is None or not self.context.is_fixed(location, declared):
            return None
        return self.declared_value(declared, location, type_, place)

    def declared_value(
        self, declared: Declared, location: Location, type_: ObjectType, place: Place
    ) -> Value | None:
        """What the declaration of an object gives a part of it; None where that is not a value."""
        busy = self.context.in_progress.setdefault(location.root, set())
        if location.path in busy or declared.value is None:
            return None
        busy.add(location.path)
        self.frames.append(Frame(declared.unit, declared.function, 0))
        try:
            value = self._given_part(declared, location, type_)
        finally:
            self.frames.pop()
            busy.discard(location.path)
        if value is not None and is_number(value) and isinstance(type_, Arithmetic):
            value = named(value, shown(location), place)
            return building.convert(value, type_.type, Purpose.STORE, place)
        return value

    def _given_part(
        self, declared: Declared, location: Location, type_: ObjectType
    ) -> Value | None:
        """The value of a part of an initialiser, evaluated where that stands."""
        value = declared.value
        if value is None or ANYWHERE in location.path:
            return None
        if not isinstance(value, Braces):
            return self.value(value) if not location.path else None
        whole = self.whole_type(declared)
        parts = self._parts(value, whole)
        if parts is None:
            return None
        if location.path in parts:
            return self.value(parts[location.path])
        path = location.path
        if any(one[: len(path)] == path for one in parts) or self._in_whole(location, parts):
            return None
        return self.zero(type_) if self._exists(whole, path) else None

    def _exists(self, type_: ObjectType, path: Path) -> bool:
        """Whether every subscript of a path lies inside its array."""
        for step in path:
            if isinstance(type_, Array):
                if not isinstance(step, int) or not 0 <= step < (type_.length or 0):
                    return False
                type_ = type_.of
            else:
                type_ = self.member_type(type_, str(step)) or type_
        return True

    @staticmethod
    def _in_whole(location: Location, parts: Parts) -> bool:
        """Whether an object is part of a struct that one expression gives as a whole."""
        path = location.path
        return any(path[:depth] in parts for depth in range(len(path)))

    def _parts(self, braces: Braces, type_: ObjectType) -> Parts | None:
        """The parts of a braced list; read once, as long as its type is known."""
        known = self.context.initialisers
        if id(braces) not in known:
            reader = Reader(
                members=self.field_names,
                subscript=self.subscript_in(self.unit),
                is_whole=self._is_struct,
            )
            known[id(braces)] = (braces, parts_of(braces, type_, reader))
        return known[id(braces)][1]

    def _is_struct(self, node: Expr) -> bool:
        """Whether an expression in a braced list is a struct by itself."""
        if isinstance(node, Braces):
            return True
        if isinstance(node, Call) and isinstance(node.function, Name):
            return isinstance(self.returned(node.function.text), Record)
        return isinstance(self.declared_type(node), Record)

    def declared_type(self, node: Expr) -> ObjectType | None:
        """The type that declarations give an expression, which is not evaluated."""
        raise NotImplementedError

    # --- automatic storage --------------------------------------------------------------------

    def fill(self, location: Location, type_: ObjectType, node: Expr) -> None:
        """Initialise an object from a braced list or a value."""
        if not isinstance(node, Braces):
            self.store(location, type_, self.value(node), node)
            return
        if not isinstance(type_, Array | Record):
            if node.entries:
                self.store(location, type_, self.value(node.entries[0].value), node)
            return
        parts = self._parts(node, type_)
        if parts is None:
            self.forget(location, type_, f"the initialiser of {shown(location)} is not read", node)
            return
        for path, inner in self.leaves(Array(of=type_, length=1), ()):
            value = self.zero(inner)
            if value is not None:
                self.state.write(location.at(path[1:]), value)
        for path, expression in parts.items():
            part = location.at(path)
            self.store(part, self._type_below(type_, path), self.value(expression), expression)

    def _type_below(self, type_: ObjectType, path: Path) -> ObjectType:
        for step in path:
            if isinstance(type_, Array):
                type_ = type_.of
            else:
                type_ = self.member_type(type_, str(step)) or type_
        return type_
