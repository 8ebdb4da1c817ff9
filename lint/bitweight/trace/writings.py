"""What the functions of the tree write to an object; for parameters, what callers give."""

from collections.abc import Iterator
from dataclasses import dataclass

from bitweight.arithmetic.expressions import Code, Expression, walk
from bitweight.firmware.objects import Arithmetic, Location, Strange
from bitweight.firmware.units import Function
from bitweight.trace.contexts import Context
from bitweight.trace.memory import Copy, Value, is_number
from bitweight.trace.runs import Runner, pointee_scope

_MOST_FUNCTIONS = 64
"""Functions asked for one writer: itself and its callers, direct and indirect."""


@dataclass(frozen=True, kw_only=True)
class Writings:
    """Finds the values that are written to objects."""

    context: Context
    runner: Runner

    def values(self, location: Location, node: Code) -> Iterator[Expression]:
        """Every value written to an object in the sources, still with placeholders."""
        root = location.root
        if root.kind not in ("object", "register"):
            return
        declared = self.context.declared(location, None)
        for function in self.context.writers(root, declared):
            yield from self._written(function, location, node)

    def sharing(self, location: Location) -> Location | None:
        """A member of a union that is written and shares its storage with an object."""
        for depth in range(1, len(location.path) + 1):
            part = Location(location.root, location.path[:depth])
            for other in self.context.sharing.get(part, ()):
                if self._is_written(other):
                    return other
        return None

    def _is_written(self, location: Location) -> bool:
        declared = self.context.declared(location, None)
        return any(
            written.within(location) or location.may_be_in(written)
            for function in self.context.writers(location.root, declared)
            for written in self.runner.run(function).writes
        )

    def _written(self, function: Function, location: Location, node: Code) -> Iterator[Expression]:
        """What a function writes there; where that is its parameter, what its callers give."""
        seen = {function.identity}
        pending = [function]
        asked = 0
        while pending and asked < _MOST_FUNCTIONS:
            asked += 1
            one = pending.pop()
            values = self._left_by(one, location, node)
            waiting = [value for value in values if self.waits_for(value, one)]
            callers = self._callers(one) if waiting else ()
            for caller in callers:
                if caller.identity not in seen:
                    seen.add(caller.identity)
                    pending.append(caller)
            yield from (value for value in values if not callers or value not in waiting)
        if pending:
            yield self.context.unknown(
                f"{function.name}() is called from too many places to follow", node.place, node.type
            )

    def waits_for(self, value: Expression, function: Function) -> bool:
        """Whether a value hangs on a parameter of the function itself, or on what it points to."""
        scope = pointee_scope(function)
        return any(
            (known.kind == "parameter" and known.function is function)
            or (known.location is not None and known.location.root.scope == scope)
            for node in walk(value)
            if isinstance(node, Code) and (known := self.context.inputs.get(id(node))) is not None
        )

    def _callers(self, function: Function) -> tuple[Function, ...]:
        return tuple(
            one
            for one in self.context.program.all_functions(function.name)
            if one is not function and function.name in one.mentions.calls
        )

    def _left_by(self, function: Function, location: Location, node: Code) -> list[Expression]:
        """What one function leaves in the object."""
        found: list[Expression] = []
        for written, values in self.runner.run(function).writes.items():
            if location.may_be_in(written):
                parts = (self._part(written, location, value, node) for value in values)
                found.extend(part for part in parts if part is not None)
        return found

    def _part(
        self, written: Location, location: Location, value: Value, node: Code
    ) -> Expression | None:
        """What a write to `written` leaves at `location`, which is the same or a part of it."""
        rest = location.path[len(written.path) :]
        if not rest:
            return value if is_number(value) else None
        if not isinstance(value, Copy):
            return None
        source = Location(value.source.root, (*value.source.path, *rest))
        if source == location:
            return None
        type_ = Arithmetic(type=node.type) if node.type is not None else Strange(name="")
        return self.context.object(source, type_, node.place)
