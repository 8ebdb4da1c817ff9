"""Calls: into a function of the sources, to a helper every C library has, or out of the sources."""

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Expression, Literal, Purpose
from bitweight.firmware.objects import Arithmetic, Location, Pointer, Record, Root
from bitweight.firmware.syntax import (
    Call,
    Expr,
    FunctionOf,
    Name,
    Opaque,
    Operation,
)
from bitweight.firmware.units import Function
from bitweight.trace.blocks import BLOCKS, Blocks
from bitweight.trace.contexts import Reading, shown
from bitweight.trace.escapes import points_to_const
from bitweight.trace.memory import Address, Copy, Routine, Value, is_number

_TABLE_READS = frozenset(
    f"pgm_read_{what}{where}"
    for what in ("byte", "word", "dword", "float")
    for where in ("", "_near")
)
"""avr-libc's reads of what lies in program memory: `*address` as C sees it."""
_SAME_AS_FIRST = frozenset({"__builtin_expect", "__builtin_assume_aligned"})


class Calls(Blocks):
    """Follows calls."""

    def call(self, node: Call) -> Value:
        """Follow a call into its function, or say why not."""
        routine = self._routine(node.function)
        arguments = node.arguments
        if routine is None:
            reason = "a call through a pointer that is not constant"
            if isinstance(node.function, Opaque):
                reason = f"a call of a {node.function.kind} is not followed"
            self._hand_out(reason, node, [self.value(one) for one in arguments], ())
            return self.unknown(reason, node)
        if routine.name in _TABLE_READS and len(arguments) == 1:
            found = self.pointee(arguments[0])
            if found is not None:
                return self.read(*found, node)
        values = [self.value(one) for one in arguments]
        if routine.name in BLOCKS and not self.context.program.defining(routine.name):
            done = self.block(routine.name, node, values)
            return done if done is not None else self._lost_block(routine.name, node, values)
        known = self._library(routine.name, node, values)
        if known is not None:
            return known
        functions = self.context.program.function(routine.name, self.unit)
        function = routine.function or (functions[0] if len(functions) == 1 else None)
        if function is None:
            return self._outside(routine.name, node, values, len(functions))
        return self._inside(function, node, values)

    def _routine(self, node: Expr) -> Routine | None:
        if isinstance(node, Name) and not self._is_object(node.text):
            return Routine(name=node.text, function=None)
        value = self.value(node)
        return value if isinstance(value, Routine) else None

    def _is_object(self, name: str) -> bool:
        if self.frame.local(name) is not None:
            return True
        return self.context.program.variable(name, self.unit) is not None

    # --- registers at a reading -----------------------------------------------------------------

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

    # --- helpers that compilers and every C library bring along ---------------------------------

    def _library(self, name: str, node: Call, values: list[Value]) -> Value | None:
        if name in _SAME_AS_FIRST and values:
            return values[0]
        if len(values) != 1:
            return None
        if name == "_BV":
            one = Literal(value=1, type=self.model.int_)
            operand = self.as_number(values[0], node)
            return building.binary(self.model, "<<", one, operand, self.used(node))
        if name in ("abs", "labs") and not self.context.program.defining(name):
            return self._magnitude(name, node, self.as_number(values[0], node))
        return None

    def _magnitude(self, name: str, node: Call, value: Expression) -> Expression:
        type_ = self.model.int_ if name == "abs" else self.model.long
        place = self.used(node)
        operand = building.convert(value, type_, Purpose.ARGUMENT, place)
        negative = building.binary(self.model, "<", operand, Literal(value=0, type=type_), place)
        opposite = building.unary(self.model, "-", operand, place)
        return building.choose(self.model, negative, opposite, operand, place)

    def _lost_block(self, name: str, node: Call, values: list[Value]) -> Value:
        """memcpy() and the like where types or size are not those of known objects."""
        reason = f"{name}() with this size and these types is not followed"
        self._hand_out(reason, node, values, (False, True, True))
        return values[0] if values else self.unknown(reason, node)

    # --- out of the sources ---------------------------------------------------------------------

    def _outside(self, name: str, node: Call, values: list[Value], count: int) -> Value:
        """A call that leaves the sources: what it is handed may be an end."""
        reason = f"{name}() is not defined in the given sources"
        if count > 1:
            reason = f"{name}() is defined {count} times in the sources; exclude all but one"
        self._hand_out(reason, node, values, self._read_only(name))
        for index, (value, argument) in enumerate(zip(values, node.arguments, strict=True)):
            if is_number(value):
                self.note("argument", name, value, self.used(argument), index=index + 1)
        for function in self.context.program.function(name, self.unit):
            self._doubt_writes(function, reason, node)
        returned = self.returned(name)
        target = Location(Root("pointee", f"{name}()"))
        if isinstance(returned, Pointer):
            return Address(target=target, type=returned.to)
        if isinstance(returned, Record):
            return Copy(parts=(), source=target, type=returned)
        number = returned.type if isinstance(returned, Arithmetic) else None
        result = self.unknown(reason, node, number)
        self.note("call", name, result, self.used(node), tree=node)
        return result

    def _hand_out(
        self, reason: str, node: Call, values: list[Value], read_only: tuple[bool, ...]
    ) -> None:
        """Forget what objects held whose address leaves the sources, unless they are only read."""
        for index, (value, argument) in enumerate(zip(values, node.arguments, strict=True)):
            kept = index < len(read_only) and read_only[index]
            if isinstance(value, Address) and not kept:
                self._filled(value, reason, argument)

    def _read_only(self, name: str) -> tuple[bool, ...]:
        """Which parameters of a function outside point to const, as its prototype says."""
        for unit in (self.unit, *self.context.program.units.values()):
            head = unit.prototypes[name].type.derivations if name in unit.prototypes else ()
            if head and isinstance(head[0], FunctionOf):
                return tuple(points_to_const(one.type) for one in head[0].parameters)
        return ()

    def _filled(self, value: Address, reason: str, argument: Expr) -> None:
        """Forget what an object held whose address leaves the sources."""
        target = value.target.plain
        whole = isinstance(value.type, Record) or not isinstance(argument, Operation)
        if whole and target.path and target.path[-1] == 0:
            # A pointer to the first element stands for the array.
            target = Location(target.root, target.path[:-1])
        for known, held in self.state.values.items():
            if known.within(target) and known.root.kind != "local" and is_number(held):
                self.handed.setdefault(known, []).append(held)
        type_ = value.type if target == value.target else self.type_at(target)
        self.forget(target, type_, f"{shown(target)} is filled by a call: {reason}", argument)
        self.remember_store(target, self.used(argument))

    # --- into the sources -----------------------------------------------------------------------

    def _inside(self, function: Function, node: Call, values: list[Value]) -> Value:
        if len(self.frames) > self.context.limits.call_depth:
            return self._not_entered(function, "is called too deeply to follow", node)
        if any(one.function is function for one in self.frames):
            return self._not_entered(function, "calls itself", node)
        converted = [
            self._argument(function, index, value, argument)
            for index, (value, argument) in enumerate(zip(values, node.arguments, strict=True))
        ]
        result = self.enter(function, converted, node)
        if is_number(result):
            self.note("call", function.name, result, self.used(node), tree=node)
        return result

    def _not_entered(self, function: Function, why: str, node: Call) -> Expression:
        reason = f"{function.name}() {why}"
        self._doubt_writes(function, reason, node)
        return self.unknown(reason, node)

    def _doubt_writes(self, function: Function, reason: str, node: Call) -> None:
        """Make unknown what a function that is not followed may write."""
        names = self.context.written_names(function)
        for location, held in list(self.state.values.items()):
            if location.root.kind == "object" and location.root.name in names:
                type_ = held.type if is_number(held) else None
                made = self.context.unknown(reason, self.used(node), type_, shown(location))
                self.state.values[location] = made

    def _argument(self, function: Function, index: int, value: Value, argument: Expr) -> Value:
        parameters = function.syntax.parameters
        if index >= len(parameters) or not is_number(value):
            return value
        type_ = function.unit.type_of(parameters[index].type)
        if isinstance(type_, Arithmetic):
            return building.convert(value, type_.type, Purpose.ARGUMENT, self.used(argument))
        return value
