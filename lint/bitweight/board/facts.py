"""Every number of a channel's hardware that a constant in the firmware may stand for."""

from collections.abc import Iterator
from dataclasses import dataclass
from enum import Enum
from fractions import Fraction

from bitweight.board.chains import Ideal, SignalChain, ideal, not_computed
from bitweight.board.converters import Coding
from bitweight.board.hardware import Board, Channel, ConstantFact
from bitweight.board.parts import Part, nominal
from bitweight.board.stages import (
    Against,
    Amplifier,
    Divider,
    Linear,
    LowPass,
    Offset,
    Polynomial,
    Rtd,
    Shunt,
    Stage,
    Table,
    Thermistor,
    offset_volts,
)
from bitweight.places import Place
from bitweight.quantities import engineering, spelled
from bitweight.units import OHM, VOLT, Unit, coherent, inverse, product


class Role(Enum):
    """What a constant stands for."""

    FULL_SCALE = "full-scale"
    REFERENCE = "reference"
    RESOLUTION = "resolution"
    DIVIDER = "divider"
    INVERSE_DIVIDER = "inverse divider"
    RESISTANCE = "resistance"
    GAIN = "gain"
    OFFSET = "offset"
    SHUNT = "shunt"
    SENSITIVITY = "sensitivity"
    AT = "at"
    BETA = "beta"
    ZERO_CODE = "zero code"
    STEP = "step"
    SPAN = "span"
    CODE = "code"


_RULES = {
    Role.FULL_SCALE: "full-scale",
    Role.REFERENCE: "reference-value",
    Role.RESOLUTION: "resolution",
    Role.DIVIDER: "divider-ratio",
    Role.INVERSE_DIVIDER: "divider-ratio",
    Role.STEP: "transfer-gain",
    Role.SPAN: "transfer-gain",
}
"""The rule that a wrong constant gives; chain-constant where none stands here."""

_PLAIN = Unit(text="")
_VOLTS = coherent(VOLT)
_OHMS = coherent(OHM)


@dataclass(frozen=True, slots=True, kw_only=True)
class BoardFact:
    """A number of the board. `value` is in the coherent unit; `unit` is how it is shown.

    `name` says it in a sentence ("reference vref", "resistance R12"); `rule` is the rule that
    reports a constant that differs from it; `text` is the value as shown.
    """

    role: Role
    name: str
    value: Fraction
    unit: Unit
    rule: str
    place: Place
    text: str


def chain_facts(channel: Channel) -> tuple[BoardFact, ...]:
    """The facts of a channel, what the board file states first, then what follows from it."""
    facts = list(_converter_facts(channel))
    for position, stage in enumerate(channel.chain):
        facts.extend(_stage_facts(channel, position, stage))
    if not_computed(channel) is None:
        facts.extend(_products(channel))
        facts.extend(_line_facts(ideal(channel)))
    return tuple(facts)


def stands_for(constant: ConstantFact, board: Board, channel: Channel) -> BoardFact | None:
    """The fact that the board file says a constant is, seen from a channel; None where it has none.

    A channel named by the constant ("divider battery") goes before the one it is seen from.
    """
    if constant.role is None:
        return None
    owner = next((other for other in board.channels if other.name == constant.name), None)
    if constant.role == "code":
        return _code_fact(constant, owner or channel)
    if owner is not None or constant.name is None:
        return _first_of(constant.role, chain_facts(owner or channel))
    wanted = f"{constant.role} {constant.name}"
    return next(
        (
            fact
            for other in (channel, *board.channels)
            for fact in chain_facts(other)
            if fact.name == wanted
        ),
        None,
    )


def _first_of(role: str, facts: tuple[BoardFact, ...]) -> BoardFact | None:
    return next((fact for fact in facts if fact.role.value == role), None)


def _code_fact(constant: ConstantFact, owner: Channel) -> BoardFact | None:
    """The ideal code of a quantity, of a channel whose line is known."""
    if constant.at is None or not_computed(owner) or not constant.at.unit.fits(owner.unit):
        return None
    code = ideal(owner).code_of(constant.at.within(owner.unit))
    name = f"code of {owner.name} at {spelled(constant.at)}"
    return _fact(Role.CODE, name, code, _PLAIN, constant.place)


def _fact(
    role: Role, name: str, value: Fraction, unit: Unit, place: Place, rule: str | None = None
) -> BoardFact:
    shown = (value - unit.zero) / unit.scale
    return BoardFact(
        role=role,
        name=name,
        value=value,
        unit=unit,
        rule=rule or _RULES.get(role, "chain-constant"),
        place=place,
        text=engineering(shown, unit, 6),
    )


def _part_fact(role: Role, name: str, part: Part, rule: str | None = None) -> BoardFact:
    return _fact(role, name, nominal(part), part.quantity.unit, part.place, rule)


def _converter_facts(channel: Channel) -> Iterator[BoardFact]:
    converter, reference = channel.converter, channel.converter.reference
    for count in converter.accepted_full_scales:
        name = f"full-scale {converter.name}"
        yield _fact(Role.FULL_SCALE, name, count, _PLAIN, converter.full_scale_place)
    if converter.full_scale != converter.full_scale_counts[0]:
        name = f"full-scale {converter.name} of one conversion"
        count = Fraction(converter.full_scale_counts[0])
        yield _fact(Role.FULL_SCALE, name, count, _PLAIN, converter.full_scale_place)
    name, unit = f"reference {reference.name}", reference.voltage.unit
    yield _fact(Role.REFERENCE, name, reference.voltage.value, unit, reference.place)
    if converter.reference_gain != 1:
        yield _fact(Role.REFERENCE, f"{name} span", converter.span, unit, reference.place)
    bits = Fraction(converter.width)
    name = f"resolution {converter.name}"
    yield _fact(Role.RESOLUTION, name, bits, _PLAIN, converter.bits_place)
    if converter.input_gain != 1:
        name = f"input gain {converter.name}"
        yield _fact(Role.GAIN, name, converter.input_gain, _PLAIN, converter.place)


def _stage_facts(channel: Channel, position: int, stage: Stage) -> Iterator[BoardFact]:
    match stage:
        case Divider():
            yield from _divider_facts(stage)
        case Amplifier():
            yield from _amplifier_facts(stage)
            yield from _offset_facts(channel, position, stage.offset, _VOLTS)
        case Shunt():
            yield _part_fact(Role.SHUNT, f"shunt {stage.resistance.label}", stage.resistance)
            conductance = 1 / nominal(stage.resistance)
            unit = coherent(inverse(OHM))
            yield _fact(Role.SHUNT, "inverse shunt", conductance, unit, stage.resistance.place)
        case Linear():
            yield from _linear_facts(channel, position, stage)
        case Thermistor():
            name = f"resistance {stage.r25.label}"
            yield _part_fact(Role.RESISTANCE, name, stage.r25)
            if stage.beta is not None:
                yield _part_fact(Role.BETA, "beta", stage.beta)
        case LowPass() | Rtd() | Table() | Polynomial() | Against():
            return


def _divider_facts(stage: Divider) -> Iterator[BoardFact]:
    rule, place = "divider-ratio", stage.place
    ratio = stage.line().gain
    yield _fact(Role.DIVIDER, "divider", ratio, _PLAIN, place)
    yield _fact(Role.INVERSE_DIVIDER, "inverse divider", 1 / ratio, _PLAIN, place)
    for part in (stage.top, stage.bottom):
        yield _part_fact(Role.RESISTANCE, f"resistance {part.label}", part, rule)
    top, bottom = nominal(stage.top), nominal(stage.bottom)
    names = (stage.top.label, stage.bottom.label)
    total = f"resistance {names[0]} + {names[1]}"
    yield _fact(Role.RESISTANCE, total, top + bottom, _OHMS, place, rule)
    if stage.load is not None:
        lower, load = stage.lower(), f"resistance {stage.load.label}"
        yield _part_fact(Role.RESISTANCE, load, stage.load, rule)
        parallel = f"resistance {names[1]} with {stage.load.label}"
        yield _fact(Role.RESISTANCE, parallel, lower, _OHMS, place, rule)
        yield _fact(Role.RESISTANCE, f"{total} loaded", top + lower, _OHMS, place, rule)
    if top:
        quotient = bottom / top
        yield _fact(Role.DIVIDER, f"{names[1]} / {names[0]}", quotient, _PLAIN, place)
        yield _fact(Role.INVERSE_DIVIDER, f"{names[0]} / {names[1]}", 1 / quotient, _PLAIN, place)
    if stage.to is not None:
        name = f"offset by {stage.to.name}"
        yield _fact(Role.OFFSET, name, stage.line().offset, _VOLTS, place, rule)


def _amplifier_facts(stage: Amplifier) -> Iterator[BoardFact]:
    ratio = stage.ratio()
    place = stage.gain.place if stage.gain is not None else stage.place
    yield _fact(Role.GAIN, "gain", ratio, _PLAIN, place)
    yield _fact(Role.GAIN, "inverse gain", 1 / ratio, _PLAIN, place)
    if stage.feedback is None or stage.other is None:
        return
    for part in (stage.feedback, stage.other):
        yield _part_fact(Role.RESISTANCE, f"resistance {part.label}", part)
    quotient = nominal(stage.feedback) / nominal(stage.other)
    name = f"{stage.feedback.label} / {stage.other.label}"
    yield _fact(Role.GAIN, name, quotient, _PLAIN, place)


def _linear_facts(channel: Channel, position: int, stage: Linear) -> Iterator[BoardFact]:
    part = stage.sensitivity
    slope = nominal(part)
    yield _part_fact(Role.SENSITIVITY, "sensitivity", part)
    unit = coherent(inverse(part.quantity.unit.dimension))
    yield _fact(Role.SENSITIVITY, "inverse sensitivity", 1 / slope, unit, part.place)
    line = stage.line()
    leaving = coherent(product(part.quantity.unit.dimension, _entering(channel, position)))
    yield from _offset_facts(channel, position, stage.offset, leaving)
    if stage.at is not None and nominal(stage.at):
        yield _part_fact(Role.AT, "at", stage.at)
        yield _fact(Role.OFFSET, "offset at 0", line.offset, leaving, stage.place)
    if line.offset:
        zero, entering = -line.offset / slope, coherent(_entering(channel, position))
        unit = channel.unit if position == 0 else entering
        yield _fact(Role.AT, "quantity at output 0", zero, unit, stage.place)


def _entering(channel: Channel, position: int) -> tuple[tuple[str, int], ...]:
    """The kind of quantity that enters a stage: only linear stages and shunts change it."""
    kind = channel.unit.dimension
    for stage in channel.chain[:position]:
        match stage:
            case Linear():
                kind = product(stage.sensitivity.quantity.unit.dimension, kind)
            case _:
                kind = VOLT
    return kind


def _offset_facts(
    channel: Channel, position: int, offset: Offset | None, unit: Unit
) -> Iterator[BoardFact]:
    """An offset as it stands, and in counts as it arrives at the converter."""
    if offset is None:
        return
    value = offset_volts(offset, nominal)
    own = offset.quantity.unit if isinstance(offset, Part) else unit
    yield _fact(Role.OFFSET, "offset", value, own, offset.place)
    if not_computed(channel) is None:
        rest = SignalChain(channel.chain[position + 1 :]).gain
        counts = value * rest / channel.converter.lsb
        yield _fact(Role.OFFSET, "offset in counts", counts, _PLAIN, offset.place)


def _products(channel: Channel) -> Iterator[BoardFact]:
    """Gains of neighbouring stages written as one constant: shunt times amplifier."""
    stages = channel.chain
    for first in range(len(stages)):
        for last in range(first + 2, len(stages) + 1):
            kinds = [stage.KIND for stage in stages[first:last] if not isinstance(stage, LowPass)]
            if len(kinds) < 2:
                continue
            gain = SignalChain(stages[first:last]).gain
            unit = coherent(_kind_of_gain(channel, first, last))
            name, place = " and ".join(kinds), stages[first].place
            yield _fact(Role.GAIN, name, gain, unit, place)
            back = coherent(inverse(unit.dimension))
            yield _fact(Role.GAIN, f"inverse of {name}", 1 / gain, back, place)


def _kind_of_gain(channel: Channel, first: int, last: int) -> tuple[tuple[str, int], ...]:
    return product(_entering(channel, last), inverse(_entering(channel, first)))


def _line_facts(line: Ideal) -> Iterator[BoardFact]:
    """What follows from the whole line: zero code, steps, span."""
    channel, converter = line.channel, line.channel.converter
    unit, place = channel.unit, channel.place
    zero = line.code_of(Fraction(0))
    if zero:
        yield _fact(Role.ZERO_CODE, "zero code", zero, _PLAIN, place)
    if converter.coding is Coding.OFFSET_BINARY:
        word = zero - converter.code_low
        yield _fact(Role.ZERO_CODE, "zero code as a word", word, _PLAIN, place)
    yield _fact(Role.STEP, "step at the pin", converter.lsb, _VOLTS, converter.place)
    per_volt = coherent(inverse(VOLT))
    yield _fact(Role.STEP, "counts per volt", 1 / converter.lsb, per_volt, converter.place)
    relative = Unit(text=unit.text, dimension=unit.dimension, scale=unit.scale)
    step = line.gain * unit.scale
    yield _fact(Role.STEP, "step", step, relative, place)
    yield _fact(
        Role.STEP, f"counts per {unit.text}", 1 / step, coherent(inverse(unit.dimension)), place
    )
    yield _fact(Role.SPAN, "span", step * converter.full_scale, relative, place)
