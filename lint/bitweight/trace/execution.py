"""C statements and calls, followed within one run.

Forks are followed both ways and joined; loops with constant bounds are unrolled; what a loop of unknown length
changes is unknown after it. An infinite loop counts as one turn of a steady program.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Literal as Word

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Expression, Literal, Purpose
from bitweight.errors import LimitReached
from bitweight.firmware.mentions import nodes
from bitweight.firmware.objects import (
    Arithmetic,
    Array,
    FunctionType,
    Location,
    ObjectType,
    Pointer,
    Record,
    Root,
)
from bitweight.firmware.syntax import (
    Block,
    Call,
    Case,
    Declarator,
    Declare,
    Evaluate,
    Expr,
    If,
    Jump,
    Label,
    Loop,
    Name,
    Node,
    Opaque,
    Operation,
    Return,
    Stmt,
    Switch,
)
from bitweight.firmware.units import Function, Unit
from bitweight.trace.contexts import Context, Declared, Reading
from bitweight.trace.initialisers import element_count
from bitweight.trace.lowering import Frame, Lowering
from bitweight.trace.memory import Address, Copy, Routine, State, Value, is_number

_TURNS_WITH_EXITS = 16
"""Turns of a loop that may leave it by a condition before the loop counts as unbounded."""
_TABLE_READS = frozenset(
    {
        "pgm_read_byte",
        "pgm_read_word",
        "pgm_read_dword",
        "pgm_read_float",
        "pgm_read_byte_near",
        "pgm_read_word_near",
        "pgm_read_dword_near",
        "pgm_read_float_near",
    }
)

_NOWHERE = Node(start=0, end=0)

ExitKind = Word["return", "break", "continue", "goto"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Exit:
    """A way out of a statement. Of several, the first whose condition holds is taken; None always holds."""

    kind: ExitKind
    condition: Expression | None
    state: State
    value: Value | None
    node: Node


@dataclass(frozen=True, slots=True, kw_only=True)
class Flow:
    """What a statement does: the state after it (None if it never falls through) and its exits."""

    next: State | None
    exits: tuple[Exit, ...] = ()


class Execution(Lowering):
    """Follows statements and calls; see `lowering.py` for expressions.

    `turn_ends` are the states at the end of a turn of an endless loop.
    """

    def __init__(self, context: Context, unit: Unit, function: Function | None = None) -> None:
        super().__init__(context, unit, function)
        self.turn_ends: list[State] = []

    def bind(self, name: str, value: Value) -> None:
        """Give a name a value for what is evaluated next."""
        location = Location(Root("local", name, "given"))
        self.frame.scopes[0][name] = (
            location,
            Arithmetic(type=self.as_number(value, _NOWHERE).type),
        )
        self.state.write(location, value)

    # --- statements ------------------------------------------------------------------------

    def _flow(self, node: Stmt) -> Flow:
        self.spend()
        match node:
            case Block():
                return self._scoped(node.items)
            case Declare():
                for one in node.declarators:
                    self._declare(one)
                return Flow(next=self.state)
            case Evaluate():
                self.value(node.expression)
                return Flow(next=self.state)
            case If():
                return self._if(node)
            case Loop():
                return self._loop(node)
            case Switch():
                return self._switch(node)
            case Case():
                return self._sequence(node.items)
            case Return():
                return self._return(node)
            case Jump():
                return self._jump(node)
            case Label():
                return self._flow(node.body)
            case Opaque():
                return Flow(next=self.state)

    def _scoped(self, items: Sequence[Stmt]) -> Flow:
        self.frame.scopes.append({})
        try:
            return self._sequence(items)
        finally:
            self.frame.scopes.pop()

    def _sequence(self, items: Sequence[Stmt]) -> Flow:
        exits: list[Exit] = []
        for item in items:
            flow = self._flow(item)
            exits.extend(flow.exits)
            if flow.next is None:
                return Flow(next=None, exits=tuple(exits))
            self.state = flow.next
        return Flow(next=self.state, exits=tuple(exits))

    def _return(self, node: Return) -> Flow:
        value = self.value(node.value) if node.value is not None else None
        done = Exit(kind="return", condition=None, state=self.state, value=value, node=node)
        return Flow(next=None, exits=(done,))

    def _jump(self, node: Jump) -> Flow:
        kind: ExitKind = (
            "break" if node.kind == "break" else "continue" if node.kind == "continue" else "goto"
        )
        done = Exit(kind=kind, condition=None, state=self.state, value=None, node=node)
        return Flow(next=None, exits=(done,))

    def _declare(self, one: Declarator) -> None:
        storage = one.type.specifiers.storage
        if "extern" in storage or not one.name:
            return
        type_ = self.resolved(one.type)
        if isinstance(type_, FunctionType):
            return
        if isinstance(type_, Array) and type_.length is None and one.value is not None:
            from_text = element_count(one.value, self.subscript_in(self.unit))
            type_ = replace(type_, length=from_text)
        function = self.frame.function
        if "static" in storage and function is not None:
            root = Root("object", one.name, f"{function.key.file}:{function.name}:{one.start}")
            self.frame.scopes[-1][one.name] = (Location(root), type_)
            self.context.statics.setdefault(
                root,
                Declared(
                    name=one.name,
                    type=type_,
                    value=one.value,
                    unit=self.unit,
                    function=function,
                    constant="const" in one.type.specifiers.qualifiers,
                    declared_only=False,
                    key=self.spelled(one.start),
                ),
            )
            return
        name = function.name if function is not None else ""
        location = Location(Root("local", one.name, f"{name}#{self.frame.number}@{one.start}"))
        self.frame.scopes[-1][one.name] = (location, type_)
        for known in [loc for loc in self.state.values if loc.root == location.root]:
            del self.state.values[known]
        if one.value is not None:
            self.fill(location, type_, one.value)

    def _if(self, node: If) -> Flow:
        condition = self.number(node.condition)
        known = self.context.constant(condition)
        if known is not None:
            if known:
                return self._flow(node.then)
            return self._flow(node.other) if node.other is not None else Flow(next=self.state)
        before = self.state.copy()
        then = self._flow(node.then)
        self.state = before
        other = self._flow(node.other) if node.other is not None else Flow(next=self.state)
        return self._fork(condition, then, other, node)

    def _fork(self, condition: Expression, then: Flow, other: Flow, node: Node) -> Flow:
        exits = [
            replace(one, condition=self._and(condition, one.condition, node)) for one in then.exits
        ]
        if other.exits:
            opposite = building.unary(self.model, "!", condition, self.used(node))
            exits += [
                replace(one, condition=self._and(opposite, one.condition, node))
                for one in other.exits
            ]
        if then.next is None or other.next is None:
            following = other.next if then.next is None else then.next
        else:
            following = self.join(condition, then.next, other.next, node)
        return Flow(next=following, exits=tuple(exits))

    def _and(self, first: Expression, second: Expression | None, node: Node) -> Expression:
        if second is None:
            return first
        return building.binary(self.model, "&&", first, second, self.used(node))

    # --- switch ----------------------------------------------------------------------------

    def _switch(self, node: Switch) -> Flow:
        subject = self.number(node.subject)
        items = node.body.items if isinstance(node.body, Block) else (node.body,)
        cases = [(index, one) for index, one in enumerate(items) if isinstance(one, Case)]
        known = self.context.constant(subject)
        if known is not None:
            chosen = self._chosen(known, cases)
            if chosen is None:
                return Flow(next=self.state)
            return self._left(self._scoped(items[chosen:]), node)
        return self._either(subject, cases, items, node)

    def _chosen(self, known: float, cases: list[tuple[int, Case]]) -> int | None:
        default: int | None = None
        for index, one in cases:
            if one.value is None:
                default = index
                continue
            low = self.context.constant(self.number(one.value))
            high = self.context.constant(self.number(one.last)) if one.last is not None else low
            if low is not None and high is not None and low <= known <= high:
                return index
        return default

    def _either(
        self,
        subject: Expression,
        cases: list[tuple[int, Case]],
        items: Sequence[Stmt],
        node: Switch,
    ) -> Flow:
        """A switch on a value that is not constant: each case is followed from the same state."""
        start = self.state
        default = next((index for index, one in cases if one.value is None), None)
        self.state = start.copy()
        flow = (
            self._left(self._scoped(items[default:]), node)
            if default is not None
            else Flow(next=self.state)
        )
        for index, one in reversed(cases):
            if one.value is None:
                continue
            self.state = start.copy()
            condition = self._in_case(subject, one)
            taken = self._left(self._scoped(items[index:]), node)
            flow = self._fork(condition, taken, flow, node)
        return flow

    def _in_case(self, subject: Expression, one: Case) -> Expression:
        place = self.used(one)
        assert one.value is not None
        low = self.number(one.value)
        if one.last is None:
            return building.binary(self.model, "==", subject, low, place)
        high = self.number(one.last)
        return building.binary(
            self.model,
            "&&",
            building.binary(self.model, ">=", subject, low, place),
            building.binary(self.model, "<=", subject, high, place),
            place,
        )

    def _left(self, flow: Flow, node: Node, kinds: tuple[str, ...] = ("break",)) -> Flow:
        """A flow whose exits of these kinds lead behind the statement."""
        inner = [one for one in flow.exits if one.kind in kinds]
        outer = tuple(one for one in flow.exits if one.kind not in kinds)
        following = flow.next
        for one in reversed(inner):
            if one.condition is None or following is None:
                following = one.state
            else:
                following = self.join(one.condition, one.state, following, node)
        return Flow(next=following, exits=outer)

    # --- loops -----------------------------------------------------------------------------

    def _loop(self, node: Loop) -> Flow:
        self.frame.scopes.append({})
        try:
            if node.before is not None:
                flow = self._flow(node.before)
                self.state = flow.next if flow.next is not None else self.state
            start, steps = self.state.copy(), self.steps
            events = len(self.events)
            unrolled = None if self._endless(node.condition) else self._unrolled(node)
            if unrolled is not None:
                return unrolled
            self.state, self.steps = start, steps
            del self.events[events:]
            return self._unbounded(node)
        finally:
            self.frame.scopes.pop()

    def _unrolled(self, node: Loop) -> Flow | None:
        """The loop turn by turn while its condition is constant; None where it is not."""
        exits: list[Exit] = []
        test = not node.first
        for turn in range(self.context.limits.loop_turns + 1):
            if test:
                if node.condition is None:
                    return None
                known = self.context.constant(self.number(node.condition))
                if known is None:
                    return None
                if not known:
                    return self._left(Flow(next=self.state, exits=tuple(exits)), node)
            test = True
            flow = self._left(self._flow(node.body), node, ("continue",))
            exits.extend(flow.exits)
            if flow.next is None:
                return self._left(Flow(next=None, exits=tuple(exits)), node)
            if exits and turn > _TURNS_WITH_EXITS:
                return None
            self.state = flow.next
            if node.step is not None:
                self.value(node.step)
        return None

    def _unbounded(self, node: Loop) -> Flow:
        """A loop of unknown length: what a turn changes is unknown when the next one starts."""
        start = self.state.copy()
        events, near = len(self.events), self.near
        self._turn(node)
        changed = (
            [
                location
                for location, value in self.state.values.items()
                if start.values.get(location) is not value
            ]
            if self.state is not None
            else []
        )
        del self.events[events:]
        self.near = near
        self.state = start.copy()
        line = self.used(node).line
        for location in changed:
            if location in start.values or location.root.kind != "local":
                type_ = self.type_at(location)
                number = type_.type if isinstance(type_, Arithmetic) else None
                if isinstance(type_, Arithmetic) or is_number(
                    start.values.get(location) or Copy(parts=(), source=location, type=type_)
                ):
                    self.state.values[location] = self.context.unknown(
                        f"{location} changes from turn to turn of the loop at line {line}, "
                        "whose number of turns is not constant",
                        self.used(node),
                        number,
                    )
                else:
                    self.state.values.pop(location, None)
        entered = self.state.copy()
        flow = self._turn(node)
        if self._endless(node.condition):
            if flow.next is not None:
                self.turn_ends.append(flow.next)
            return self._left(Flow(next=None, exits=flow.exits), node)
        following = flow.next
        if not node.first and following is not None and following.values != entered.values:
            turns = self.context.unknown("how often a loop turns", self.used(node))
            following = self.join(turns, following, entered, node)
        elif following is None and not node.first:
            following = entered
        return self._left(Flow(next=following, exits=flow.exits), node)

    def _endless(self, condition: Expr | None) -> bool:
        """Whether a loop's condition is a constant that is true, not a variable that is so now."""
        if condition is None:
            return True
        if any(isinstance(node, Call | Name) for node in nodes(condition)):
            return isinstance(condition, Name) and condition.text in ("true", "TRUE")
        return bool(self.plain_constant(condition))

    def _turn(self, node: Loop) -> Flow:
        """One turn: test, body, step."""
        if node.condition is not None and not node.first:
            self.number(node.condition)
        flow = self._left(self._flow(node.body), node, ("continue",))
        if flow.next is not None:
            self.state = flow.next
            if node.first and node.condition is not None:
                self.number(node.condition)
            if node.step is not None:
                self.value(node.step)
            return Flow(next=self.state, exits=flow.exits)
        return flow

    def block_value(self, items: tuple[Stmt, ...], node: Node) -> Value:
        """The value of a GNU statement expression: that of its last statement."""
        if not items:
            return self.unknown("a statement without a value", node)
        *first, last = items
        self.frame.scopes.append({})
        try:
            flow = self._sequence(first)
            if flow.exits or flow.next is None or not isinstance(last, Evaluate):
                self.state = flow.next if flow.next is not None else self.state
                return self.unknown("a statement expression of this form is not followed", node)
            self.state = flow.next
            return self.value(last.expression)
        finally:
            self.frame.scopes.pop()

    # --- calls -----------------------------------------------------------------------------

    def call(self, node: Call) -> Value:
        """Follow a call into its function, or say why not."""
        routine = self._routine(node.function)
        arguments = node.arguments
        if routine is None:
            for one in arguments:
                self.value(one)
            return self.unknown("a call through a pointer that is not constant", node)
        if routine.name in _TABLE_READS and len(arguments) == 1:
            found = self.pointee(arguments[0])
            if found is not None:
                return self.read(*found, node)
        values = [self.value(one) for one in arguments]
        known = self._known(routine.name, node, values)
        if known is not None:
            return known
        functions = self.context.program.function(routine.name, self.unit)
        function = routine.function or (functions[0] if len(functions) == 1 else None)
        if function is None:
            return self._outside(routine.name, node, values, len(functions))
        return self._inside(function, node, values)

    def note_registers(self, source: Reading, node: Expr) -> None:
        """As below; a reading that is a call is followed for the registers it sets."""
        if not self.context.registers:
            return
        if not isinstance(node, Call):
            super().note_registers(source, node)
            return
        function = self._only_function(node)
        if function is None or len(self.frames) > self.context.limits.call_depth:
            return
        before, stores = self.state.copy(), dict(self.stores)
        events, near = len(self.events), self.near
        values = [self.value(one) for one in node.arguments]
        self.enter(function, values, node)
        del self.events[events:]
        super().note_registers(source, node)
        self.state, self.stores, self.near = before, stores, near

    def _only_function(self, node: Call) -> Function | None:
        if not isinstance(node.function, Name):
            return None
        found = self.context.program.function(node.function.text, self.unit)
        return found[0] if len(found) == 1 else None

    def _routine(self, node: Expr) -> Routine | None:
        if isinstance(node, Name) and self.frame.local(node.text) is None:
            if self.context.program.variable(node.text, self.unit) is None:
                return Routine(name=node.text, function=None)
        value = self.value(node)
        return value if isinstance(value, Routine) else None

    def _known(self, name: str, node: Call, values: list[Value]) -> Value | None:
        """Helpers that compilers and every C library bring along."""
        if name in ("__builtin_expect", "__builtin_assume_aligned") and values:
            return values[0]
        if name == "_BV" and len(values) == 1:
            one = Literal(value=1, type=self.model.int_)
            return building.binary(
                self.model, "<<", one, self.as_number(values[0], node), self.used(node)
            )
        wide = {"abs": self.model.int_, "labs": self.model.long}.get(name)
        if wide is not None and len(values) == 1 and not self.context.program.defining(name):
            place = self.used(node)
            operand = building.convert(
                self.as_number(values[0], node), wide, Purpose.ARGUMENT, place
            )
            zero = Literal(value=0, type=wide)
            return building.choose(
                self.model,
                building.binary(self.model, "<", operand, zero, place),
                building.unary(self.model, "-", operand, place),
                operand,
                place,
            )
        return None

    def _outside(self, name: str, node: Call, values: list[Value], count: int) -> Value:
        """A call that leaves the sources: what it is handed may be an end, what it fills is unknown."""
        if count > 1:
            reason = f"{name}() is defined {count} times in the sources; exclude all but one"
        else:
            reason = f"{name}() is not defined in the given sources"
        for index, (value, argument) in enumerate(zip(values, node.arguments, strict=True)):
            if isinstance(value, Address):
                self._filled(value, reason, argument)
            elif is_number(value):
                self.note("argument", name, value, self.used(argument), index=index + 1)  # type: ignore[arg-type]
        returned = self.returned(name)
        if isinstance(returned, Pointer):
            target = Location(Root("pointee", f"{name}()"))
            return Address(target=target, type=returned.to)
        if isinstance(returned, Record):
            return Copy(parts=(), source=Location(Root("pointee", f"{name}()")), type=returned)
        number = returned.type if isinstance(returned, Arithmetic) else None
        result = self.unknown(reason, node, number)
        self.note("call", name, result, self.used(node), tree=node)
        return result

    def _filled(self, value: Address, reason: str, argument: Expr) -> None:
        target = value.target
        if target.root.kind not in ("local", "object"):
            return
        if isinstance(value.type, Record) or not isinstance(argument, Operation):
            for known in [one for one in self.state.values if one.within(target)]:
                del self.state.values[known]
            if target.root.kind == "local":
                self.state.write(
                    target,
                    Copy(parts=(), source=Location(Root("pointee", str(target))), type=value.type),
                )
            return
        number = value.type.type if isinstance(value.type, Arithmetic) else None
        filled = self.context.unknown(
            f"{target} is filled by a call: {reason}", self.used(argument), number, str(target)
        )
        self.state.write(target, filled)
        self.types[target] = value.type
        function = self.frame.function
        self.stores[target] = (self.used(argument), function.name if function else "")

    def _inside(self, function: Function, node: Call, values: list[Value]) -> Value:
        if len(self.frames) > self.context.limits.call_depth:
            return self.unknown(f"{function.name}() is called too deeply to follow", node)
        if any(one.function is function for one in self.frames):
            return self.unknown(f"{function.name}() calls itself", node)
        converted = [
            self._argument(function, index, value, argument)
            for index, (value, argument) in enumerate(zip(values, node.arguments, strict=True))
        ]
        result = self.enter(function, converted, node)
        if is_number(result):
            self.note("call", function.name, result, self.used(node), tree=node)  # type: ignore[arg-type]
        return result

    def _argument(self, function: Function, index: int, value: Value, argument: Expr) -> Value:
        parameters = function.syntax.parameters
        if index >= len(parameters) or not is_number(value):
            return value
        type_ = function.unit.type_of(parameters[index].type)
        if isinstance(type_, Arithmetic):
            return building.convert(value, type_.type, Purpose.ARGUMENT, self.used(argument))  # type: ignore[arg-type]
        return value

    def enter(self, function: Function, arguments: list[Value], node: Node) -> Value:
        """Follow a function's body; the value it returns."""
        self.frame_count += 1
        frame = Frame(function.unit, function, self.frame_count)
        called_at = self.used(node)
        self.frames.append(frame)
        try:
            for one, value in zip(function.syntax.parameters, arguments, strict=False):
                if one.name:
                    self._bind(frame, one, value)
            flow = self._flow(function.body)
            return self._finished(function, flow, frame, node)
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
        if isinstance(type_, Pointer) and isinstance(value, Address):
            value = (
                replace(value, type=type_.to)
                if not isinstance(value.type, Record | Array) or isinstance(type_.to, Record)
                else value
            )
        location = Location(
            Root(
                "local",
                one.name,
                f"{frame.function.name if frame.function else ''}#{frame.number}@{one.start}",
            )
        )
        frame.scopes[0][one.name] = (location, type_)
        self.state.write(location, value)
        self.types[location] = type_

    def _finished(self, function: Function, flow: Flow, frame: Frame, node: Node) -> Value:
        """Join all ways out of a function; note its result and wanted locals."""
        returns = [one for one in flow.exits if one.kind == "return"]
        lost = [one for one in flow.exits if one.kind != "return"]
        result = self._result(function, returns, flow.next is not None or bool(lost), frame)
        after = flow.next
        for one in reversed([*returns, *lost]):
            if after is None or one.condition is None:
                after = one.state
            else:
                after = self.join(one.condition, one.state, after, function.body)
        ended = after is not None
        self.state = after if after is not None else self._steady()
        if lost:
            result = self.context.unknown(
                f"{function.name}() jumps with goto, which is not followed",
                self.used(function.body),
            )
        self._note_locals(frame, function)
        if is_number(result) and returns:
            self.note("return", function.name, result, self.spelled(returns[-1].node.start))  # type: ignore[arg-type]
        if not ended:
            self.turn_ends.append(self.state)
        for known in [one for one in self.state.values if self._belongs(one, frame, function)]:
            del self.state.values[known]
        return result

    def _steady(self) -> State:
        return self.turn_ends[-1].copy() if self.turn_ends else State()

    @staticmethod
    def _belongs(location: Location, frame: Frame, function: Function) -> bool:
        root = location.root
        return root.kind == "local" and root.scope.startswith(f"{function.name}#{frame.number}@")

    def _note_locals(self, frame: Frame, function: Function) -> None:
        wanted = self.context.results
        for location, value in list(self.state.values.items()):
            name = location.root.name
            if name not in wanted or not self._belongs(location, frame, function):
                continue
            if is_number(value):
                place = self.stores.get(location, (function.key, ""))[0]
                path = str(Location(Root("", ""), location.path))
                self.note("local", name + path, value, place)  # type: ignore[arg-type]

    def _result(self, function: Function, returns: list[Exit], falls: bool, frame: Frame) -> Value:
        type_ = function.unit.type_of(function.syntax.type)
        declared = type_.returns if isinstance(type_, FunctionType) else None
        result: Value | None = None
        if falls or not returns:
            result = self.context.unknown(f"{function.name}() returns nothing here", function.key)
        for one in reversed(returns):
            value = one.value
            if value is None:
                value = self.context.unknown(f"{function.name}() returns nothing", function.key)
            if isinstance(declared, Arithmetic) and is_number(value):
                value = building.convert(
                    value,
                    declared.type,
                    Purpose.RETURN,
                    self.spelled(one.node.start),  # type: ignore[arg-type]
                )
            if result is None or one.condition is None:
                result = value
            else:
                result = self.joined(one.condition, value, result, one.node, merge=True)
        assert result is not None
        if isinstance(declared, Arithmetic) and is_number(result):
            return building.convert(result, declared.type, Purpose.RETURN, function.key)  # type: ignore[arg-type]
        return result
