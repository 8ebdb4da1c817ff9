"""Statements in sequence, and forks: both ways are followed and joined."""

from collections.abc import Sequence
from dataclasses import replace

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Expression
from bitweight.errors import LimitReached
from bitweight.firmware.syntax import Block, Case, Expr, If, Label, Node, Stmt, Switch
from bitweight.trace.calls import Calls
from bitweight.trace.exits import Exit, Flow
from bitweight.trace.memory import State


class Branches(Calls):
    """Follows blocks, `if` and `switch`."""

    def scoped(self, items: Sequence[Stmt]) -> Flow:
        """Statements in a scope of their own."""
        self.frame.scopes.append({})
        try:
            return self.sequence(items)
        finally:
            self.frame.scopes.pop()

    def sequence(self, items: Sequence[Stmt]) -> Flow:
        """Statements one after the other, as far as they fall through."""
        exits: list[Exit] = []
        following: State | None = self.state
        for item in items:
            if isinstance(item, Label):
                arriving = [one for one in exits if one.label == item.name]
                exits = [one for one in exits if one.label != item.name]
                following = self.behind(arriving, following, item)
            if following is None:
                if not any(one.label for one in exits):
                    break
                continue
            self.state = following
            flow = self.flow(item)
            exits.extend(flow.exits)
            following = flow.next
        return Flow(next=following, exits=tuple(exits))

    def behind(self, arriving: Sequence[Exit], following: State | None, node: Node) -> State | None:
        """The state where exits lead to, and what falls through arrives as well."""
        for one in reversed(arriving):
            if following is None or one.condition is None:
                following = one.state
            else:
                following = self.join(one.condition, one.state, following, node)
        return following

    def branch(self, node: If) -> Flow:
        """`if` and `else`."""
        condition = self.decision(node.condition)
        known = self.context.constant(condition)
        if known is not None:
            return self._arm(node.then if known else node.other)
        before = self.state.copy()
        then = self.flow(node.then)
        self.state = before
        return self._fork(condition, then, self._arm(node.other), node)

    def _arm(self, node: Stmt | None) -> Flow:
        return self.flow(node) if node is not None else Flow(next=self.state)

    def _fork(self, condition: Expression, then: Flow, other: Flow, node: Node) -> Flow:
        exits = [self._only_if(condition, one, node) for one in then.exits]
        if other.exits:
            opposite = building.unary(self.model, "!", condition, self.used(node))
            exits += [self._only_if(opposite, one, node) for one in other.exits]
        if then.next is None or other.next is None:
            following = other.next if then.next is None else then.next
        else:
            following = self.join(condition, then.next, other.next, node)
        return Flow(next=following, exits=tuple(exits))

    def _only_if(self, condition: Expression, one: Exit, node: Node) -> Exit:
        if one.condition is not None:
            place = self.used(node)
            condition = building.binary(self.model, "&&", condition, one.condition, place)
        return replace(one, condition=condition)

    def left(self, flow: Flow, node: Node, kind: str = "break") -> Flow:
        """A flow whose exits of this kind lead behind the statement."""
        inner = [one for one in flow.exits if one.kind == kind]
        outer = tuple(one for one in flow.exits if one.kind != kind)
        return Flow(next=self.behind(inner, flow.next, node), exits=outer)

    # --- switch ---------------------------------------------------------------------------------

    def switch(self, node: Switch) -> Flow:
        """`switch`: the case that a constant selects, or every case by its own condition."""
        subject = self.number(node.subject)
        items = node.body.items if isinstance(node.body, Block) else (node.body,)
        cases = [(index, one) for index, one in enumerate(items) if isinstance(one, Case)]
        most = self.context.limits.forks
        if len(cases) > most:
            line = self.used(node).line
            raise LimitReached(f"the switch at line {line} has more than {most} cases")
        known = self.context.constant(subject)
        if known is None or not self._all_constant(cases):
            return self._either(subject, cases, items, node)
        chosen = self._chosen(known, cases)
        if chosen is None:
            return Flow(next=self.state)
        return self.left(self.scoped(items[chosen:]), node)

    def _all_constant(self, cases: list[tuple[int, Case]]) -> bool:
        labels = [label for _, one in cases for label in (one.value, one.last)]
        return all(self.fixed(self.number(label)) is not None for label in labels if label)

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
        flow = Flow(next=self.state)
        if default is not None:
            flow = self.left(self.scoped(items[default:]), node)
        for index, one in reversed(cases):
            if one.value is None:
                continue
            self.state = start.copy()
            condition = self._in_case(subject, one.value, one)
            taken = self.left(self.scoped(items[index:]), node)
            flow = self._fork(condition, taken, flow, node)
        return flow

    def _in_case(self, subject: Expression, value: Expr, one: Case) -> Expression:
        place = self.used(one)
        low = self.number(value)
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
