"""Loops: unrolled where their bounds are constant.

What a loop of unknown length changes is unknown after it. An endless loop counts as one turn of a
steady program.
"""

from bitweight.firmware.mentions import nodes
from bitweight.firmware.objects import Arithmetic, Location
from bitweight.firmware.syntax import Call, Expr, Jump, Loop, Name, Return
from bitweight.trace.branches import Branches
from bitweight.trace.contexts import shown
from bitweight.trace.exits import Exit, Flow
from bitweight.trace.memory import State, is_number

_TURNS_WITH_EXITS = 16
"""Turns of a loop that may leave it by a condition before the loop counts as unbounded."""

_TURNS_OF_ENDLESS = 64
"""Turns in which a loop without an end of its own may leave itself."""
_MOST_ROUNDS = 8
"""How often what one turn changes may change more in the next before that is left at."""


class Loops(Branches):
    """Follows loops."""

    def loop(self, node: Loop) -> Flow:
        """`for`, `while` and `do`."""
        self.frame.scopes.append({})
        try:
            if node.before is not None:
                flow = self.flow(node.before)
                self.state = flow.next if flow.next is not None else self.state
            start, steps = self.state.copy(), self.steps
            events, ends = len(self.events), len(self.turn_ends)
            unrolled = self._unrolled(node, self._most_turns(node))
            if unrolled is not None:
                return unrolled
            self.state, self.steps = start, steps
            del self.events[events:]
            del self.turn_ends[ends:]
            return self._unbounded(node)
        finally:
            self.frame.scopes.pop()

    def _endless(self, condition: Expr | None) -> bool:
        """Whether a loop's condition is a constant that is true, not a variable that is so now."""
        if condition is None:
            return True
        if any(isinstance(node, Call | Name) for node in nodes(condition)):
            return isinstance(condition, Name) and condition.text in ("true", "TRUE")
        return bool(self.plain_constant(condition))

    def _most_turns(self, node: Loop) -> int:
        """Turns after which a loop counts as one of unknown length; none where nothing ends it."""
        if not self._endless(node.condition):
            return self.context.limits.loop_turns + 1
        leaves = any(isinstance(one, Return | Jump) for one in nodes(node.body))
        return _TURNS_OF_ENDLESS if leaves else 0

    def _unrolled(self, node: Loop, turns: int) -> Flow | None:
        """The loop turn by turn while its condition is constant; None where it is not."""
        exits: list[Exit] = []
        test = not node.first
        for turn in range(turns):
            if test and node.condition is not None:
                known = self.fixed(self.decision(node.condition))
                if known is None:
                    return None
                if not known:
                    return self.left(Flow(next=self.state, exits=tuple(exits)), node)
            test = True
            flow = self.left(self.flow(node.body), node, "continue")
            exits.extend(flow.exits)
            if flow.next is None:
                return self.left(Flow(next=None, exits=tuple(exits)), node)
            if exits and turn > _TURNS_WITH_EXITS:
                return None
            self.state = flow.next
            if node.step is not None:
                self.value(node.step)
        return None

    def _unbounded(self, node: Loop) -> Flow:
        """A loop of unknown length: what a turn changes is unknown when the next one starts."""
        start = self.state.copy()
        entered = self._at_a_turn(start, node)
        flow = self._turn(node)
        if self._endless(node.condition):
            if flow.next is not None:
                self.turn_ends.append(flow.next)
            return self.left(Flow(next=None, exits=flow.exits), node)
        following = flow.next
        if not node.first and following is not None and following.values != entered.values:
            turns = self.context.unknown("how often a loop turns", self.used(node))
            following = self.join(turns, following, entered, node)
        elif following is None and not node.first:
            following = entered
        return self.left(Flow(next=following, exits=flow.exits), node)

    def _at_a_turn(self, start: State, node: Loop) -> State:
        """The state when any turn starts: what turns change is unknown, all in all."""
        events, near, ends = len(self.events), self.near, len(self.turn_ends)
        blurred: set[Location] = set()
        for _ in range(_MOST_ROUNDS):
            self._turn(node)
            changed = {
                location
                for location, value in self.state.values.items()
                if start.values.get(location) is not value
            }
            del self.events[events:]
            del self.turn_ends[ends:]
            self.near = near
            self.state = start.copy()
            fresh = changed - blurred
            blurred |= changed
            for location in blurred:
                if location in start.values or location.root.kind != "local":
                    self._blur(location, start, node)
            if not fresh:
                break
        return self.state.copy()

    def _blur(self, location: Location, start: State, node: Loop) -> None:
        """Make unknown what an object holds when a turn starts."""
        known = start.values.get(location)
        if location.root.kind != "local" and self._endless(node.condition):
            # It holds what anything in the program may write, this loop included.
            self.state.values.pop(location, None)
            return
        type_ = self.type_at(location)
        number = type_.type if isinstance(type_, Arithmetic) else None
        if number is None and known is not None and is_number(known):
            number = known.type
        reason = (
            f"{shown(location)} changes from turn to turn of the loop at line "
            f"{self.used(node).line}, whose number of turns is not constant"
        )
        self.state.values[location] = self.context.unknown(reason, self.used(node), number)

    def _turn(self, node: Loop) -> Flow:
        """One turn: test, body, step."""
        if node.condition is not None and not node.first:
            self.decision(node.condition)
        flow = self.left(self.flow(node.body), node, "continue")
        if flow.next is None:
            return flow
        self.state = flow.next
        if node.first and node.condition is not None:
            self.decision(node.condition)
        if node.step is not None:
            self.value(node.step)
        return Flow(next=self.state, exits=flow.exits)
