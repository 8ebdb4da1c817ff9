"""All of tracing: the board's channels enter, a `Trace` for each leaves."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from bitweight.arithmetic.expressions import (
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Unknown,
    walk,
)
from bitweight.errors import LimitReached
from bitweight.limits import Deadline
from bitweight.trace.absences import nowhere
from bitweight.trace.contexts import Context
from bitweight.trace.conversions import Conversion, Step, Trace
from bitweight.trace.declared import declared_place
from bitweight.trace.ends import End, consumed
from bitweight.trace.flows import Flows, Progress
from bitweight.trace.formulas import formula
from bitweight.trace.resolution import Resolver, Ways
from bitweight.trace.runs import Run, Runner
from bitweight.trace.steps import steps
from bitweight.trace.structures import structure
from bitweight.trace.targets import Aim as Aim
from bitweight.trace.targets import ends_of

_Found = tuple[End, Expression]
"""An end with one closed expression of what it holds."""


@dataclass(kw_only=True)
class Tracer:
    """Follows the readings of a board through its firmware."""

    context: Context
    deadline: Deadline
    runner: Runner = field(init=False)
    resolver: Resolver = field(init=False)
    runs: tuple[Run, ...] = ()

    def __post_init__(self) -> None:
        self.runner = Runner(context=self.context)
        self.resolver = Resolver(context=self.context, runner=self.runner)

    def trace(self, aims: Iterable[Aim], progress: Progress) -> tuple[Trace, ...]:
        """A trace for each aim, in order."""
        flows = Flows(context=self.context, runner=self.runner, deadline=self.deadline)
        self.runs = flows.follow(flows.start_names(), progress)
        return tuple(self._traced(aim) for aim in aims)

    def _traced(self, aim: Aim) -> Trace:
        if not aim.readings:
            return Trace(
                channel=aim.channel,
                reason="no reading is given: say which C expression yields the raw code",
            )
        try:
            ends = ends_of(aim, self.runs, self.context, lambda end: bool(self._ways(end)))
            return self._judged(aim, ends)
        except (LimitReached, RecursionError) as reached:
            reason = str(reached) or "the code nests too deeply to be followed"
            return Trace(channel=aim.channel, reason=reason)

    # --- what each end computes ---------------------------------------------------------------

    def _ways(self, end: End) -> Ways:
        """The closed expressions of an end that are made from a reading."""
        if end.run is not None and self._waits(end, end.run):
            # The callers are followed with what they give.
            return ()
        return tuple(
            way
            for way in self.resolver.written_to(end.location, end.value)
            if self.resolver.measures(way)
        )

    def _waits(self, end: End, run: Run) -> bool:
        """Whether a value hangs on a parameter of its own function, which something calls."""
        function = run.function
        return self.resolver.writings.waits_for(end.value, function) and any(
            one.identity != function.identity and function.name in one.mentions.calls
            for one in self.context.program.all_functions(function.name)
        )

    def _judged(self, aim: Aim, ends: tuple[End, ...]) -> Trace:
        carrying: list[_Found] = []
        foreign: list[_Found] = []
        for end in ends:
            ways = self._ways(end)
            own = [way for way in ways if aim.channel in self.resolver.measures(way)]
            if len(own) > 1 and not any(isinstance(way, Unknown) for way in own):
                # Two readings of one channel (the halves of a buffer) are one way.
                own = [*{structure(way, aim.channel): way for way in reversed(own)}.values()][::-1]
            if len(own) > 1 and not any(isinstance(way, Unknown) for way in own):
                reason = _several(end, own)
                return Trace(channel=aim.channel, reason=reason, place=end.place)
            carrying.extend((end, way) for way in own)
            if not own:
                foreign.extend((end, way) for way in ways)
        forks = self.context.limits.forks
        for end, way in carrying:
            if sum(isinstance(node, Choose) for node in walk(way)) > forks:
                reason = f"{end.result} depends on more than {forks} conditions"
                return Trace(channel=aim.channel, reason=reason, place=end.place)
        changed = self._changed_again(carrying, ends)
        if changed is not None:
            return Trace(channel=aim.channel, reason=changed.reason, place=changed.place)
        last = carrying if aim.values else self._last(carrying)
        for end, way in last:
            if isinstance(way, Unknown):
                # A way that is not understood may be the wrong one. An unknown that only some
                # codes reach is left to the judge.
                place = way.place or end.place
                return Trace(channel=aim.channel, reason=way.reason, place=place)
        if not last and aim.values:
            last = foreign
        if not last:
            return self._nothing(aim, ends)
        made: dict[str, Conversion] = {}
        for end, way in last:
            made.setdefault(structure(way), self._conversion(aim, end, way))
        return Trace(channel=aim.channel, conversions=tuple(made.values()))

    def _changed_again(self, carrying: Sequence[_Found], ends: Iterable[End]) -> Unknown | None:
        """Why a result is not what was found: another function changes what the object holds."""
        results = {end.location for end, _ in carrying if end.location is not None}
        for end in ends:
            if end.location in results and end.location is not None:
                found = self.resolver.feeds_back(end.location, end.value)
                if found is not None:
                    return found
        return None

    def _last(self, carrying: Sequence[_Found]) -> Sequence[_Found]:
        """Without a stated value: ends whose flow goes no further, bare copies left out."""
        going_on = consumed((end for end, _ in carrying), self.context)
        last = [(end, way) for end, way in carrying if end.location not in going_on] or carrying
        roots = {id(end.value) for end, _ in last if end.kind != "argument"}
        kept = [
            (end, way)
            for end, way in last
            if end.kind != "argument" or not any(id(node) in roots for node in walk(end.value))
        ]
        scaled = [(end, way) for end, way in kept if not _is_bare(way)]
        return scaled or kept

    def _conversion(self, aim: Aim, end: End, way: Expression) -> Conversion:
        nodes = list(walk(way))
        defaults = {node.name: node.place for node in nodes if isinstance(node, Default)}
        return Conversion(
            channel=aim.channel,
            result=end.result,
            expression=way,
            place=end.place,
            function=end.function,
            formula=formula(way),
            steps=steps(nodes, end.result, end.place),
            assumed=tuple(
                Step(
                    place=place,
                    message=f"{name} is judged at its declared value, "
                    "which the program may overwrite",
                )
                for name, place in defaults.items()
            ),
            other_readings=tuple(sorted(self.resolver.measures(way) - {aim.channel})),
            declared=declared_place(self.context, end.location) if end.location else None,
        )

    # --- nothing found ------------------------------------------------------------------------

    def _nothing(self, aim: Aim, ends: tuple[End, ...]) -> Trace:
        texts = ", ".join(reading.pattern.text for reading in aim.readings)
        seen = self.context.seen.get(aim.channel)
        limit = next((run.reason for run in self.runs if run.reason), None)
        if seen is None:
            reason, place = nowhere(self.context, aim.readings, self.runs)
            return Trace(channel=aim.channel, reason=reason, place=place)
        for end in ends if aim.values else ():
            for way in self.resolver.alternatives(end.value):
                unknown = _unknown_in(way)
                if unknown is not None:
                    place = unknown.place or seen
                    return Trace(channel=aim.channel, reason=unknown.reason, place=place)
        if limit is not None and not ends:
            return Trace(channel=aim.channel, reason=limit, place=seen)
        what = "nothing that outlives the function is made from it"
        if aim.values:
            wanted = ", ".join(value.text for value in aim.values)
            what = f"{wanted} {'is not computed from it' if ends else 'is not found'}"
        reason = f"the reading {texts} is found, but {what}"
        return Trace(channel=aim.channel, reason=reason, place=seen)


def _several(end: End, ways: list[Expression]) -> str:
    texts = " or ".join(formula(way) for way in ways[:2])
    return f"{end.result} is computed in {len(ways)} ways, decided at run time: {texts}"


def _is_bare(way: Expression) -> bool:
    """Whether an expression only copies the code."""
    return all(isinstance(node, Code | Convert) for node in walk(way))


def _unknown_in(way: Expression) -> Unknown | None:
    """The first thing in an expression that is not followed."""
    return next((node for node in walk(way) if isinstance(node, Unknown)), None)
