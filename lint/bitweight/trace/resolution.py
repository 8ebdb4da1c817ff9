"""Placeholders replaced by what the whole tree says of them.

An expression with placeholders enters; closed expressions leave, one for each way that the program may take
where that is not decided by the code. Ways that carry no reading drop out beside ways that do.
"""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field, replace
from itertools import product

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Literal,
    Purpose,
    Unary,
    Unknown,
    children,
    walk,
)
from bitweight.firmware.objects import Arithmetic, Location, Strange
from bitweight.firmware.units import Function
from bitweight.trace.contexts import Context, named, shown
from bitweight.trace.execution import Execution
from bitweight.trace.initialisers import component
from bitweight.trace.lowering import ANYWHERE
from bitweight.trace.memory import Copy, Input, Value, is_number
from bitweight.trace.runs import Runner

_MOST_WAYS = 12
_CALLER_ROUNDS = 8
_COMPARISONS = building.COMPARISONS | building.LOGICAL


def measures(root: Expression, tainted: Mapping[int, frozenset[str]]) -> frozenset[str]:
    """The channels whose code the value is made from; what only decides between values does not count.

    `tainted` says which unknowns were made from which codes.
    """
    found: dict[int, frozenset[str]] = {}
    for node in walk(root):
        match node:
            case Code():
                here = frozenset(node.channels) | tainted.get(id(node), frozenset())
            case Unknown() | Literal():
                here = tainted.get(id(node), frozenset())
            case Binary(operator=operator) if operator in _COMPARISONS:
                here = frozenset()
            case Unary(operator="!"):
                here = frozenset()
            case Choose():
                here = found[id(node.then)] | found[id(node.other)]
            case _:
                here = frozenset().union(*(found[id(child)] for child in children(node)))
        found[id(node)] = here
    return found[id(root)]


@dataclass(kw_only=True)
class Resolver:
    """Resolves expressions of one tracing; objects are resolved once."""

    context: Context
    runner: Runner
    tainted: dict[int, frozenset[str]] = field(default_factory=dict)
    used: dict[int, set[Location]] = field(default_factory=dict)
    _objects: dict[Location, tuple[Expression, ...]] = field(default_factory=dict)
    _stack: list[Location] = field(default_factory=list)
    _lowest: int = 1 << 30
    _kept: list[object] = field(default_factory=list)

    def measures(self, expression: Expression) -> frozenset[str]:
        """The channels a closed expression is made from."""
        return measures(expression, self.tainted)

    def alternatives(self, root: Expression) -> tuple[Expression, ...]:
        """Every closed expression that the value may be."""
        memo: dict[int, tuple[Expression, ...]] = {}
        for node in walk(root):
            memo[id(node)] = self._ways(node, memo)
        self._kept.append((root, memo))
        return memo[id(root)]

    # --- one node --------------------------------------------------------------------------

    def _ways(
        self, node: Expression, memo: Mapping[int, tuple[Expression, ...]]
    ) -> tuple[Expression, ...]:
        match node:
            case Literal() | Unknown():
                return (node,)
            case Code():
                known = self.context.inputs.get(id(node))
                return (node,) if known is None else self._input(node, known)
            case Choose():
                return self._choice(node, memo)
            case Default() | Convert() | Unary() | Binary():
                below = [memo[id(child)] for child in children(node)]
                if all(
                    len(some) == 1 and some[0] is child
                    for some, child in zip(below, children(node), strict=True)
                ):
                    return (node,)
                made = [self._rebuilt(node, parts) for parts in product(*below)]
                return self._distinct(made, node)

    def _rebuilt(self, node: Expression, parts: tuple[Expression, ...]) -> Expression:
        for part in parts:
            if isinstance(part, Unknown):
                reason = part.reason
                if reason.startswith(_ITSELF):
                    reason = reason.removeprefix(_ITSELF)
                made = Unknown(reason=reason, type=node.type, place=part.place)
                self._taint(made, parts)
                return made
        match node:
            case Default() | Convert() | Unary():
                return replace(node, operand=parts[0])
            case Binary():
                return replace(node, left=parts[0], right=parts[1])
            case _:
                return node

    def _taint(self, made: Unknown, parts: Iterable[Expression]) -> None:
        channels = frozenset().union(*(self.measures(part) for part in parts))
        self._kept.append(made)
        if channels:
            self.tainted[id(made)] = channels

    def _choice(
        self, node: Choose, memo: Mapping[int, tuple[Expression, ...]]
    ) -> tuple[Expression, ...]:
        conditions = memo[id(node.condition)]
        then, other = memo[id(node.then)], memo[id(node.other)]
        if len(conditions) == 1 and not isinstance(conditions[0], Unknown):
            condition = conditions[0]
            known = self.context.constant(condition)
            if known is not None:
                return then if known else other
            if (
                (condition,) == (node.condition,)
                and then == (node.then,)
                and other == (node.other,)
            ):
                return (node,)
            made = [
                replace(node, condition=condition, then=one, other=two)
                for one, two in product(then, other)
            ]
            return self._distinct(made, node)
        return self._preferred((*then, *other), node)

    def _preferred(self, ways: tuple[Expression, ...], node: Expression) -> tuple[Expression, ...]:
        """Ways that carry a reading, if some do; an object's own earlier value is no way of its own."""
        others = tuple(one for one in ways if not _is_itself(one)) or ways[:1]
        carrying = tuple(one for one in others if self.measures(one))
        return self._distinct(carrying or others, node)

    def _distinct(self, ways: Iterable[Expression], node: Expression) -> tuple[Expression, ...]:
        found: dict[str, Expression] = {}
        for one in ways:
            found.setdefault(structure(one), one)
            if len(found) > _MOST_WAYS:
                made = Unknown(
                    reason="the value depends on too many things that are decided at run time",
                    type=node.type,
                )
                self._taint(made, found.values())
                return (made,)
        return tuple(found.values())

    # --- placeholders ----------------------------------------------------------------------

    def _input(self, node: Code, known: Input) -> tuple[Expression, ...]:
        match known.kind:
            case "object":
                assert known.location is not None
                found = self.object(known.location, node)
                return tuple(self._as(one, node) for one in found)
            case "parameter":
                assert known.function is not None
                reason = (
                    f"{node.text} is a parameter of {known.function.name}(), "
                    "and no call that gives it is followed"
                )
            case _:
                reason = known.reason
        return (self._unknown(reason, node),)

    def _unknown(self, reason: str, node: Code) -> Unknown:
        made = Unknown(reason=reason, type=node.type, place=node.place)
        self._kept.append(made)
        return made

    def _as(self, value: Expression, node: Code) -> Expression:
        if _is_itself(value):
            made = Unknown(reason=value.reason, type=node.type, place=node.place)  # type: ignore[union-attr]
            self._kept.append(made)
            return made
        return building.convert(value, node.type, Purpose.STORE, node.place)

    def object(self, location: Location, node: Code) -> tuple[Expression, ...]:
        """Every value an object may hold where it is read."""
        if location in self._objects:
            return self._objects[location]
        if location in self._stack:
            self._lowest = min(self._lowest, self._stack.index(location))
            reason = (
                f"{_ITSELF}{shown(location)} is computed from its own earlier value "
                "(a filter), which is not followed"
            )
            return (self._unknown(reason, node),)
        if len(self._stack) > self.context.limits.call_depth:
            return (self._unknown("objects that are computed from each other", node),)
        self._stack.append(location)
        depth = len(self._stack) - 1
        try:
            found = self._held(location, node)
        finally:
            self._stack.pop()
        if self._lowest >= depth:
            self._objects[location] = found
            self._lowest = 1 << 30
        return found

    def _held(self, location: Location, node: Code) -> tuple[Expression, ...]:
        written: list[Expression] = []
        for function in self._writing(location):
            written.extend(self._written(function, location, node))
        if not written and location.root.kind != "object":
            return (self._unknown(_undefined(location), node),)
        others = [one for one in written if not _is_itself(one)]
        carrying = [one for one in others if self.measures(one)]
        if carrying:
            return self._distinct(carrying, node)
        return self._settled(location, others, node)

    def _settled(
        self, location: Location, written: list[Expression], node: Code
    ) -> tuple[Expression, ...]:
        """An object that no reading reaches: a constant, or a default that something may overwrite."""
        values = {self.context.constant(one) for one in written}
        initial = self._initialiser(location, node)
        if len(values) == 1 and None not in values:
            value = self.context.constant(initial) if initial is not None else None
            if value is None or value in values or value == 0:
                return (written[0],)
        if initial is not None:
            place = node.place
            made = Default(name=shown(location), operand=initial, type=initial.type, place=place)
            return (made,) if written else (initial,)
        declared = self.context.declared(location, None)
        if written and None not in values:
            return self._distinct(written, node)
        if declared is None or declared.declared_only:
            return (self._unknown(_undefined(location), node),)
        if not written:
            reason = (
                f"nothing in the sources writes {shown(location)}; "
                "give its value in [constants] or name it as a reading"
            )
            return (self._unknown(reason, node),)
        unknowns = [one.reason for one in written if isinstance(one, Unknown)]
        because = f" ({unknowns[0]})" if unknowns else ""
        reason = f"{shown(location)} is set at run time{because}; give its value in [constants]"
        return (self._unknown(reason, node),)

    def _initialiser(self, location: Location, node: Code) -> Expression | None:
        declared = self.context.declared(location, None)
        if declared is None or declared.value is None:
            return None
        lowering = Execution(self.context, declared.unit, declared.function)
        found = component(
            declared.value,
            location.path,
            declared.type,
            lowering.field_names,
            lowering.subscript_in(declared.unit),
        )
        if found is None:
            return None
        value = lowering.value(found)
        if not is_number(value):
            return None
        made = building.convert(
            named(value, shown(location), node.place),
            node.type,
            Purpose.STORE,
            node.place,  # type: ignore[arg-type]
        )
        return made if self.context.constant(made) is not None else None

    # --- who writes an object ----------------------------------------------------------------

    def _writing(self, location: Location) -> tuple[Function, ...]:
        root = location.root
        if root.kind not in ("object", "register"):
            return ()
        return self.context.writers(root, self.context.declared(location, None))

    def _written(self, function: Function, location: Location, node: Code) -> list[Expression]:
        """What a function writes there; where that is its parameter, what its callers give."""
        found: list[Expression] = []
        seen = {function.key}
        pending = [function]
        rounds = 0
        while pending and rounds < _CALLER_ROUNDS * 8:
            rounds += 1
            one = pending.pop()
            values = self._values(one, location, node)
            callers = self._callers(one) if any(self._waits_for(v, one) for v in values) else ()
            if callers:
                for caller in callers:
                    if caller.key not in seen:
                        seen.add(caller.key)
                        pending.append(caller)
                values = [value for value in values if not self._waits_for(value, one)]
            for value in values:
                found.extend(self.alternatives(value))
        return found

    def _waits_for(self, value: Expression, function: Function) -> bool:
        """Whether a value hangs on a parameter of the function itself."""
        return any(
            known.kind == "parameter" and known.function is function
            for node in walk(value)
            if isinstance(node, Code) and (known := self.context.inputs.get(id(node))) is not None
        )

    def _callers(self, function: Function) -> tuple[Function, ...]:
        return tuple(
            one
            for one in self.context.program.all_functions(function.name)
            if one is not function and function.name in one.mentions.calls
        )

    def _values(self, function: Function, location: Location, node: Code) -> list[Expression]:
        run = self.runner.run(function)
        found: list[Expression] = []
        for written, values in run.writes.items():
            if written.root != location.root:
                continue
            for value in values:
                part = self._part(written, location, value, node)
                if part is not None:
                    found.append(part)
        return found

    def _part(
        self, written: Location, location: Location, value: Value, node: Code
    ) -> Expression | None:
        """What a write to `written` leaves at `location`."""
        if len(written.path) > len(location.path):
            return None
        same = all(
            ANYWHERE in (mine, theirs) or mine == theirs
            for mine, theirs in zip(written.path, location.path, strict=False)
        )
        if not same:
            return None
        rest = location.path[len(written.path) :]
        if not rest:
            return value if is_number(value) else None  # type: ignore[return-value]
        if isinstance(value, Copy):
            source = Location(value.source.root, (*value.source.path, *rest))
            if source == location:
                return None
            type_ = Arithmetic(type=node.type) if node.type is not None else Strange(name="")
            return self.context.object(source, type_, node.place)
        return None


_ITSELF = "\0"
"""Marks an unknown that is an object's own earlier value."""


def _is_itself(expression: Expression) -> bool:
    return isinstance(expression, Unknown) and expression.reason.startswith(_ITSELF)


def _undefined(location: Location) -> str:
    return (
        f"{shown(location)} is not defined in the given sources; "
        "define it, or give its value in [constants]"
    )


def structure(root: Expression) -> str:
    """A text that two expressions share when they compute the same in the same way."""
    texts: dict[int, str] = {}
    numbers: dict[str, str] = {}
    for node in walk(root):
        below = " ".join(texts[id(child)] for child in children(node))
        match node:
            case Literal():
                text = f"{node.value!r}:{node.type.name}@{node.leaf.place if node.leaf else ''}"
            case Code():
                text = f"code {node.channels} {node.text}:{node.type.name}"
            case Unknown():
                text = f"unknown {node.reason}"
            case Default():
                text = f"default {node.name} {below}"
            case Convert():
                text = f"to {node.type.name} {below}"
            case Unary() | Binary():
                text = f"{node.operator}:{node.type.name} {below}"
            case Choose():
                text = f"choose:{node.type.name} {below}"
        texts[id(node)] = numbers.setdefault(text, f"#{len(numbers)}")
    return ";".join(f"{number}={text}" for text, number in numbers.items())
