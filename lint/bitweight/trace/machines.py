"""What every part of following a run shares: the state, the calls being followed, what was noted.

The classes of this package that follow C are built on one another: `Machine`, then types
(`shapes.py`), objects (`storage.py`), forks (`joins.py`), names, lvalues, the board file's
expressions (`matching.py`), operators, expressions (`lowering.py`), functions, calls, branches,
loops, and `Execution` on top.
"""

from dataclasses import dataclass, field

from bitweight.arithmetic.expressions import Code, Expression
from bitweight.arithmetic.types import CType, DataModel
from bitweight.errors import LimitReached
from bitweight.firmware.objects import Location, ObjectType
from bitweight.firmware.syntax import (
    Call,
    Cast,
    Conditional,
    Expr,
    Index,
    Marked,
    Member,
    Name,
    Node,
    Number,
    Operation,
    Pair,
    SizeOf,
    Stmt,
)
from bitweight.firmware.units import Function, Unit
from bitweight.places import Place
from bitweight.trace.contexts import Context
from bitweight.trace.memory import Address, Copy, Routine, State, Value, is_number

_LONGEST_TEXT = 60
_MAY_BE_CONSTANT = (
    Name | Number | Pair | Operation | Cast | SizeOf | Member | Index | Conditional | Marked
)


@dataclass(slots=True)
class Frame:
    """One call being followed: its function, unit and the names in scope, innermost last."""

    unit: Unit
    function: Function | None
    number: int
    scopes: list[dict[str, tuple[Location, ObjectType]]] = field(default_factory=lambda: [{}])

    def local(self, name: str) -> tuple[Location, ObjectType] | None:
        """The local object a name means here."""
        for scope in reversed(self.scopes):
            if name in scope:
                return scope[name]
        return None

    def scope_of(self, start: int) -> str:
        """The `scope` of a local's root: one object for each call and declaration."""
        name = self.function.name if self.function is not None else ""
        return f"{name}#{self.number}@{start}"

    def owns(self, location: Location) -> bool:
        """Whether an object is a local of this call."""
        name = self.function.name if self.function is not None else ""
        root = location.root
        return root.kind == "local" and root.scope.startswith(f"{name}#{self.number}@")


@dataclass(frozen=True, slots=True, kw_only=True)
class Event:
    """A value seen at a place that may be where a result ends.

    `kind` is "return", "local", "macro", "argument", "call", or "register" for what one holds where
    a reading of `channels` is taken; `name` the function, variable, macro; `function` where it
    happened; `index` counts arguments from 1.
    """

    kind: str
    name: str
    value: Expression
    place: Place
    function: str
    file: str
    index: int = 0
    tree: Call | None = None
    channels: tuple[str, ...] = ()


class Machine:
    """One run: its state and what it noted.

    `near`: a reading depends on a parameter of the run. `handed` is what objects held when a call
    that leaves the sources got their address; `doubts` say what was met that is not followed.
    """

    def __init__(self, context: Context, unit: Unit, function: Function | None = None) -> None:
        self.context = context
        self.model: DataModel = context.model
        self.state = State()
        self.frames: list[Frame] = [Frame(unit, function, 0)]
        self.events: list[Event] = []
        self.stores: dict[Location, tuple[Place, str]] = {}
        self.types: dict[Location, ObjectType] = {}
        self.near = False
        self.doubts: list[str] = []
        self.handed: dict[Location, list[Expression]] = {}
        self.steps = context.limits.steps
        self.frame_count = 0

    # --- followed by the classes built on this one ----------------------------------------------

    def value(self, node: Expr) -> Value:
        """The value of an expression; its side effects happen."""
        raise NotImplementedError

    def call(self, node: Call) -> Value:
        """The value of a call."""
        raise NotImplementedError

    def block_value(self, items: tuple[Stmt, ...], node: Node) -> Value:
        """The value of a statement expression."""
        raise NotImplementedError

    # --- where the run is -----------------------------------------------------------------------

    @property
    def frame(self) -> Frame:
        """The call being followed."""
        return self.frames[-1]

    @property
    def unit(self) -> Unit:
        """The unit whose names hold here."""
        return self.frame.unit

    @property
    def nowhere(self) -> Place:
        """A place for expressions that no source text holds."""
        return Place(self.unit.path)

    @property
    def function_name(self) -> str:
        """The function being followed; empty outside of one."""
        return self.frame.function.name if self.frame.function is not None else ""

    def used(self, node: Node) -> Place:
        """Where the user sees this node."""
        return self.unit.place(node.start)

    def spelled(self, offset: int) -> Place:
        """Where the character at `offset` is written."""
        return self.unit.spelled(offset)

    def text(self, node: Node) -> str:
        """The source of a node on one line."""
        return " ".join(self.unit.translation.text[node.start : node.end].split())[:_LONGEST_TEXT]

    def spend(self) -> None:
        """Count one step of the run; raises `LimitReached` when it has taken too many."""
        self.steps -= 1
        if self.steps < 0:
            raise LimitReached(
                f"the code is too long to follow ({self.context.limits.steps} steps)"
            )

    # --- what is noted --------------------------------------------------------------------------

    def unknown(self, reason: str, node: Node, type_: CType | None = None) -> Code:
        """A placeholder for what is not followed."""
        return self.context.unknown(reason, self.used(node), type_, self.text(node))

    def note(
        self,
        kind: str,
        name: str,
        value: Expression,
        place: Place,
        *,
        index: int = 0,
        tree: Call | None = None,
        channels: tuple[str, ...] = (),
    ) -> None:
        """Record a value where a result may end."""
        function = self.frame.function
        self.events.append(
            Event(
                kind=kind,
                name=name,
                value=value,
                place=place,
                function=self.function_name,
                file=function.key.file if function is not None else self.unit.path,
                index=index,
                tree=tree,
                channels=channels,
            )
        )

    def remember_store(self, location: Location, place: Place) -> None:
        """Record where an object was written last, and by which function."""
        self.stores[location] = (place, self.function_name)

    def unevaluated(self, node: Expr) -> Value:
        """The value an expression would have; nothing of it happens."""
        state, stores, events = self.state.copy(), dict(self.stores), len(self.events)
        doubts, near, handed = len(self.doubts), self.near, dict(self.handed)
        try:
            return self.value(node)
        finally:
            self.state, self.stores, self.near, self.handed = state, stores, near, handed
            del self.events[events:]
            del self.doubts[doubts:]

    # --- numbers --------------------------------------------------------------------------------

    def number(self, node: Expr) -> Expression:
        """The value of an expression that must be a number."""
        return self.as_number(self.value(node), node)

    def as_number(self, value: Value, node: Node) -> Expression:
        """A value as an expression; pointers and structs are not numbers."""
        match value:
            case Address() | Routine():
                return self.unknown("a pointer is used as a number", node)
            case Copy():
                return self.unknown("a struct is used as a number", node)
            case _:
                return value

    def constant(self, node: Expr) -> int | float | None:
        """The constant an expression has here, without its side effects."""
        if not isinstance(node, _MAY_BE_CONSTANT):
            return None
        state, events = self.state.copy(), len(self.events)
        try:
            found = self.value(node)
        finally:
            self.state = state
            del self.events[events:]
        return self.fixed(found)

    def fixed(self, value: Value) -> int | float | None:
        """The C value of what depends on no reading; None for pointers and structs."""
        return self.context.constant(value) if is_number(value) else None

    def elsewhere(self, unit: Unit, node: Expr) -> Expression:
        """The value of a constant expression of another unit, outside of any function."""
        if len(self.frames) > self.context.limits.call_depth:
            return self.unknown("constants that refer to each other", node)
        self.frames.append(Frame(unit, None, 0))
        try:
            return self.number(node)
        finally:
            self.frames.pop()
