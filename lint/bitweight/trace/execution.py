"""C statements and calls, followed within one run."""

from collections.abc import Mapping
from types import MappingProxyType

from bitweight.firmware.objects import Arithmetic, Array, FunctionType, Location, ObjectType, Root
from bitweight.firmware.syntax import (
    Block,
    Case,
    Declarator,
    Declare,
    Evaluate,
    Expr,
    If,
    Jump,
    Label,
    Loop,
    Node,
    Opaque,
    Return,
    Stmt,
    Switch,
)
from bitweight.firmware.units import Function
from bitweight.trace.contexts import Declared
from bitweight.trace.exits import Exit, ExitKind, Flow
from bitweight.trace.loops import Loops
from bitweight.trace.memory import State, Value, value_type

_NOWHERE = Node(start=0, end=0)
_KINDS: Mapping[str, ExitKind] = MappingProxyType({"break": "break", "continue": "continue"})
"""Jumps that stay within a statement; any other is a goto."""


class Execution(Loops):
    """Follows statements; everything below is added by the classes it is built on."""

    def bind(self, name: str, value: Value) -> None:
        """Give a name a value for what is evaluated next."""
        location = Location(Root("local", name, "given"))
        type_ = Arithmetic(type=self.as_number(value, _NOWHERE).type)
        self.frame.scopes[0][name] = (location, type_)
        self.state.write(location, value)

    def flow(self, node: Stmt) -> Flow:
        """What a statement does."""
        self.spend()
        match node:
            case Block():
                return self.scoped(node.items)
            case Declare():
                self.unit.learn(node.specifiers)
                for one in node.declarators:
                    self._declare(one)
                return Flow(next=self.state)
            case Evaluate():
                self.value(node.expression)
                return Flow(next=self.state)
            case If():
                return self.branch(node)
            case Loop():
                return self.loop(node)
            case Switch():
                return self.switch(node)
            case Case():
                return self.sequence(node.items)
            case Return():
                value = self.value(node.value) if node.value is not None else None
                return _exit("return", self.state, node, value)
            case Jump():
                return _exit(_KINDS.get(node.kind, "goto"), self.state, node, label=node.label)
            case Label():
                return self.flow(node.body)
            case Opaque():
                self.lose(node)
                return Flow(next=self.state)

    def block_value(self, items: tuple[Stmt, ...], node: Node) -> Value:
        """The value of a GNU statement expression: that of its last statement."""
        if not items:
            return self.unknown("a statement without a value", node)
        *first, last = items
        self.frame.scopes.append({})
        try:
            flow = self.sequence(first)
            if flow.exits or flow.next is None or not isinstance(last, Evaluate):
                self.state = flow.next if flow.next is not None else self.state
                return self.unknown("a statement expression of this form is not followed", node)
            self.state = flow.next
            return self.value(last.expression)
        finally:
            self.frame.scopes.pop()

    # --- declarations ---------------------------------------------------------------------------

    def _declare(self, one: Declarator) -> None:
        storage = one.type.specifiers.storage
        if "extern" in storage or not one.name:
            return
        if one.value is not None and one.type.specifiers.words == ("__auto_type",):
            self._declare_like(one, one.value)
            return
        type_ = self.resolved(one.type)
        if isinstance(type_, FunctionType):
            return
        if isinstance(type_, Array) and one.value is not None:
            type_ = self.counted(type_, one.value, self.unit)
        function = self.frame.function
        if "static" in storage and function is not None:
            self._declare_static(one, type_, function)
            return
        location = Location(Root("local", one.name, self.frame.scope_of(one.start)))
        self.frame.scopes[-1][one.name] = (location, type_)
        for known in [loc for loc in self.state.values if loc.root == location.root]:
            del self.state.values[known]
        if one.value is not None:
            self.fill(location, type_, one.value)

    def _declare_like(self, one: Declarator, initialiser: Expr) -> None:
        """`__auto_type`: the type is that of the initialiser."""
        value = self.value(initialiser)
        type_ = value_type(value)
        location = Location(Root("local", one.name, self.frame.scope_of(one.start)))
        self.frame.scopes[-1][one.name] = (location, type_)
        self.store(location, type_, value, one)

    def _declare_static(self, one: Declarator, type_: ObjectType, function: Function) -> None:
        root = Root("object", one.name, f"{function.key.file}:{function.name}:{one.start}")
        self.frame.scopes[-1][one.name] = (Location(root), type_)
        self.context.statics.setdefault(
            root,
            Declared(
                name=one.name,
                type=type_,
                written=one.type,
                value=one.value,
                unit=self.unit,
                function=function,
                constant="const" in one.type.specifiers.qualifiers,
                declared_only=False,
                key=self.spelled(one.start),
            ),
        )


def _exit(
    kind: ExitKind, state: State, node: Node, value: Value | None = None, label: str = ""
) -> Flow:
    done = Exit(kind=kind, condition=None, state=state, value=value, node=node, label=label)
    return Flow(next=None, exits=(done,))
