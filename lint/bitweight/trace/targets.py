"""Where a channel's result is taken from: the ends its `value` names, or all of the flow."""

from collections.abc import Callable, Iterator
from dataclasses import dataclass

from bitweight.arithmetic.expressions import Code
from bitweight.firmware.syntax import Expr, Name
from bitweight.firmware.units import Unit
from bitweight.places import Place
from bitweight.trace.contexts import Context, Reading
from bitweight.trace.ends import End, flow_ends, path_of, wanted_ends
from bitweight.trace.execution import Execution
from bitweight.trace.memory import is_number
from bitweight.trace.patterns import CODE, Pattern, excerpt, matches, parsed
from bitweight.trace.runs import Run


@dataclass(frozen=True, slots=True, kw_only=True)
class Aim:
    """What is asked of one channel: its readings, and where its result ends (none: every end)."""

    channel: str
    readings: tuple[Reading, ...]
    values: tuple[Pattern, ...]
    place: Place


def ends_of(
    aim: Aim, runs: tuple[Run, ...], context: Context, reached: Callable[[End], bool]
) -> tuple[End, ...]:
    """The ends of one channel; `reached` says whether a reading goes into an end."""
    if not aim.values:
        return flow_ends(runs, context)
    return tuple(end for value in aim.values for end in _named(aim, value, runs, context, reached))


def _named(
    aim: Aim,
    value: Pattern,
    runs: tuple[Run, ...],
    context: Context,
    reached: Callable[[End], bool],
) -> Iterator[End]:
    found = {
        id(end.value): end for end in _candidates(value, runs, context) if _allowed(end, value)
    }
    ends = [end for end in found.values() if _arguments_match(end, value, context)]
    yield from ends
    if not any(map(reached, ends)):
        yield from _as_written(aim, value, context)


def _candidates(value: Pattern, runs: tuple[Run, ...], context: Context) -> Iterator[End]:
    """The ends that a `value` may mean, as the units read its text."""
    # Most units read the text alike: what they ask for is looked up once.
    asked = set[tuple[Expr, tuple[str | int, ...] | None]]()
    for unit in tuple(context.program.units.values()):
        tree = parsed(value.text, unit)
        if tree is None:
            continue
        path = path_of(tree, Execution(context, unit).plain_constant)
        if (tree, path) not in asked:
            asked.add((tree, path))
            yield from wanted_ends(runs, tree, path)
    if "(" not in value.text:
        # A macro is gone after expansion: its uses are known by its name.
        plain = Name(start=0, end=0, text=value.text.strip())
        yield from (end for end in wanted_ends(runs, plain, (plain.text,)) if end.kind == "macro")


def _allowed(end: End, value: Pattern) -> bool:
    """Whether an end lies in the function or file that a `value` is limited to."""
    where = value.where
    return where is None or where in (end.function, end.file) or end.file.endswith("/" + where)


def _arguments_match(end: End, value: Pattern, context: Context) -> bool:
    """Whether an end that is a call has the arguments asked for."""
    if end.tree is None or end.run is None:
        return True
    unit = end.run.function.unit
    tree = parsed(value.text, unit)
    constant = Execution(context, unit).plain_constant
    return tree is not None and matches(tree, end.tree, constant, constant)


# --- a value that no run reaches -----------------------------------------------------------------


def _as_written(aim: Aim, value: Pattern, context: Context) -> Iterator[End]:
    """A macro or call evaluated as if it stood behind the reading."""
    name = value.text.split("(")[0].strip()
    if not name.isidentifier():
        return
    for unit in tuple(context.program.units.values()):
        place = _defined_at(name, unit)
        end = _evaluated(aim, value, unit, place, context) if place is not None else None
        if end is not None:
            yield end
            return


def _defined_at(name: str, unit: Unit) -> Place | None:
    """Where a unit defines the macro or function of a name."""
    macro = unit.translation.macros.at(len(unit.translation.text)).get(name)
    if macro is not None:
        return macro.place
    return unit.functions[name].key if name in unit.functions else None


def _evaluated(aim: Aim, value: Pattern, unit: Unit, place: Place, context: Context) -> End | None:
    text = excerpt(value.text, unit)
    tree = text.parser.expression()
    if tree is None or isinstance(tree, Name):
        return None
    execution = Execution(context, text)
    if "$code" in value.text:
        first = aim.readings[0]
        code = Code(channels=first.channels, text="code", type=first.type, place=aim.place)
        execution.bind(CODE, code)
    result = execution.value(tree)
    if not is_number(result):
        return None
    return End(
        kind="macro",
        result=value.text,
        value=result,
        place=place,
        function="",
        file=unit.path,
    )
