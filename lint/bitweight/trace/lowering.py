"""C expressions to typed expressions, within one run.

A C tree and a state enter; a value leaves, the state changed as C says. What is not followed
becomes a placeholder with its reason, so that the structure around it is kept.
"""

import re

from bitweight.firmware.objects import ANYWHERE, Location, ObjectType
from bitweight.firmware.syntax import (
    Assign,
    Braces,
    Call,
    Cast,
    Conditional,
    Expr,
    Increment,
    Index,
    Marked,
    Member,
    Name,
    Number,
    Opaque,
    Operation,
    Pair,
    SizeOf,
    StatementExpr,
    Text,
)
from bitweight.trace.memory import Address, Value, is_number
from bitweight.trace.tables import Tables

_HARMLESS = frozenset({"offsetof expression", "alignof expression", "generic expression"})
"""What is not followed but changes no object."""
_STRING = re.compile(r'"(?:[^"\\\n]|\\.)*"')
_WORD = re.compile(r"[A-Za-z_]\w*")


class Lowering(Tables):
    """Evaluates C expressions. Calls and statements are added by the classes built on this one."""

    def value(self, node: Expr) -> Value:
        """The value of an expression; its side effects happen."""
        self.spend()
        found = self.given(node)
        return found if found is not None else self._evaluated(node)

    def _evaluated(self, node: Expr) -> Value:
        match node:
            case Name():
                return self.name(node)
            case Number():
                return self.context.literal(self.unit, node.start, node.text)
            case Text():
                return self.unknown("a string is not a number", node)
            case Call():
                return self.call(node)
            case Index() | Member():
                return self._part(node)
            case Operation():
                return self.operation(node)
            case Increment():
                return self.increment(node)
            case Pair():
                return self.pair(node)
            case Assign():
                return self.assign(node)
            case Conditional():
                return self.conditional(node)
            case Cast():
                return self.cast(node)
            case SizeOf():
                return self.size_of(node)
            case Braces():
                return self._compound(node)
            case StatementExpr():
                return self.block_value(node.body.items, node)
            case Marked():
                return self._marked(node)
            case Opaque():
                self.lose(node)
                return self.unknown(f"{node.kind} is not followed", node)

    def lose(self, node: Opaque) -> None:
        """Make unknown every object that something not followed mentions."""
        if node.kind in _HARMLESS:
            return
        text = _STRING.sub(" ", self.unit.translation.text[node.start : node.end])
        reason = f"{node.kind} at line {self.used(node).line} is not followed"
        words = dict.fromkeys(_WORD.findall(text))
        if not self.context.reading_names.isdisjoint(words):
            self.doubts.append(reason)
        for word in words:
            location, type_ = self.designated(Name(start=node.start, end=node.end, text=word))
            if location.root.kind != "register" or self.state.holds(location):
                self._lose_object(location, type_, reason, node)

    def _lose_object(
        self, location: Location, type_: ObjectType, reason: str, node: Opaque
    ) -> None:
        held = self.state.values.get(location)
        if isinstance(held, Address):
            self.forget(held.target.plain, self.type_at(held.target.plain), reason, node)
        else:
            self.forget(location, type_, reason, node)

    def _part(self, node: Index | Member) -> Value:
        found = self.lvalue(node)
        if found is None:
            return self.unknown("an expression of this form is not followed", node)
        code = self.located(found[0], node)
        if code is None and ANYWHERE in found[0].path:
            code = self.entry(found, node)
        return code if code is not None else self.read(*found, node)

    def _compound(self, node: Braces) -> Value:
        if node.type is None:
            return self.unknown("a list of values is not a number", node)
        type_ = self.resolved(node.type)
        location = self.fresh("literal")
        self.fill(location, type_, node)
        return self.read(location, type_, node)

    def _marked(self, node: Marked) -> Value:
        result = self.value(node.operand)
        if is_number(result):
            self.note("macro", node.name, result, self.used(node))
        return result
