"""What configuration code selects, as a family's data says: reference, justification, input.

Registers are decoded bit by bit: what a write leaves open, or takes from a parameter, stays open.
"""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Literal,
    Unary,
    Unknown,
    children,
    walk,
)
from bitweight.firmware.objects import Location
from bitweight.firmware.units import Function, Unit
from bitweight.places import Place
from bitweight.trace.contexts import Context
from bitweight.trace.execution import Execution
from bitweight.trace.families import Family, RegisterField
from bitweight.trace.formulas import formula
from bitweight.trace.memory import is_number
from bitweight.trace.patterns import parsed
from bitweight.trace.resolution import Resolver
from bitweight.trace.runs import Run, Runner

_WORD = (1 << 64) - 1


@dataclass(frozen=True, slots=True, kw_only=True)
class Setting:
    """One selection that configuration code makes.

    `subject` is what is selected ("reference", "justification", "input"); `value` the selection in
    the family's words ("supply", "external", "internal", "left", "3"); `text` is the code;
    `caution` the data sheet's hazard of a wrong selection; `target` the register. `channels` are
    those for whose reading the setting was seen to hold; empty where it is made for all.
    """

    subject: str
    value: str
    text: str
    place: Place
    target: str
    caution: str | None = None
    channels: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Bits:
    """What is known of a register: `value` in the bits of `known`, the rest open."""

    known: int
    value: int


_OPEN = Bits(0, 0)


def known_bits(root: Expression, context: Context) -> Bits:
    """The bits of an expression that do not depend on anything open."""
    found: dict[int, Bits] = {}
    for node in walk(root):
        found[id(node)] = _bits(node, [found[id(child)] for child in children(node)], context)
    return found[id(root)]


def _bits(node: Expression, below: list[Bits], context: Context) -> Bits:
    fixed = context.constant(node)
    if isinstance(fixed, int):
        return Bits(_WORD, fixed & _WORD)
    match node:
        case Convert():
            mask = (1 << node.type.bits) - 1 if node.type.is_integer else 0
            return Bits(below[0].known & mask | _WORD & ~mask, below[0].value & mask)
        case Default():
            return below[0]
        case Unary(operator="~"):
            return Bits(below[0].known, ~below[0].value & below[0].known)
        case Binary():
            return _combined(node.operator, *below)
        case Literal() | Code() | Unknown() | Unary() | Choose():
            return _OPEN


def _combined(operator: str, left: Bits, right: Bits) -> Bits:
    ones = left.value & left.known, right.value & right.known
    zeros = ~left.value & left.known, ~right.value & right.known
    match operator:
        case "|":
            one, zero = ones[0] | ones[1], zeros[0] & zeros[1]
        case "&":
            one, zero = ones[0] & ones[1], zeros[0] | zeros[1]
        case "^":
            both = left.known & right.known
            return Bits(both, (left.value ^ right.value) & both)
        case "<<" if right.known == _WORD and right.value < 64:
            low = (1 << right.value) - 1
            return Bits(
                (left.known << right.value | low) & _WORD, left.value << right.value & _WORD
            )
        case "+" if not (_WORD & ~(zeros[0] | zeros[1])):
            # No bit is set on both sides: nothing carries, + is |.
            return _combined("|", left, right)
        case _:
            return _OPEN
    return Bits(one | zero, one)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Register:
    """A register of a family as one unit names it."""

    name: str
    location: Location


def collect(
    context: Context, runner: Runner, resolver: Resolver, families: Iterable[Family]
) -> tuple[Setting, ...]:
    """Every selection that the configuration code of the tree makes, each once, by place."""
    found: dict[tuple[Place, str, str, tuple[str, ...]], Setting] = {}
    for family in families:
        for register in sorted({one.register for one in family.fields}):
            fields = [one for one in family.fields if one.register == register]
            for setting in _of_register(context, runner, resolver, register, fields):
                key = (setting.place, setting.subject, setting.value, setting.channels)
                found.setdefault(key, setting)
    return tuple(found[key] for key in sorted(found))


def _of_register(
    context: Context,
    runner: Runner,
    resolver: Resolver,
    register: str,
    fields: list[RegisterField],
) -> Iterator[Setting]:
    program = context.program
    program.load(register)
    functions: dict[tuple[Place, str], tuple[Function, Location]] = {}
    for unit in tuple(program.units.values()):
        location = _location(context, unit, register)
        if location is None:
            continue
        for one in unit.functions.values():
            if _mentions(one, register, unit):
                functions.setdefault(one.identity, (one, location))
    for key in sorted(functions):
        function, location = functions[key]
        yield from _written(context, runner.run(function), location, fields)
    for run in runner.runs:
        yield from _read(context, resolver, run, register, fields)


def _location(context: Context, unit: Unit, register: str) -> Location | None:
    tree = parsed(register, unit)
    found = Execution(context, unit).lvalue(tree) if tree is not None else None
    return found[0] if found is not None else None


def _mentions(function: Function, register: str, unit: Unit) -> bool:
    if register in function.mentions.names:
        return True
    start, end = function.syntax.body_start, function.syntax.end
    return any(
        use.name == register and start <= use.start < end for use in unit.translation.invocations
    )


def _written(
    context: Context, run: Run, location: Location, fields: list[RegisterField]
) -> Iterator[Setting]:
    """Selections that a function leaves in the register, inputs aside."""
    place = run.stores.get(location, (run.function.key, ""))[0]
    for value in run.writes.get(location, ()):
        if not is_number(value):
            continue
        bits = known_bits(value, context)
        for one in fields:
            if one.subject != "input":
                yield from _selected(one, bits, formula(value), place, ())


def _read(
    context: Context, resolver: Resolver, run: Run, register: str, fields: list[RegisterField]
) -> Iterator[Setting]:
    """What the register holds where a reading is taken, as far as one way only leads there."""
    for event in run.events:
        if event.kind != "register" or event.name != register:
            continue
        ways = resolver.alternatives(event.value)
        if len(ways) != 1:
            continue
        bits = known_bits(ways[0], context)
        for one in fields:
            yield from _selected(one, bits, formula(ways[0]), event.place, event.channels)


def _selected(
    one: RegisterField, bits: Bits, text: str, place: Place, channels: tuple[str, ...]
) -> Iterator[Setting]:
    if bits.known & one.mask != one.mask:
        return
    number = (bits.value & one.mask) >> one.shift
    value = one.choices.get(number) if one.choices else str(number)
    if value is None:
        return
    yield Setting(
        subject=one.subject,
        value=value,
        text=f"{one.register} = {text}",
        place=place,
        target=one.register,
        caution=one.caution,
        channels=channels,
    )
