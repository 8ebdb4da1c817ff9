"""One state after a fork: each object has the value of one arm or the other, by the condition."""

from dataclasses import replace

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Expression
from bitweight.firmware.objects import Location, Strange
from bitweight.firmware.syntax import Node
from bitweight.trace.memory import Copy, State, Value, is_number, merged
from bitweight.trace.storage import Storage


class Joins(Storage):
    """Joins values and states."""

    def join(self, condition: Expression, then: State, other: State, node: Node) -> State:
        """The state after a fork."""
        return merged(
            condition,
            then,
            other,
            lambda cond, left, right, _: self.joined(cond, left, right, node, merge=True),
            lambda location: self._before(location, node),
        )

    def _before(self, location: Location, node: Node) -> Value:
        """What a location held before a fork that wrote it in one arm only."""
        if location.root.kind == "local":
            return self.context.unknown(
                f"{location.root.name} is not set on every way", self.used(node)
            )
        return self.initial(location, self.type_at(location), self.used(node))

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
            return replace(then, parts=self._joined_parts(condition, then, other, node))
        return self.unknown("which object is meant depends on what happens at run time", node)

    def _joined_parts(
        self, condition: Expression, then: Copy, other: Copy, node: Node
    ) -> tuple[tuple[tuple[str | int, ...], Value], ...]:
        left, right = dict(then.parts), dict(other.parts)
        found = []
        for path in {**left, **right}:
            values = [
                side.get(path)
                or self.initial(
                    Location(copy.source.root, (*copy.source.path, *path)),
                    Strange(name=""),
                    self.used(node),
                )
                for side, copy in ((left, then), (right, other))
            ]
            found.append((path, self.joined(condition, values[0], values[1], node, merge=True)))
        return tuple(found)
