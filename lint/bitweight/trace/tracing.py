"""All of tracing: the board's channels enter, a `Trace` for each leaves."""

from collections.abc import Iterable
from dataclasses import dataclass, field

from bitweight.arithmetic.expressions import (
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Purpose,
    Unknown,
    walk,
)
from bitweight.errors import LimitReached
from bitweight.firmware.syntax import Expr, Name
from bitweight.limits import Deadline
from bitweight.places import Place
from bitweight.trace.contexts import Context, Reading
from bitweight.trace.conversions import Conversion, Step, Trace
from bitweight.trace.ends import End, consumed, flow_ends, wanted_ends
from bitweight.trace.execution import Execution
from bitweight.trace.flows import Flows, Progress
from bitweight.trace.formulas import formula
from bitweight.trace.memory import is_number
from bitweight.trace.patterns import CODE, Pattern, excerpt, matches, parsed
from bitweight.trace.resolution import Resolver, structure
from bitweight.trace.runs import Run, Runner

_MOST_STEPS = 12


@dataclass(frozen=True, slots=True, kw_only=True)
class Aim:
    """What is asked of one channel: its readings, and where its result ends (none: every end)."""

    channel: str
    readings: tuple[Reading, ...]
    values: tuple[Pattern, ...]
    place: Place


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
            ends = self._ends(aim)
            return self._judged(aim, ends)
        except (LimitReached, RecursionError) as reached:
            reason = str(reached) or "the code nests too deeply to be followed"
            return Trace(channel=aim.channel, reason=reason)

    # --- which ends --------------------------------------------------------------------------

    def _ends(self, aim: Aim) -> tuple[End, ...]:
        if not aim.values:
            return flow_ends(self.runs, self.context)
        found: list[End] = []
        for value in aim.values:
            found.extend(self._named(aim, value))
        return tuple(found)

    def _named(self, aim: Aim, value: Pattern) -> tuple[End, ...]:
        found: dict[int, End] = {}
        tree: Expr | None = None
        for unit in tuple(self.context.program.units.values()):
            tree = parsed(value.text, unit)
            if tree is None:
                continue
            for end in wanted_ends(self.runs, tree):
                if self._allowed(end, value):
                    found[id(end.value)] = end
        # A macro is gone after expansion: its uses are known by its name.
        plain = Name(start=0, end=0, text=value.text.split("(")[0].strip())
        for end in wanted_ends(self.runs, plain):
            if end.kind == "macro" and "(" not in value.text and self._allowed(end, value):
                found[id(end.value)] = end
        ends = self._matching_calls(tuple(found.values()), value)
        if not ends or not any(self._ways(aim, end) for end in ends):
            written = self._as_written(aim, value)
            return (*ends, *written)
        return ends

    @staticmethod
    def _allowed(end: End, value: Pattern) -> bool:
        where = value.where
        if where is None:
            return True
        return end.function == where or end.file == where or end.file.endswith("/" + where)

    def _matching_calls(self, ends: tuple[End, ...], value: Pattern) -> tuple[End, ...]:
        """Of calls, those whose arguments are the ones asked for."""
        kept: list[End] = []
        for end in ends:
            if end.tree is not None:
                unit = end.run.function.unit
                tree = parsed(value.text, unit)
                execution = Execution(self.context, unit)
                constant = execution.plain_constant
                if tree is None or not matches(tree, end.tree, constant, constant):
                    continue
            kept.append(end)
        return tuple(kept)

    def _as_written(self, aim: Aim, value: Pattern) -> tuple[End, ...]:
        """A macro or call evaluated as if it stood behind the reading."""
        name = value.text.split("(")[0].strip()
        if not name.isidentifier():
            return ()
        for unit in tuple(self.context.program.units.values()):
            known = unit.translation.macros.at(len(unit.translation.text)).get(name)
            if known is None and name not in unit.functions:
                continue
            text = excerpt(value.text, unit)
            tree = text.parser.expression()
            if tree is None or (isinstance(tree, Name) and tree.text == name):
                continue
            execution = Execution(self.context, text)
            if CODE in value.text.replace("$code", CODE):
                first = aim.readings[0]
                code = Code(channels=first.channels, text="code", type=first.type, place=aim.place)
                execution.bind(CODE, code)
            result = execution.value(tree)
            if not is_number(result):
                continue
            place = known.place if known is not None else unit.functions[name].key
            run = Run(
                function=next(iter(unit.functions.values())),
                writes={}, stores={}, types={}, events=(), near=False, reason=None,
            ) if unit.functions else None  # fmt: skip
            if run is None:
                continue
            return (
                End(
                    kind="macro", result=value.text, value=result,  # type: ignore[arg-type]
                    place=place, function="", file=unit.path, run=run,
                ),
            )  # fmt: skip
        return ()

    # --- what each end computes ----------------------------------------------------------------

    def _ways(self, aim: Aim, end: End) -> tuple[Expression, ...]:
        """The closed expressions of an end that are made from a reading."""
        waiting = end.run.function
        if any(
            (known := self.context.inputs.get(id(node))) is not None
            and known.kind == "parameter"
            and known.function is waiting
            and self._is_called(end.run)
            for node in walk(end.value)
            if isinstance(node, Code)
        ):
            # The callers are followed with what they give.
            return ()
        return tuple(
            way for way in self.resolver.alternatives(end.value) if self.resolver.measures(way)
        )

    def _is_called(self, run: Run) -> bool:
        name = run.function.name
        return any(
            one.key != run.function.key and name in one.mentions.calls
            for one in self.context.program.all_functions(name)
        )

    def _judged(self, aim: Aim, ends: tuple[End, ...]) -> Trace:
        conversions: dict[str, Conversion] = {}
        reasons: list[tuple[str, Place | None]] = []
        foreign: dict[str, Conversion] = {}
        carrying: list[tuple[End, Expression]] = []
        for end in ends:
            own = [
                way for way in self._ways(aim, end) if aim.channel in self.resolver.measures(way)
            ]
            if len(own) > 1:
                reasons.append((_several(end, own), end.place))
                continue
            carrying.extend((end, way) for way in own)
            if aim.values and not own:
                for way in self._ways(aim, end):
                    made = self._conversion(aim, end, way)
                    foreign.setdefault(structure(way), made)
        for end, way in self._last(aim, carrying):
            unknown = _first_unknown(way)
            if unknown is not None:
                reasons.append((unknown.reason, unknown.place or end.place))
                continue
            made = self._conversion(aim, end, way)
            conversions.setdefault(structure(way), made)
        if reasons:
            # A way that is not understood may be the wrong one.
            reason, place = reasons[0]
            return Trace(channel=aim.channel, reason=reason, place=place)
        if conversions:
            return Trace(channel=aim.channel, conversions=tuple(conversions.values()))
        if foreign:
            return Trace(channel=aim.channel, conversions=tuple(foreign.values()))
        return self._nothing(aim, ends)

    def _last(
        self, aim: Aim, carrying: list[tuple[End, Expression]]
    ) -> list[tuple[End, Expression]]:
        """Without a stated value: ends whose flow goes no further, bare copies left out."""
        if aim.values:
            return carrying
        going_on = consumed((end for end, _ in carrying), self.context)
        last = [(end, way) for end, way in carrying if end.location not in going_on]
        last = last or carrying
        roots = {id(node) for end, _ in last if end.kind != "argument" for node in [end.value]}
        kept = [
            (end, way)
            for end, way in last
            if end.kind != "argument" or not any(id(node) in roots for node in walk(end.value))
        ]
        scaled = [(end, way) for end, way in kept if not _is_bare(way)]
        return scaled or kept

    def _nothing(self, aim: Aim, ends: tuple[End, ...]) -> Trace:
        texts = ", ".join(reading.pattern.text for reading in aim.readings)
        seen = self._readings_seen(aim)
        if not seen:
            near = self._limits_met()
            reason = near or f"the reading {texts} is nowhere in the code that was followed"
            return Trace(channel=aim.channel, reason=reason)
        if aim.values:
            wanted = ", ".join(value.text for value in aim.values)
            what = "is not found" if not ends else "is not computed from it"
            reason = f"the reading {texts} is found, but {wanted} {what}"
        else:
            reason = f"the reading {texts} is found, but nothing that outlives the function is made from it"
        return Trace(channel=aim.channel, reason=reason, place=seen)

    def _limits_met(self) -> str | None:
        return next((run.reason for run in self.runs if run.reason), None)

    def _readings_seen(self, aim: Aim) -> Place | None:
        for run in self.runs:
            values = [value for some in run.writes.values() for value in some]
            values += [event.value for event in run.events]
            for value in values:
                if not is_number(value):
                    continue
                for node in walk(value):  # type: ignore[arg-type]
                    if isinstance(node, Code) and aim.channel in node.channels:
                        return node.place
        return None

    def _conversion(self, aim: Aim, end: End, way: Expression) -> Conversion:
        nodes = list(walk(way))
        others = sorted(self.resolver.measures(way) - {aim.channel})
        return Conversion(
            channel=aim.channel,
            result=end.result,
            expression=way,
            place=end.place,
            function=end.function,
            formula=formula(way),
            steps=_steps(nodes, end),
            assumed=tuple(
                dict.fromkeys(
                    f"{node.name} is judged at its declared value, which the program may overwrite"
                    for node in nodes
                    if isinstance(node, Default)
                )
            ),
            other_readings=tuple(others),
        )


def _several(end: End, ways: list[Expression]) -> str:
    texts = " or ".join(f"{formula(way)}" for way in ways[:2])
    return f"{end.result} is computed in {len(ways)} ways, decided at run time: {texts}"


def _first_unknown(way: Expression) -> Unknown | None:
    return next((node for node in walk(way) if isinstance(node, Unknown)), None)


def _is_bare(way: Expression) -> bool:
    """Whether an expression only copies the code."""
    return all(isinstance(node, Code | Convert) for node in walk(way))


def _steps(nodes: list[Expression], end: End) -> tuple[Step, ...]:
    found: dict[Place, str] = {}
    for node in nodes:
        match node:
            case Code():
                found.setdefault(node.place, f"the code is read: {node.text}")
            case Convert(purpose=Purpose.STORE):
                found.setdefault(node.place, f"stored as {node.type.name}")
            case Convert(purpose=Purpose.ARGUMENT):
                found.setdefault(node.place, f"passed as {node.type.name}")
            case Convert(purpose=Purpose.RETURN):
                found.setdefault(node.place, f"returned as {node.type.name}")
            case Choose():
                found.setdefault(node.place, "decided by a condition")
            case _:
                pass
    found.setdefault(end.place, f"the result: {end.result}")
    steps = [Step(place=place, message=message) for place, message in found.items()]
    return tuple(steps[:_MOST_STEPS])
