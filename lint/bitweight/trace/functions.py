"""A function followed from its arguments to its result."""

from collections.abc import Sequence

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Purpose
from bitweight.errors import LimitReached
from bitweight.firmware.objects import (
    Arithmetic,
    Array,
    FunctionType,
    Location,
    ObjectType,
    Pointer,
    Root,
)
from bitweight.firmware.syntax import Declarator, Node, Stmt
from bitweight.firmware.units import Function, Unit
from bitweight.trace.contexts import Context
from bitweight.trace.exits import Exit, Flow
from bitweight.trace.lowering import Lowering
from bitweight.trace.machines import Frame
from bitweight.trace.memory import State, Value, is_number


class Functions(Lowering):
    """Enters functions. `turn_ends` are the states at the end of a turn of an endless loop."""

    def __init__(self, context: Context, unit: Unit, function: Function | None = None) -> None:
        super().__init__(context, unit, function)
        self.turn_ends: list[State] = []

    def flow(self, node: Stmt) -> Flow:
        """What a statement does."""
        raise NotImplementedError

    def enter(self, function: Function, arguments: list[Value], node: Node) -> Value:
        """Follow a function's body; the value it returns."""
        self.frame_count += 1
        frame = Frame(function.unit, function, self.frame_count)
        called_at, before = self.used(node), self.state.copy()
        self.frames.append(frame)
        try:
            for one, value in zip(function.syntax.parameters, arguments, strict=False):
                if one.name:
                    self._bind(frame, one, value)
            return self._finished(function, self.flow(function.body), frame, before)
        except LimitReached as reached:
            if len(self.frames) <= 2:
                raise
            return self.context.unknown(str(reached), called_at)
        finally:
            self.frames.pop()

    def _bind(self, frame: Frame, one: Declarator, value: Value) -> None:
        type_: ObjectType = frame.unit.type_of(one.type)
        if isinstance(type_, Array):
            type_ = Pointer(to=type_.of)
        location = Location(Root("local", one.name, frame.scope_of(one.start)))
        frame.scopes[0][one.name] = (location, type_)
        self.put(location, type_, self.fitted(location, type_, value, one), one)

    def _finished(self, function: Function, flow: Flow, frame: Frame, before: State) -> Value:
        """Join all ways out of a function that began with `before`; note result and locals."""
        returns = [one for one in flow.exits if one.kind == "return"]
        lost = [one for one in flow.exits if one.kind != "return"]
        result = self._result(function, returns, flow.next is not None or bool(lost))
        ways = [*returns, *lost]
        after = flow.next
        for one in reversed(ways):
            if after is None or one.condition is None:
                after = one.state
            else:
                after = self.join(one.condition, one.state, after, function.body)
        self._note_locals(frame, function, ways, flow.next)
        self.state = after if after is not None else self._steady()
        if lost:
            reason = f"{function.name}() jumps back or into a block with goto"
            result = self.context.unknown(reason, function.key)
            self.doubt(before, reason, function.body)
            self.doubts.append(reason)
        if is_number(result) and returns:
            self.note("return", function.name, result, self.spelled(returns[-1].node.start))
        if after is None:
            self.turn_ends.append(self.state)
        for known in [one for one in self.state.values if frame.owns(one)]:
            del self.state.values[known]
        return result

    def _steady(self) -> State:
        return self.turn_ends[-1].copy() if self.turn_ends else State()

    def _note_locals(
        self, frame: Frame, function: Function, ways: Sequence[Exit], last: State | None
    ) -> None:
        """Note the wanted locals as the function leaves them."""
        states = [*(one.state for one in ways), *((last,) if last is not None else ())]
        found = dict.fromkeys(
            location
            for state in states
            for location in state.values
            if location.root.name in self.context.results and frame.owns(location)
        )
        for location in found:
            value = self._at_the_end(location, ways, last)
            if value is not None and is_number(value):
                place = self.stores.get(location, (function.key, ""))[0]
                path = str(Location(Root("", ""), location.path))
                self.note("local", location.root.name + path, value, place)

    def _at_the_end(
        self, location: Location, ways: Sequence[Exit], last: State | None
    ) -> Value | None:
        """What a local holds at the end; ways that leave before it is set do not count."""
        value = last.values.get(location) if last is not None else None
        for one in reversed(ways):
            held = one.state.values.get(location)
            if held is None:
                continue
            if value is None or one.condition is None:
                value = held
            else:
                value = self.joined(one.condition, held, value, one.node, merge=True)
        return value

    def _result(self, function: Function, returns: list[Exit], falls: bool) -> Value:
        """The value that a call has: that of the return which is reached."""
        type_ = function.unit.type_of(function.syntax.type)
        declared = type_.returns if isinstance(type_, FunctionType) else None
        result: Value | None = None
        if falls:
            result = self.context.unknown(f"{function.name}() returns nothing here", function.key)
        for one in reversed(returns):
            value = self._returned(function, one, declared)
            if result is None or one.condition is None:
                result = value
            else:
                result = self.joined(one.condition, value, result, one.node, merge=True)
        if result is None:
            result = self.context.unknown(f"{function.name}() returns nothing here", function.key)
        if isinstance(declared, Arithmetic) and is_number(result):
            return building.convert(result, declared.type, Purpose.RETURN, function.key)
        return result

    def _returned(self, function: Function, one: Exit, declared: ObjectType | None) -> Value:
        value = one.value
        if value is None:
            return self.context.unknown(f"{function.name}() returns nothing", function.key)
        if isinstance(declared, Arithmetic) and is_number(value):
            place = self.spelled(one.node.start)
            return building.convert(value, declared.type, Purpose.RETURN, place)
        return value
