"""The limit constants that the board file names, as the firmware has them."""

from collections.abc import Iterable
from dataclasses import dataclass

from bitweight.arithmetic.expressions import Expression, Leaf, Literal, walk
from bitweight.errors import LimitReached
from bitweight.firmware.units import Unit
from bitweight.places import Place
from bitweight.trace.contexts import Context
from bitweight.trace.execution import Execution
from bitweight.trace.memory import is_number
from bitweight.trace.patterns import Pattern, excerpt
from bitweight.trace.resolution import Resolver


@dataclass(frozen=True, slots=True, kw_only=True)
class Threshold:
    """One `[[channel.NAME.limit]]` with the value its constant has in the code.

    `value` is None where the constant could not be evaluated; `reason` then says why.
    `leaf` is the constant's spelling where it is a single one; `place` where its definition stands.
    """

    channel: str
    name: str
    text: str
    value: int | float | None
    leaf: Leaf | None
    place: Place | None
    reason: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class LimitAim:
    """A limit of the board file: the expression that stands for it."""

    channel: str
    name: str
    pattern: Pattern


def collect(
    context: Context, resolver: Resolver, limits: Iterable[LimitAim]
) -> tuple[Threshold, ...]:
    """The value of each limit's constant."""
    return tuple(_threshold(context, resolver, one) for one in limits)


def _threshold(context: Context, resolver: Resolver, aim: LimitAim) -> Threshold:
    program = context.program
    for name in sorted(aim.pattern.names):
        program.load(name)
    reason = f"{aim.pattern.text} is not found in the code"
    for unit in tuple(program.units.values()):
        if not aim.pattern.applies(None, unit):
            continue
        expression = _evaluated(context, unit, aim.pattern)
        if expression is None:
            continue
        ways = resolver.alternatives(expression)
        value = context.constant(ways[0]) if len(ways) == 1 else None
        if value is None:
            reason = f"{aim.pattern.text} is not a constant in the code"
            continue
        leaves = [node.leaf for node in walk(ways[0]) if isinstance(node, Literal) and node.leaf]
        leaf = leaves[0] if len(leaves) == 1 else None
        place = leaf.place if leaf else _definition(unit, aim.pattern)
        return Threshold(
            channel=aim.channel,
            name=aim.name,
            text=aim.pattern.text,
            value=value,
            leaf=leaf,
            place=place or (leaves[0].place if leaves else None),
        )
    return Threshold(
        channel=aim.channel,
        name=aim.name,
        text=aim.pattern.text,
        value=None,
        leaf=None,
        place=None,
        reason=reason,
    )


def _evaluated(context: Context, unit: Unit, pattern: Pattern) -> Expression | None:
    text = excerpt(pattern.text, unit)
    tree = text.parser.expression()
    if tree is None:
        return None
    try:
        value = Execution(context, text).value(tree)
    except LimitReached:
        return None
    return value if is_number(value) else None


def _definition(unit: Unit, pattern: Pattern) -> Place | None:
    macro = unit.translation.macros.at(len(unit.translation.text)).get(pattern.text)
    if macro is not None:
        return macro.place
    variable = unit.variables.get(pattern.text)
    return variable.key if variable is not None else None
