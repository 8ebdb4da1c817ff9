"""Where the flow from a reading ends: the places a channel's result is taken from."""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from bitweight.arithmetic.expressions import Code, Expression, walk
from bitweight.firmware.objects import Location
from bitweight.firmware.syntax import Call, Expr, Index, Marked, Member, Name, Operation
from bitweight.places import Place
from bitweight.trace.contexts import Context, shown
from bitweight.trace.machines import Event
from bitweight.trace.memory import is_number
from bitweight.trace.patterns import Constant
from bitweight.trace.runs import Run

_OUTLIVING = frozenset({"object", "register", "pointee", "address"})


@dataclass(frozen=True, slots=True, kw_only=True)
class End:
    """One place where a result may end, its expression still with placeholders.

    `kind` is "object", "return", "local", "macro", "argument" or "call"; `location` is that of an
    object; `run` the run that noted it, if one did.
    """

    kind: str
    result: str
    value: Expression
    place: Place
    function: str
    file: str
    location: Location | None = None
    tree: Call | None = None
    run: Run | None = None


def object_ends(runs: Iterable[Run]) -> Iterator[End]:
    """Everything that the runs leave in objects that outlive them."""
    for run in runs:
        for location, values in (*run.writes.items(), *run.handed.items()):
            if location.root.kind not in _OUTLIVING:
                continue
            place, function = run.stores.get(location, (run.function.key, run.function.name))
            for value in values:
                if is_number(value):
                    yield End(
                        kind="object",
                        result=shown(location),
                        value=value,
                        place=place,
                        function=function,
                        file=run.function.key.file,
                        location=location,
                        run=run,
                    )


def event_ends(runs: Iterable[Run], kinds: frozenset[str]) -> Iterator[End]:
    """Results, arguments, locals and macros that the runs noted."""
    for run in runs:
        for event in run.events:
            if event.kind in kinds:
                yield _of_event(event, run)


def _of_event(event: Event, run: Run) -> End:
    name = event.name
    if event.kind == "argument":
        name = f"argument {event.index} of {event.name}()"
    return End(
        kind=event.kind,
        result=name,
        value=event.value,
        place=event.place,
        function=event.function,
        file=event.file,
        tree=event.tree,
        run=run,
    )


def flow_ends(runs: tuple[Run, ...], context: Context) -> tuple[End, ...]:
    """Every end of the flow: objects that outlive, results and arguments that leave the tree."""
    noted = event_ends(runs, frozenset({"return", "argument"}))
    return (*object_ends(runs), *(end for end in noted if _leaves(end, context)))


def _leaves(end: End, context: Context) -> bool:
    """Whether an argument or result leaves the tree: nobody in it uses the result."""
    if end.kind == "argument" or end.run is None:
        return True
    function = end.run.function
    return end.result == function.name and not any(
        one.identity != function.identity and function.name in one.mentions.names
        for one in context.program.all_functions(function.name)
    )


def consumed(ends: Iterable[End], context: Context) -> frozenset[Location]:
    """Objects whose value goes on into another end."""
    found: set[Location] = set()
    for end in ends:
        for node in walk(end.value):
            known = context.inputs.get(id(node)) if isinstance(node, Code) else None
            if known is not None and known.location is not None and known.location != end.location:
                found.add(known.location)
    return frozenset(found)


def wanted_ends(
    runs: tuple[Run, ...], tree: Expr, names: tuple[str | int, ...] | None
) -> tuple[End, ...]:
    """The ends that a `value` expression of the board file names; `names` is its path."""
    if isinstance(tree, Call):
        return tuple(
            end
            for end in event_ends(runs, frozenset({"call"}))
            if end.tree is not None and _same_call(tree, end.tree)
        )
    if names is None:
        return ()
    found = [end for end in object_ends(runs) if end.location and _names(end.location, names)]
    if len(names) == 1:
        wanted = str(names[0])
        for end in event_ends(runs, frozenset({"return", "macro", "local"})):
            if end.result == wanted or (
                end.kind == "local" and end.result.startswith((wanted + "[", wanted + "."))
            ):
                found.append(end)
    else:
        text = _joined(names)
        found += [end for end in event_ends(runs, frozenset({"local"})) if end.result == text]
    return tuple(found)


def _joined(names: tuple[str | int, ...]) -> str:
    text = str(names[0])
    for step in names[1:]:
        text += f"[{step}]" if isinstance(step, int) else f".{step}"
    return text


def _names(location: Location, names: tuple[str | int, ...]) -> bool:
    """Whether a location is the one named, or a part of it, or a member of that name."""
    whole: tuple[str | int, ...] = (location.root.name, *location.path)
    if whole[: len(names)] == names:
        return True
    members = tuple(step for step in whole if isinstance(step, str))
    if len(names) == 1:
        return names[0] in members[1:]
    if location.root.kind == "pointee" or len(names) < len(whole):
        return whole[-len(names) + 1 :] == names[1:] and (
            location.root.kind == "pointee" or whole[-len(names) :] == names
        )
    return False


def path_of(tree: Expr, constant: Constant) -> tuple[str | int, ...] | None:
    """Names and constant subscripts of an object expression."""
    match tree:
        case Name():
            return (tree.text,)
        case Marked():
            return path_of(tree.operand, constant)
        case Member():
            below = path_of(tree.base, constant)
            return (*below, tree.name) if below is not None else None
        case Index():
            below = path_of(tree.base, constant)
            step = constant(tree.index)
            return (*below, step) if below is not None and isinstance(step, int) else None
        case Operation(operator="*"):
            return path_of(tree.operand, constant)
        case _:
            return None


def _same_call(wanted: Call, given: Call) -> bool:
    return (
        isinstance(wanted.function, Name)
        and isinstance(given.function, Name)
        and wanted.function.text == given.function.text
        and len(wanted.arguments) == len(given.arguments)
    )
