"""One state after a fork: each object has the value of one arm or the other, by the condition."""

from dataclasses import replace

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Expression
from bitweight.firmware.objects import Location, Path, Root
from bitweight.firmware.syntax import Node
from bitweight.trace.beginnings import Beginnings
from bitweight.trace.contexts import shown
from bitweight.trace.memory import Copy, State, Value, is_number


class Joins(Beginnings):
    """Joins values and states."""

    def join(self, condition: Expression, then: State, other: State, node: Node) -> State:
        """The state after a fork."""
        if then.values == other.values:
            return then
        result: dict[Location, Value] = {}
        for location in {**then.values, **other.values}:
            left, right = then.values.get(location), other.values.get(location)
            if isinstance(left, Copy) and isinstance(right, Copy):
                # Their members are joined one by one.
                result[location] = self._source_of_either(left, right)
                continue
            left = left if left is not None else self._untouched(then, location, node)
            right = right if right is not None else self._untouched(other, location, node)
            result[location] = self.joined(condition, left, right, node, merge=True)
        return State(result)

    @staticmethod
    def _source_of_either(then: Copy, other: Copy) -> Copy:
        if then.source == other.source:
            return then
        both = Location(Root("pointee", f"{shown(then.source)} or {shown(other.source)}"))
        return replace(then, parts=(), source=both)

    def _untouched(self, state: State, location: Location, node: Node) -> Value:
        """What a location holds in the arm that did not write it."""
        type_ = self.type_at(location)
        inherited = self.inherited(state, location, type_, node)
        if inherited is not None:
            return inherited
        if location.root.kind == "local":
            reason = f"{location.root.name} is not set on every way"
            return self.context.unknown(reason, self.used(node))
        return self.initial(location, type_, self.used(node))

    def joined(
        self, condition: Expression, then: Value, other: Value, node: Node, merge: bool = False
    ) -> Value:
        """One value or the other, by a condition; with `merge` two values of one object."""
        if then is other or then == other:
            return then
        if is_number(then) and is_number(other):
            place = self.used(node)
            if merge and then.type == other.type:
                return building.merge(condition, then, other, place)
            return building.choose(self.model, condition, then, other, place)
        if isinstance(then, Copy) and isinstance(other, Copy):
            parts = self._joined_parts(condition, then, other, node)
            return replace(self._source_of_either(then, other), parts=parts)
        return self.unknown("which object is meant depends on what happens at run time", node)

    def _joined_parts(
        self, condition: Expression, then: Copy, other: Copy, node: Node
    ) -> tuple[tuple[Path, Value], ...]:
        left = dict(self.taken_apart(then, node))
        right = dict(self.taken_apart(other, node))
        missing = self.unknown("a struct of which only parts are known", node)
        return tuple(
            (
                path,
                self.joined(
                    condition, left.get(path, missing), right.get(path, missing), node, True
                ),
            )
            for path in {**left, **right}
        )
