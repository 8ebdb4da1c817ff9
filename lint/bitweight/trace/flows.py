"""From the board's readings through the whole tree: which functions matter, and what they do.

Functions that mention a reading or a wanted result are followed; what their results reach is
followed in turn, until nothing new carries a reading.
"""

import re
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field

from bitweight.arithmetic.expressions import Code, Expression, walk
from bitweight.errors import LimitReached
from bitweight.firmware.mentions import nodes
from bitweight.firmware.objects import Location
from bitweight.firmware.syntax import Call, Member, Name
from bitweight.firmware.units import Function, Unit
from bitweight.limits import Deadline
from bitweight.trace.contexts import Context, Reading
from bitweight.trace.measures import measures
from bitweight.trace.memory import is_number
from bitweight.trace.patterns import ANY, CODE
from bitweight.trace.runs import Run, Runner

_MOST_NAMES = 2_000
_WORD = re.compile(r"[A-Za-z_]\w*")
Progress = Callable[[str, int, int], None]


@dataclass(kw_only=True)
class Flows:
    """The functions that matter for the readings of one board, each followed once."""

    context: Context
    runner: Runner
    deadline: Deadline
    tainted: set[str] = field(default_factory=set)
    _done: set[str] = field(default_factory=set)

    def follow(self, names: Iterable[str], progress: Progress) -> tuple[Run, ...]:
        """Follow everything the names lead to. Raises `LimitReached` when the time is over."""
        pending = sorted(set(names))
        queued = set(pending)
        while pending:
            if self.deadline.passed():
                raise LimitReached("the processor time of one run is used up")
            if len(self._done) > _MOST_NAMES:
                break
            name = pending.pop(0)
            self._done.add(name)
            progress("following", len(self._done), len(self._done) + len(pending))
            for function in self._mentioning(name):
                for found in self._reached(self.runner.run(function)):
                    if found not in queued:
                        queued.add(found)
                        pending.append(found)
        return self.runner.runs

    def start_names(self) -> frozenset[str]:
        """The names in the code that the readings' expressions lead to, macros expanded."""
        program = self.context.program
        found: set[str] = set(self.context.results)
        for reading in self.context.readings:
            for name in reading.pattern.names:
                program.load(name)
        for name in self.context.results:
            program.load(name)
        for unit in tuple(program.units.values()):
            found |= self._unit_names(unit)
        return frozenset(found)

    def _unit_names(self, unit: Unit) -> set[str]:
        found: set[str] = set()
        for some in self.context.wanted(unit).values():
            for wanted in some:
                if not isinstance(wanted.source, Reading):
                    continue
                if wanted.source.pattern.where is not None:
                    found.add(wanted.source.pattern.where)
                tree = wanted.tree
                if isinstance(tree, Call) and isinstance(tree.function, Name):
                    found.add(tree.function.text)
                    continue
                for node in nodes(tree):
                    if isinstance(node, Name):
                        found.add(node.text)
                    elif isinstance(node, Member):
                        found.add(node.name)
        return {name for name in found if name not in (ANY, CODE) and _WORD.fullmatch(name)}

    def _mentioning(self, name: str) -> tuple[Function, ...]:
        """Functions that mention a name, use the macro of that name, or bear it."""
        program = self.context.program
        found = {one.identity: one for one in program.all_functions(name)}
        for one in program.defining(name):
            found.setdefault(one.identity, one)
        for unit in program.units.values():
            if name in unit.functions:
                found.setdefault(unit.functions[name].identity, unit.functions[name])
            for use in unit.translation.invocations if name in self.context.results else ():
                if use.name != name:
                    continue
                for one in unit.functions.values():
                    if one.syntax.body_start <= use.start < one.syntax.end:
                        found.setdefault(one.identity, one)
        return tuple(found[key] for key in sorted(found))

    # --- what a run reaches ------------------------------------------------------------------

    def _reached(self, run: Run) -> set[str]:
        """Names through which readings leave the function."""
        found: set[str] = set()
        own = run.function.name
        if run.near:
            found.add(own)
        for location, values in run.writes.items():
            if any(is_number(value) and self.carries(value) for value in values):
                found.add(self._outlet(location, own))
        for event in run.events:
            if event.kind == "return" and event.name == own and self.carries(event.value):
                found.add(own)
        fresh = {name for name in found if name not in self.tainted}
        self.tainted |= found
        return fresh

    @staticmethod
    def _outlet(location: Location, own: str) -> str:
        return location.root.name if location.root.kind in ("object", "register") else own

    def carries(self, value: Expression) -> bool:
        """Whether a value is made from a reading, or from an object that holds one."""
        marks = {
            id(node): frozenset({known.location.root.name})
            for node in walk(value)
            if isinstance(node, Code)
            and (known := self.context.inputs.get(id(node))) is not None
            and known.location is not None
            and known.location.root.name in self.tainted
        }
        return bool(measures(value, marks))
