"""C expressions to typed expressions, within one run: names, objects, pointers, assignments.

A C tree and a state enter; a value leaves, the state changed as C says. What is not followed becomes a
placeholder with its reason, so that the structure around it is kept.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Code, Expression, Literal, Purpose
from bitweight.arithmetic.types import CType, DataModel
from bitweight.errors import LimitReached
from bitweight.firmware.objects import (
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
from bitweight.firmware.syntax import (
    Assign,
    Braces,
    Call,
    Cast,
    Conditional,
    Declarator,
    Expr,
    Increment,
    Index,
    Marked,
    Member,
    Name,
    Node,
    Number,
    Opaque,
    Operation,
    Pair,
    SizeOf,
    StatementExpr,
    Stmt,
    Text,
    TypeSyntax,
)
from bitweight.firmware.units import Enumeration, Function, Unit, Variable
from bitweight.places import Place
from bitweight.trace.contexts import Context, Given, Reading, Wanted, named, shown
from bitweight.trace.initialisers import component, element_count
from bitweight.trace.memory import Address, Copy, Routine, State, Value, is_number, merged
from bitweight.trace.patterns import delivered, head, matches

ANYWHERE = "*"
"""The step of a path that stands for a subscript that is not constant."""
_TRUTHS = {"true": 1, "false": 0, "TRUE": 1, "FALSE": 0, "NULL": 0, "nullptr": 0}


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


@dataclass(frozen=True, slots=True, kw_only=True)
class Event:
    """A value seen at a place that may be where a result ends.

    `kind` is "return", "local", "macro", "argument", "call", or "register" for what one holds where a
    reading of `channels` is taken; `name` the function, variable, macro; `function` where it happened.
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


class Lowering:
    """Evaluates C expressions in one run. Statements and calls are added by `execution.py`."""

    def __init__(self, context: Context, unit: Unit, function: Function | None = None) -> None:
        self.context = context
        self.model: DataModel = context.model
        self.state = State()
        self.frames: list[Frame] = [Frame(unit, function, 0)]
        self.events: list[Event] = []
        self.stores: dict[Location, tuple[Place, str]] = {}
        self.types: dict[Location, ObjectType] = {}
        self.near = False
        self.steps = context.limits.steps
        self.frame_count = 0

    @property
    def frame(self) -> Frame:
        """The call being followed."""
        return self.frames[-1]

    @property
    def unit(self) -> Unit:
        """The unit whose names hold here."""
        return self.frame.unit

    def used(self, node: Node) -> Place:
        """Where the user sees this node."""
        return self.unit.place(node.start)

    def spelled(self, offset: int) -> Place:
        """Where the character at `offset` is written."""
        return self.unit.spelled(offset)

    def unknown(self, reason: str, node: Node, type_: CType | None = None) -> Code:
        """A placeholder for what is not followed."""
        text = self.unit.translation.text[node.start : node.end]
        return self.context.unknown(reason, self.used(node), type_, " ".join(text.split())[:60])

    def spend(self) -> None:
        """Count one step of the run; raises `LimitReached` when it has taken too many."""
        self.steps -= 1
        if self.steps < 0:
            raise LimitReached(
                f"the code is too long to follow ({self.context.limits.steps} steps)"
            )

    # --- statements and calls, added below ----------------------------------------------------

    def call(self, node: Call) -> Value:
        """The value of a call."""
        raise NotImplementedError

    def block_value(self, items: tuple[Stmt, ...], node: Node) -> Value:
        """The value of a statement expression."""
        raise NotImplementedError

    # --- values --------------------------------------------------------------------------------

    def value(self, node: Expr) -> Value:
        """The value of an expression; its side effects happen."""
        self.spend()
        found = self.given(node)
        if found is not None:
            return found
        match node:
            case Name():
                return self._name(node)
            case Number():
                return self.context.literal(self.unit, node.start, node.text)
            case Text():
                return self.unknown("a string is not a number", node)
            case Call():
                return self.call(node)
            case Index() | Member():
                return self._read_part(node)
            case Operation():
                return self._operation(node)
            case Increment():
                return self._increment(node)
            case Pair():
                return self._pair(node)
            case Assign():
                return self._assign(node)
            case Conditional():
                return self._conditional(node)
            case Cast():
                return self._cast(node)
            case SizeOf():
                return self._sizeof(node)
            case Braces():
                return self._compound(node)
            case StatementExpr():
                return self.block_value(node.body.items, node)
            case Marked():
                result = self.value(node.operand)
                if is_number(result):
                    self.note("macro", node.name, result, self.used(node))  # type: ignore[arg-type]
                return result
            case Opaque():
                return self.unknown(f"{node.kind} is not followed", node)

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
        if not isinstance(
            node,
            Name
            | Number
            | Pair
            | Operation
            | Cast
            | SizeOf
            | Member
            | Index
            | Conditional
            | Marked,
        ):
            return None
        state, events = self.state.copy(), len(self.events)
        try:
            found = self.value(node)
        finally:
            self.state = state
            del self.events[events:]
        return self.context.constant(found) if is_number(found) else None  # type: ignore[arg-type]

    def note(self, kind: str, name: str, value: Expression, place: Place, **more: object) -> None:
        """Record a value where a result may end."""
        function = self.frame.function
        event = Event(
            kind=kind,
            name=name,
            value=value,
            place=place,
            function=function.name if function else "",
            file=function.key.file if function else self.unit.path,
        )
        self.events.append(replace(event, **more) if more else event)  # type: ignore[arg-type]

    # --- the board file's expressions ------------------------------------------------------------

    def given(self, node: Expr) -> Expression | None:
        """The code, or the stated value, if the board file names this expression."""
        candidates = self.context.wanted(self.unit).get(head(node))
        if not candidates or isinstance(node, Number | Marked):
            return None
        found = [wanted for wanted in candidates if self._matches(wanted, node)]
        if not found:
            return None
        first = found[0]
        if isinstance(first.source, Reading):
            # Channels may share one reading.
            shared = [one.source.channels for one in found if isinstance(one.source, Reading)]
            channels = tuple(dict.fromkeys(name for some in shared for name in some))
            first = replace(first, source=replace(first.source, channels=channels))
        return self._delivered(first, node)

    def _matches(self, wanted: Wanted, node: Expr) -> bool:
        pattern = wanted.source.pattern
        if not pattern.applies(self.frame.function, self.unit):
            return False
        if isinstance(node, Name) and pattern.where is None:
            local = self.frame.local(node.text)
            if local is not None and self.context.program.variable(node.text, None) is not None:
                return False
        if matches(wanted.tree, node, self._outside_constant, self.constant):
            return True
        if isinstance(node, Call | Index):
            self.near = True
        return False

    def _outside_constant(self, node: Expr) -> int | float | None:
        """A constant of a pattern: no local is meant by it."""
        known = self.context.pattern_constants
        if id(node) not in known:
            outside = type(self)(self.context, self.unit)
            known[id(node)] = (node, outside.plain_constant(node))
        return known[id(node)][1]

    def plain_constant(self, node: Expr) -> int | float | None:
        """A constant whose expression is not itself looked for among the patterns."""
        match node:
            case Name():
                found = self._name(node)
                return self.context.constant(found) if is_number(found) else None  # type: ignore[arg-type]
            case Number():
                return self.context.constant(
                    self.context.literal(self.unit, len(self.unit.translation.text), node.text)
                )
            case Cast():
                return self.plain_constant(node.operand)
            case Operation():
                inner = self.plain_constant(node.operand)
                if inner is None or node.operator not in ("-", "+", "~", "!"):
                    return None
                return self._computed(
                    lambda: building.unary(
                        self.model, node.operator, _plain(inner, self.model), self.nowhere
                    )
                )
            case Pair():
                left, right = self.plain_constant(node.left), self.plain_constant(node.right)
                if left is None or right is None or node.operator == ",":
                    return None
                return self._computed(
                    lambda: building.binary(
                        self.model,
                        node.operator,
                        _plain(left, self.model),
                        _plain(right, self.model),
                        self.nowhere,
                    )
                )
            case _:
                return None

    @property
    def nowhere(self) -> Place:
        """A place for expressions that no source text holds."""
        return Place(self.unit.path)

    def _computed(self, make: "object") -> int | float | None:
        return self.context.constant(make())  # type: ignore[operator]

    def _delivered(self, wanted: Wanted, node: Expr) -> Expression:
        source = wanted.source
        if isinstance(source, Given):
            return _plain(source.value, self.model)
        target = delivered(wanted.tree, node)
        if target is not None:
            if isinstance(target, Operation) and target.operator == "&":
                target = target.operand
                found = self.lvalue(target)
            else:
                found = self.pointee(target)
            if found is not None:
                location, type_ = found
                raw = self._code(source, type_, node)
                self.state.write(location, raw)
            return self.unknown(f"the status that {_word(node)} returns", node)
        return self._code(source, self._type_of(node), node)

    def _code(self, source: Reading, type_: ObjectType | None, node: Expr) -> Code:
        declared = type_.type if isinstance(type_, Arithmetic) else source.type
        self.note_registers(source, node)
        return Code(
            channels=source.channels,
            text=source.pattern.text,
            type=declared,
            place=self.used(node),
        )

    def note_registers(self, source: Reading, node: Expr) -> None:
        """Record what the family's registers hold where this reading is taken."""
        for register in self.context.registers:
            name = Name(start=node.start, end=node.start, text=register)
            found = self.lvalue(name)
            held = self.value(name)
            if is_number(held) and found is not None:
                place = self.stores.get(found[0], (self.used(node), ""))[0]
                self.note("register", register, held, place, channels=source.channels)  # type: ignore[arg-type]

    def _type_of(self, node: Expr) -> ObjectType | None:
        """The declared type of an expression that a pattern matched."""
        match node:
            case Call(function=Name()):
                return self.returned(node.function.text)
            case Name() | Index() | Member() | Operation(operator="*"):
                before = self.state.copy()
                found = self.lvalue(node)
                self.state = before
                return found[1] if found is not None else None
            case Marked():
                return self._type_of(node.operand)
            case Cast():
                return self.resolved(node.type)
            case _:
                return None

    def returned(self, name: str) -> ObjectType | None:
        """What a function is declared to return."""
        program = self.context.program
        for function in program.function(name, self.unit):
            type_ = function.unit.type_of(function.syntax.type)
            return type_.returns if isinstance(type_, FunctionType) else None
        for unit in (self.unit, *program.units.values()):
            if name in unit.prototypes:
                type_ = unit.type_of(unit.prototypes[name].type)
                return type_.returns if isinstance(type_, FunctionType) else None
        for family in self.context.families:
            if name in family.types:
                known = self.model.named(tuple(family.types[name].split()))
                return Arithmetic(type=known) if known is not None else None
        return None

    # --- names and objects ---------------------------------------------------------------------

    def _name(self, node: Name) -> Value:
        found = self.frame.local(node.text)
        if found is not None:
            return self.read(*found, node)
        enumerator = self._enumerator(node.text)
        if enumerator is not None:
            return self._enumerated(enumerator, node)
        variable = self.context.program.variable(node.text, self.unit)
        if variable is not None:
            return self.read(variable.location, self._object_type(variable), node)
        functions = self.context.program.function(node.text, self.unit)
        if functions:
            return Routine(name=node.text, function=functions[0] if len(functions) == 1 else None)
        if node.text in _TRUTHS:
            return Literal(value=_TRUTHS[node.text], type=self.model.int_)
        for family in self.context.families:
            if node.text in family.names:
                return Literal(value=family.names[node.text], type=self.model.int_)
        return self.read(Location(Root("register", node.text)), Strange(name=""), node)

    def _enumerator(self, name: str) -> Enumeration | None:
        own = self.unit.enumerators.get(name)
        if own is not None:
            return own
        for unit in self.context.program.units.values():
            if name in unit.enumerators:
                return unit.enumerators[name]
        return None

    def _enumerated(self, one: Enumeration, node: Node) -> Expression:
        if one.base is None:
            base: Expression = Literal(value=0, type=self.model.int_)
        else:
            base = self.elsewhere(one.unit, one.base)
        if one.step == 0 and one.base is not None:
            return named(base, one.name, self.used(node))
        value = self.context.constant(base)
        if value is None:
            return self.unknown(f"the value of {one.name} is not constant", node)
        return Literal(value=int(value) + one.step, type=self.model.int_)

    def elsewhere(self, unit: Unit, node: Expr) -> Expression:
        """The value of a constant expression of another unit, outside of any function."""
        if len(self.frames) > self.context.limits.call_depth:
            return self.unknown("constants that refer to each other", node)
        self.frames.append(Frame(unit, None, 0))
        try:
            return self.number(node)
        finally:
            self.frames.pop()

    def _object_type(self, variable: Variable) -> ObjectType:
        """The type of an object with its array sizes filled in."""
        type_ = self.sized(variable.type, variable.syntax.type, variable.unit)
        if isinstance(type_, Array) and type_.length is None:
            type_ = replace(
                type_, length=element_count(variable.value, self.subscript_in(variable.unit))
            )
        return type_

    def sized(self, type_: ObjectType, syntax: TypeSyntax, unit: Unit) -> ObjectType:
        """A declared type with the sizes of its arrays computed."""
        for one in syntax.derivations:
            if not isinstance(type_, Array):
                break
            size = getattr(one, "size", None)
            if size is None:
                break
            inner = self.sized(type_.of, replace(syntax, derivations=syntax.derivations[1:]), unit)
            count = self.context.constant(self.elsewhere(unit, size))
            return Array(of=inner, length=int(count) if count is not None else None)
        return type_

    def resolved(self, syntax: TypeSyntax) -> ObjectType:
        """A type name as this unit means it."""
        return self.sized(self.unit.type_of(syntax), syntax, self.unit)

    # --- lvalues -------------------------------------------------------------------------------

    def lvalue(self, node: Expr) -> tuple[Location, ObjectType] | None:
        """The object an expression designates, or None if it designates none that is known."""
        match node:
            case Name():
                found = self.frame.local(node.text)
                if found is not None:
                    return found
                variable = self.context.program.variable(node.text, self.unit)
                if variable is not None:
                    return variable.location, self._object_type(variable)
                return Location(Root("register", node.text)), Strange(name="")
            case Marked():
                return self.lvalue(node.operand)
            case Member():
                return self._member(node)
            case Index():
                return self._element(node)
            case Operation(operator="*"):
                return self.pointee(node.operand)
            case Braces():
                made = self._compound(node)
                return (made.source, made.type) if isinstance(made, Copy) else None
            case _:
                return None

    def _member(self, node: Member) -> tuple[Location, ObjectType] | None:
        base = self.lvalue(node.base)
        if base is None:
            value = self.value(node.base)
            if not isinstance(value, Copy):
                return None
            base = (self._temporary(value), value.type)
        location, type_ = base
        inner = self.member_type(type_, node.name)
        return location.part(node.name), inner if inner is not None else Strange(name="")

    def member_type(self, type_: ObjectType, name: str) -> ObjectType | None:
        """The type of a member of a record."""
        if not isinstance(type_, Record):
            return None
        units = self.context.program.units
        own = units.get(type_.scope)
        for unit in ([own] if own is not None else []) + list(units.values()):
            found = unit.member(type_, name)
            if found is not None:
                return found
        return None

    def _temporary(self, value: Copy) -> Location:
        self.frame_count += 1
        location = Location(Root("local", "temporary", f"#{self.frame_count}"))
        self.state.write(location, value)
        return location

    def _element(self, node: Index) -> tuple[Location, ObjectType] | None:
        index = self.number(node.index)
        step = self.context.constant(index)
        base = self.pointer(node.base)
        if base is None:
            return None
        return self.shifted(base, int(step) if isinstance(step, int) else None)

    @staticmethod
    def shifted(base: Address, step: int | None) -> tuple[Location, ObjectType]:
        """The element `step` elements from where a pointer points."""
        path = base.target.path
        if step == 0:
            return base.target, base.type
        if path and (isinstance(path[-1], int) or path[-1] == ANYWHERE):
            last = path[-1]
            moved = ANYWHERE if step is None or isinstance(last, str) else last + step
            return Location(base.target.root, (*path[:-1], moved)), base.type
        return base.target.part(ANYWHERE if step is None else step), base.type

    def pointee(self, node: Expr) -> tuple[Location, ObjectType] | None:
        """What `*node` designates."""
        base = self.pointer(node)
        return (base.target, base.type) if base is not None else None

    def pointer(self, node: Expr) -> Address | None:
        """An expression as a pointer; what points nowhere known gets a place of its own name."""
        value = self.value(node)
        match value:
            case Address():
                return value
            case Routine() | Copy():
                return None
            case _:
                pass
        fixed = self.context.constant(value)
        if fixed is not None:
            root = Root("address", f"0x{int(fixed):X}")
            return Address(target=Location(root), type=Strange(name=""))
        known = self.context.inputs.get(id(value))
        text = (
            shown(known.location)
            if known is not None and known.location is not None
            else " ".join(self.unit.translation.text[node.start : node.end].split())[:60]
        )
        return Address(target=Location(Root("pointee", text)), type=Strange(name=""))

    # --- reading and writing objects -----------------------------------------------------------

    def _read_part(self, node: Index | Member) -> Value:
        found = self.lvalue(node)
        if found is None:
            return self.unknown("an expression of this form is not followed", node)
        return self.read(*found, node)

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
            if (
                known.root == location.root
                and ANYWHERE in known.path
                and len(known.path) <= len(location.path)
                and all(
                    ANYWHERE in (mine, theirs) or mine == theirs
                    for mine, theirs in zip(known.path, location.path, strict=False)
                )
            ):
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
        if isinstance(type_, Pointer):
            to = type_.to
            return Address(target=Location(Root("pointee", shown(location))), type=to)
        if isinstance(type_, Record):
            return Copy(parts=(), source=location, type=type_)
        if isinstance(type_, Array):
            return Address(target=location.part(0), type=type_.of)
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
            if is_number(value) and isinstance(type_, Arithmetic):
                value = named(value, shown(location), place)  # type: ignore[arg-type]
                return building.convert(value, type_.type, Purpose.STORE, place)
            return value
        finally:
            self.frames.pop()
            progress.discard(location.path)

    def subscript_in(self, unit: Unit) -> Callable[[Expr], int | None]:
        """Evaluates the subscript of a designator as a unit means it."""

        def subscript(node: Expr) -> int | None:
            value = self.context.constant(self.elsewhere(unit, node))
            return int(value) if value is not None else None

        return subscript

    def field_names(self, record: Record) -> tuple[tuple[str, ObjectType], ...]:
        """Members of a record in order."""
        units = self.context.program.units
        unit = units.get(record.scope)
        if unit is None:
            return ()
        return tuple((one.name, unit.type_of(one.type)) for one in unit.records.get(record.tag, ()))

    def store(self, location: Location, type_: ObjectType, value: Value, node: Node) -> Value:
        """Write an object; the value it then has."""
        if isinstance(type_, Arithmetic) and is_number(value):
            value = building.convert(value, type_.type, Purpose.STORE, self.used(node))  # type: ignore[arg-type]
        self.state.write(location, value)
        self.types[location] = type_
        function = self.frame.function
        self.stores[location] = (self.used(node), function.name if function else "")
        return value

    # --- operators -----------------------------------------------------------------------------

    def _operation(self, node: Operation) -> Value:
        if node.operator == "&":
            found = self.lvalue(node.operand)
            if found is not None:
                if isinstance(node.operand, Name) and found[0].root.kind == "register":
                    routine = self._name(node.operand)
                    if isinstance(routine, Routine):
                        return routine
                return Address(target=found[0], type=found[1])
            return self.unknown("an address of this form is not followed", node)
        if node.operator == "*":
            value = self.value(node.operand)
            if isinstance(value, Routine):
                return value
            found = self.pointee(node.operand)
            if found is None:
                return self.unknown("a pointer of this form is not followed", node)
            return self.read(*found, node)
        operand = self.number(node.operand)
        return building.unary(self.model, node.operator, operand, self.spelled(node.start))

    def _increment(self, node: Increment) -> Value:
        found = self.lvalue(node.target)
        if found is None:
            return self.unknown("an increment of this form is not followed", node)
        before = self.read(*found, node)
        step = 1 if node.operator == "++" else -1
        if isinstance(before, Address):
            moved, type_ = self.shifted(before, step)
            after: Value = Address(target=moved, type=type_)
        else:
            number = self.as_number(before, node)
            fixed = self.context.constant(number)
            if isinstance(fixed, int):
                # A plain number keeps loop counters short.
                after = building.convert(
                    Literal(
                        value=fixed + step, type=self.model.usual(number.type, self.model.int_)
                    ),
                    number.type,
                    Purpose.STORE,
                    self.used(node),
                )
                counted = self.context.constant(after)
                after = Literal(value=counted if counted is not None else 0, type=number.type)
            else:
                one = Literal(value=1, type=self.model.int_)
                sign = "+" if step > 0 else "-"
                after = building.binary(self.model, sign, number, one, self.used(node))
        stored = self.store(*found, after, node)
        return stored if node.prefix else before

    def _pair(self, node: Pair) -> Value:
        if node.operator == ",":
            self.value(node.left)
            return self.value(node.right)
        left = self.value(node.left)
        if node.operator in ("&&", "||"):
            return self._logical(node, left)
        right = self.value(node.right)
        if isinstance(left, Address) or isinstance(right, Address):
            return self._pointer_pair(node, left, right)
        return building.binary(
            self.model,
            node.operator,
            self.as_number(left, node.left),
            self.as_number(right, node.right),
            self.spelled(node.at),
        )

    def _logical(self, node: Pair, left: Value) -> Value:
        first = self.as_number(left, node.left)
        known = self.context.constant(first)
        if known is not None and bool(known) == (node.operator == "||"):
            return Literal(value=int(bool(known)), type=self.model.int_)
        before = self.state.copy()
        second = self.number(node.right)
        if known is None and before.values != self.state.values:
            condition = (
                first
                if node.operator == "&&"
                else building.unary(self.model, "!", first, self.used(node))
            )
            self.state = self.join(condition, self.state, before, node)
        return building.binary(self.model, node.operator, first, second, self.spelled(node.at))

    def _pointer_pair(self, node: Pair, left: Value, right: Value) -> Value:
        if isinstance(left, Address) and is_number(right) and node.operator in "+-":
            step = self.context.constant(right)  # type: ignore[arg-type]
            sign = 1 if node.operator == "+" else -1
            moved = self.shifted(left, sign * int(step) if isinstance(step, int) else None)
            return Address(target=moved[0], type=moved[1])
        if isinstance(right, Address) and is_number(left) and node.operator == "+":
            step = self.context.constant(left)  # type: ignore[arg-type]
            moved = self.shifted(right, int(step) if isinstance(step, int) else None)
            return Address(target=moved[0], type=moved[1])
        return self.unknown("pointers compared or subtracted", node)

    def _assign(self, node: Assign) -> Value:
        found = self.lvalue(node.target)
        if node.operator == "=":
            value = self.value(node.value)
        else:
            old = self.read(*found, node) if found else self.unknown("an unknown object", node)
            new = self.value(node.value)
            if isinstance(old, Address):
                pair = Pair(
                    start=node.start,
                    end=node.end,
                    operator=node.operator[:-1],
                    left=node.target,
                    right=node.value,
                    at=node.at,
                )
                value = self._pointer_pair(pair, old, new)
            else:
                value = building.binary(
                    self.model,
                    node.operator[:-1],
                    self.as_number(old, node.target),
                    self.as_number(new, node.value),
                    self.spelled(node.at),
                )
        if found is None or self.is_reading(node.target):
            return value
        return self.store(*found, value, node)

    def is_reading(self, node: Expr) -> bool:
        """Whether the board file names this object as a reading: its writes are not followed."""
        candidates = self.context.wanted(self.unit).get(head(node), ())
        near = self.near
        found = any(
            isinstance(one.source, Reading) and self._matches(one, node) for one in candidates
        )
        self.near = near
        return found

    def _conditional(self, node: Conditional) -> Value:
        condition = self.number(node.condition)
        known = self.context.constant(condition)
        if known is not None:
            if known:
                return self.value(node.then) if node.then is not None else condition
            return self.value(node.other)
        before = self.state.copy()
        then = self.value(node.then) if node.then is not None else condition
        after = self.state
        self.state = before
        other = self.value(node.other)
        self.state = self.join(condition, after, self.state, node)
        return self.joined(condition, then, other, node)

    def join(self, condition: Expression, then: State, other: State, node: Node) -> State:
        """The state after a fork."""
        return merged(
            condition,
            then,
            other,
            lambda cond, left, right, _: self.joined(cond, left, right, node, merge=True),
            lambda location: self.before(location, node),
        )

    def before(self, location: Location, node: Node) -> Value | None:
        """What a location held before a fork that wrote it in one arm only."""
        if location.root.kind == "local":
            return self.context.unknown(
                f"{location.root.name} is not set on every way", self.used(node)
            )
        return self.initial(location, self.type_at(location), self.used(node))

    def type_at(self, location: Location) -> ObjectType:
        """The type of an object that was written, or of the declared object it is part of."""
        if location in self.types:
            return self.types[location]
        declared = self.context.declared(location, self.unit)
        type_: ObjectType = declared.type if declared is not None else Strange(name="")
        for step in location.path if declared is not None else ():
            if isinstance(type_, Array):
                type_ = type_.of
            else:
                type_ = self.member_type(type_, str(step)) or Strange(name="")
        return type_

    def joined(
        self, condition: Expression, then: Value, other: Value, node: Node, merge: bool = False
    ) -> Value:
        """One value or the other, by a condition; with `merge` two values of one object."""
        if then is other or then == other:
            return then
        if is_number(then) and is_number(other):
            place = self.used(node)
            if merge and then.type == other.type:  # type: ignore[union-attr]
                return building.merge(condition, then, other, place)  # type: ignore[arg-type]
            return building.choose(self.model, condition, then, other, place)  # type: ignore[arg-type]
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

    def _cast(self, node: Cast) -> Value:
        type_ = self.resolved(node.type)
        value = self.value(node.operand)
        match type_:
            case Arithmetic():
                if isinstance(value, Address):
                    return self.unknown("an address as a number", node, type_.type)
                return building.convert(
                    self.as_number(value, node.operand),
                    type_.type,
                    Purpose.CAST,
                    self.spelled(node.start),
                )
            case Pointer():
                if isinstance(value, Address):
                    known = isinstance(type_.to, Strange) and not isinstance(value.type, Strange)
                    return value if known else replace(value, type=type_.to)
                if is_number(value):
                    return self._address(value, type_.to, node)  # type: ignore[arg-type]
                return value
            case _:
                return value

    def _address(self, value: Expression, to: ObjectType, node: Cast) -> Value:
        fixed = self.context.constant(value)
        if fixed is None:
            return Address(target=Location(Root("pointee", self.text(node))), type=to)
        return Address(target=Location(Root("address", f"0x{int(fixed):X}")), type=to)

    def text(self, node: Node) -> str:
        """The source of a node on one line."""
        return " ".join(self.unit.translation.text[node.start : node.end].split())[:60]

    def _sizeof(self, node: SizeOf) -> Value:
        if node.type is not None:
            type_: ObjectType | None = self.resolved(node.type)
        else:
            type_ = self._type_of(node.operand) if node.operand is not None else None
        size = self.size(type_) if type_ is not None else None
        if size is None:
            return self.unknown("the size of a type that is not known", node, self.model.size_t)
        return Literal(value=size, type=self.model.size_t)

    def size(self, type_: ObjectType, depth: int = 0) -> int | None:
        """Bytes of an object with natural alignment (the usual ABI; none on 8-bit targets)."""
        match type_:
            case Arithmetic():
                return max(1, type_.type.bits // 8)
            case Pointer():
                return self.model.pointer_bits // 8
            case Array(length=int()):
                inner = self.size(type_.of, depth + 1) if depth < 16 else None
                return inner * type_.length if inner is not None and type_.length else None
            case _:
                return None

    def _compound(self, node: Braces) -> Value:
        if node.type is None:
            return self.unknown("a list of values is not a number", node)
        type_ = self.resolved(node.type)
        self.frame_count += 1
        location = Location(Root("local", "literal", f"#{self.frame_count}"))
        self.fill(location, type_, node)
        return self.read(location, type_, node)

    def fill(self, location: Location, type_: ObjectType, node: Expr) -> None:
        """Initialise an object from a braced list or a value."""
        if not isinstance(node, Braces):
            self.store(location, type_, self.value(node), node)
            return
        if isinstance(type_, Arithmetic | Pointer | Strange) and len(node.entries) == 1:
            self.store(location, type_, self.value(node.entries[0].value), node)
            return
        for path, inner, expression in self._entries(type_, node):
            if expression is not None:
                self.fill(Location(location.root, (*location.path, path)), inner, expression)
            elif isinstance(inner, Arithmetic):
                self.state.write(location.part(path), Literal(value=0, type=inner.type))

    def _entries(
        self, type_: ObjectType, node: Braces
    ) -> list[tuple[str | int, ObjectType, Expr | None]]:
        if isinstance(type_, Record):
            members: list[tuple[str | int, ObjectType]] = list(self.field_names(type_))
        elif isinstance(type_, Array):
            length = type_.length
            if length is None:
                length = element_count(node, self.subscript_in(self.unit))
            members = [(index, type_.of) for index in range(min(length or 0, 4096))]
        else:
            return []
        return [
            (
                name,
                inner,
                component(node, (name,), type_, self.field_names, self.subscript_in(self.unit)),
            )
            for name, inner in members
        ]


def _plain(value: float, model: DataModel) -> Literal:
    """A number that no source text spells."""
    if isinstance(value, float):
        return Literal(value=value, type=model.double)
    for type_ in (model.int_, model.long, model.long_long):
        if type_.low <= value <= type_.high:
            return Literal(value=value, type=type_)
    return Literal(value=value, type=model.unsigned_long_long)


def _word(node: Expr) -> str:
    if isinstance(node, Call) and isinstance(node.function, Name):
        return f"{node.function.text}()"
    return "the call"


def declared_names(declarators: tuple[Declarator, ...]) -> Mapping[str, Declarator]:
    """Declarators by name."""
    return {one.name: one for one in declarators}
