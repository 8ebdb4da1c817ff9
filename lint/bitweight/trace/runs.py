"""One function followed on its own: what it writes that outlives it, returns and hands out."""

from collections.abc import Mapping
from dataclasses import dataclass, field

from bitweight.arithmetic.expressions import Expression
from bitweight.errors import LimitReached
from bitweight.firmware.objects import (
    Arithmetic,
    Array,
    Location,
    ObjectType,
    Pointer,
    Record,
    Root,
)
from bitweight.firmware.units import Function
from bitweight.places import Place
from bitweight.trace.contexts import Context
from bitweight.trace.execution import Execution
from bitweight.trace.machines import Event
from bitweight.trace.memory import Address, Copy, State, Value


@dataclass(frozen=True, slots=True, kw_only=True)
class Run:
    """What following one function from its start shows.

    `near`: a reading depends on a parameter. `handed` is what objects held when a call that leaves
    the sources got their address. `reason` says why the function could not be followed to its end,
    or what in it was not, if so.
    """

    function: Function
    writes: Mapping[Location, tuple[Value, ...]]
    stores: Mapping[Location, tuple[Place, str]]
    types: Mapping[Location, ObjectType]
    events: tuple[Event, ...]
    near: bool
    handed: Mapping[Location, tuple[Expression, ...]]
    reason: str | None


def pointee_scope(function: Function) -> str:
    """The `scope` of what the parameters of a function point to while no call gives them."""
    return f"{function.key}:{function.name}"


@dataclass(kw_only=True)
class Runner:
    """Runs functions once each and remembers what came of it."""

    context: Context
    _runs: dict[tuple[Place, str], Run] = field(default_factory=dict)

    def run(self, function: Function) -> Run:
        """The run of a function with unknown parameters."""
        if function.identity not in self._runs:
            self._runs[function.identity] = self._followed(function)
        return self._runs[function.identity]

    @property
    def runs(self) -> tuple[Run, ...]:
        """All runs so far, in the order of the functions' places."""
        return tuple(self._runs[key] for key in sorted(self._runs))

    def _followed(self, function: Function) -> Run:
        execution = Execution(self.context, function.unit)
        reason = None
        try:
            execution.enter(function, self._parameters(execution, function), function.body)
        except LimitReached as reached:
            reason = f"{function.name}(): {reached}"
        except RecursionError:
            reason = f"{function.name}() nests too deeply to be followed"
        if reason is not None:
            execution.doubt(State(), reason, function.body)
        writes: dict[Location, list[Value]] = {}
        for state in (execution.state, *execution.turn_ends):
            for location, value in state.values.items():
                known = writes.setdefault(location, [])
                if location.root.kind != "local" and not any(value is one for one in known):
                    known.append(value)
        return Run(
            function=function,
            writes={location: tuple(values) for location, values in writes.items() if values},
            stores=dict(execution.stores),
            types=dict(execution.types),
            events=tuple(execution.events),
            near=execution.near,
            handed={location: tuple(some) for location, some in execution.handed.items()},
            reason=reason or next(iter(execution.doubts), None),
        )

    def _parameters(self, execution: Execution, function: Function) -> list[Value]:
        values: list[Value] = []
        scope = pointee_scope(function)
        for index, one in enumerate(function.syntax.parameters):
            type_ = function.unit.type_of(one.type)
            root = Location(Root("pointee", one.name, scope))
            match type_:
                case Arithmetic():
                    value: Value = self.context.parameter(function, index, one.name, type_.type)
                case Pointer():
                    value = Address(target=root, type=type_.to)
                case Array():
                    value = Address(target=root, type=type_.of)
                case Record():
                    value = Copy(parts=(), source=root, type=type_)
                case _:
                    value = self.context.parameter(
                        function, index, one.name, self.context.model.int_
                    )
            values.append(value)
        return values
