"""Placeholders replaced by what the whole tree says of them.

An expression with placeholders enters; closed expressions leave, one for each way that the program
may take where that is not decided by the code. Ways that carry no reading drop out beside ways that
do.
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
from bitweight.firmware.objects import Arithmetic, Location, Record
from bitweight.trace.contexts import Context, shown
from bitweight.trace.execution import Execution
from bitweight.trace.measures import measures
from bitweight.trace.memory import Input, is_number
from bitweight.trace.runs import Runner
from bitweight.trace.structures import Structures
from bitweight.trace.writings import Writings

_MOST_WAYS = 12
_NONE_YET = 1 << 30

_KEPT = "keeps its earlier value there"
_FED_BACK = "is computed from its own earlier value (a filter), which is not followed"

Ways = tuple[Expression, ...]
"""Closed expressions for one value, one for each way that is decided at run time."""


@dataclass(kw_only=True)
class Resolver:
    """Resolves expressions of one tracing; objects are resolved once."""

    context: Context
    runner: Runner
    tainted: dict[int, frozenset[str]] = field(default_factory=dict)
    writings: Writings = field(init=False)
    _objects: dict[Location, Ways] = field(default_factory=dict)
    _stack: list[Location] = field(default_factory=list)
    _lowest: int = _NONE_YET
    """The outermost object of the stack that one being resolved came back to."""
    _earlier: set[int] = field(default_factory=set)
    """Unknowns that are an object's own earlier value, by identity."""
    _structures: Structures = field(default_factory=Structures)
    _measured: dict[int, frozenset[str]] = field(default_factory=dict)
    _kept: list[object] = field(default_factory=list)
    """Expressions known by identity live as long as the resolver."""

    def __post_init__(self) -> None:
        self.writings = Writings(context=self.context, runner=self.runner)

    def measures(self, expression: Expression) -> frozenset[str]:
        """The channels a closed expression is made from."""
        if id(expression) not in self._measured:
            self._kept.append(expression)
        return measures(expression, self.tainted, self._measured)

    def alternatives(self, root: Expression) -> Ways:
        """Every closed expression that the value may be."""
        memo: dict[int, Ways] = {}
        for node in walk(root):
            memo[id(node)] = self._ways(node, memo)
        self._kept.append((root, memo))
        return memo[id(root)]

    def written_to(self, location: Location | None, value: Expression) -> Ways:
        """The closed expressions of a value that is written to an object (None: to none).

        Where it is the object's own value, the object keeps what it had.
        """
        if location is None:
            return self.alternatives(value)
        self._stack.append(location)
        try:
            return self.alternatives(value)
        finally:
            self._stack.pop()
            if self._lowest >= len(self._stack):
                self._lowest = _NONE_YET

    def feeds_back(self, location: Location, value: Expression) -> Unknown | None:
        """Why a value written to an object cannot be told, if it is made from the object's own."""
        for way in self.written_to(location, value):
            if isinstance(way, Unknown) and way.reason.endswith(_FED_BACK):
                return way
        return None

    # --- one node -----------------------------------------------------------------------------

    def _ways(self, node: Expression, memo: Mapping[int, Ways]) -> Ways:
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
                if all(map(_unchanged, below, children(node))):
                    return (node,)
                made = [self._rebuilt(node, parts) for parts in product(*below)]
                return self._distinct(made, node)

    def _rebuilt(self, node: Expression, parts: Ways) -> Expression:
        for part in parts:
            if isinstance(part, Unknown):
                return self._still_unknown(node, part, parts)
        match node:
            case Default() | Convert() | Unary():
                return replace(node, operand=parts[0])
            case Binary():
                return replace(node, left=parts[0], right=parts[1])
            case _:
                return node

    def _still_unknown(self, node: Expression, part: Unknown, parts: Ways) -> Unknown:
        """What is made from an unknown; an object's own earlier value may be converted."""
        kept = id(part) in self._earlier
        if kept and isinstance(node, Convert | Default):
            made = replace(part, type=node.type)
            self._earlier.add(id(made))
        elif kept:
            reason = part.reason.replace(_KEPT, _FED_BACK)
            made = Unknown(reason=reason, type=node.type, place=part.place)
        else:
            made = Unknown(reason=part.reason, type=node.type, place=part.place)
        self._taint(made, parts)
        return made

    def _taint(self, made: Unknown, parts: Iterable[Expression]) -> None:
        """Remember the channels that an unknown was made from."""
        channels = frozenset[str]().union(*(self.measures(part) for part in parts))
        self._kept.append(made)
        if channels:
            self.tainted[id(made)] = channels

    def _choice(self, node: Choose, memo: Mapping[int, Ways]) -> Ways:
        conditions = memo[id(node.condition)]
        then, other = memo[id(node.then)], memo[id(node.other)]
        if len(conditions) > 1 or isinstance(conditions[0], Unknown):
            return self._preferred((*then, *other), node)
        condition = conditions[0]
        known = self.context.constant(condition)
        if known is not None:
            return then if known else other
        if all(map(_unchanged, (conditions, then, other), children(node))):
            return (node,)
        made = [
            replace(node, condition=condition, then=one, other=two)
            for one, two in product(then, other)
        ]
        return self._distinct(made, node)

    def _preferred(self, ways: Ways, node: Expression) -> Ways:
        """Ways that carry a reading, if some do; an object's own earlier value is no way."""
        others = tuple(one for one in ways if id(one) not in self._earlier) or ways[:1]
        carrying = tuple(one for one in others if self.measures(one))
        return self._distinct(carrying or others, node)

    def _distinct(self, ways: Iterable[Expression], node: Expression) -> Ways:
        found: dict[int, Expression] = {}
        for one in ways:
            found.setdefault(self._structures.number(one), one)
            if len(found) > _MOST_WAYS:
                made = Unknown(
                    reason="the value depends on too many things that are decided at run time",
                    type=node.type,
                )
                self._taint(made, found.values())
                return (made,)
        return tuple(found.values())

    # --- placeholders -------------------------------------------------------------------------

    def _input(self, node: Code, known: Input) -> Ways:
        if known.location is not None:
            return tuple(self._as(one, node) for one in self.object(known.location, node))
        reason = known.reason
        if known.function is not None:
            reason = (
                f"{node.text} is a parameter of {known.function.name}(), "
                "and no call that gives it is followed"
            )
        return (self._unknown(reason, node),)

    def _unknown(self, reason: str, node: Code) -> Unknown:
        made = Unknown(reason=reason, type=node.type, place=node.place)
        self._kept.append(made)
        return made

    def _own_earlier(self, reason: str, node: Code) -> Unknown:
        made = self._unknown(reason, node)
        self._earlier.add(id(made))
        return made

    def _as(self, value: Expression, node: Code) -> Expression:
        if isinstance(value, Unknown) and id(value) in self._earlier:
            return self._own_earlier(value.reason, node)
        return building.convert(value, node.type, Purpose.STORE, node.place)

    def object(self, location: Location, node: Code) -> Ways:
        """Every value an object may hold where it is read."""
        if location in self._objects:
            return self._objects[location]
        if location in self._stack:
            self._lowest = min(self._lowest, self._stack.index(location))
            return (self._own_earlier(f"{shown(location)} {_KEPT}", node),)
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
            self._lowest = _NONE_YET
        return found

    def _held(self, location: Location, node: Code) -> Ways:
        if location.root in self.context.lost:
            reason = f"{self.context.lost[location.root]} ({shown(location)})"
            return (self._unknown(reason, node),)
        other = self.writings.sharing(location)
        if other is not None:
            reason = f"{shown(location)} is read as {shown(other)} was written"
            return (self._unknown(reason, node),)
        written = [
            way
            for value in self.writings.values(location, node)
            for way in self.alternatives(value)
        ]
        if not written and location.root.kind != "object":
            return (self._unknown(_undefined(location), node),)
        others = [one for one in written if id(one) not in self._earlier]
        carrying = [one for one in others if self.measures(one)]
        if carrying:
            return self._distinct(carrying, node)
        return self._settled(location, others or written, node)

    # --- objects that no reading reaches ------------------------------------------------------

    def _settled(self, location: Location, written: list[Expression], node: Code) -> Ways:
        """A constant, or a default that something may overwrite; else a reason."""
        initial = self._initialiser(location, node)
        if initial is not None:
            written = [one for one in written if id(one) not in self._earlier]
        values = {self.context.constant(one) for one in written}
        if len(values) == 1 and None not in values:
            value = self.context.constant(initial) if initial is not None else None
            if value is None or value in values or value == 0:
                return (written[0],)
        if initial is not None and not written and not self._may_be_written(location):
            return (initial,)
        if initial is not None:
            name = shown(location)
            return (Default(name=name, operand=initial, type=initial.type, place=node.place),)
        if written and None not in values:
            return self._distinct(written, node)
        return (self._unknown(self._why_unknown(location, written), node),)

    def _may_be_written(self, location: Location) -> bool:
        """Whether the address of a struct goes where its members may be written unseen."""
        declared = self.context.declared(location, None)
        if declared is None or declared.function is not None or not location.path:
            return False
        return isinstance(declared.type, Record) and not self.context.is_fixed(location, declared)

    def _why_unknown(self, location: Location, written: list[Expression]) -> str:
        declared = self.context.declared(location, None)
        if declared is None or declared.declared_only:
            return _undefined(location)
        if not written:
            return (
                f"nothing in the sources writes {shown(location)}; "
                "give its value in [constants] or name it as a reading"
            )
        unknowns = [one.reason for one in written if isinstance(one, Unknown)]
        because = f" ({unknowns[0]})" if unknowns else ""
        return f"{shown(location)} is set at run time{because}; give its value in [constants]"

    def _initialiser(self, location: Location, node: Code) -> Expression | None:
        """The constant that an object's declaration gives it."""
        declared = self.context.declared(location, None)
        if declared is None or declared.value is None:
            return None
        execution = Execution(self.context, declared.unit, declared.function)
        made = execution.declared_value(declared, location, Arithmetic(type=node.type), node.place)
        if made is None or not is_number(made) or self.context.constant(made) is None:
            return None
        return made


def _unchanged(ways: Ways, node: Expression) -> bool:
    return len(ways) == 1 and ways[0] is node


def _undefined(location: Location) -> str:
    return (
        f"{shown(location)} is not defined in the given sources; "
        "define it, or give its value in [constants]"
    )
