"""The two sides of a channel in words: what the board has, what the code has in its place.

A case goes in, short texts come out; sheets arrange them. Nothing is judged here.
"""

from bitweight.board.chains import ideal, not_computed
from bitweight.board.hardware import Channel, Converter
from bitweight.board.parts import Part, Share
from bitweight.board.stages import Amplifier, Divider, Linear, LowPass, Shunt, Stage
from bitweight.judge.cases import Case, Judgement, Side
from bitweight.quantities import spelled
from bitweight.report.texts import figure, number, shown


def hardware_side(case: Case) -> Side:
    """The board's line: known for every channel whose chain is computed, traced or not."""
    if case.judgement is not None:
        return case.judgement.hardware
    if not_computed(case.channel) is not None:
        return Side(gain=None, offset=None)
    line = ideal(case.channel)
    return Side(gain=float(line.gain), offset=float(line.offset))


def measures_text(channel: Channel) -> str:
    """What the channel measures and where it enters: `0 V to 16 V, converter acq input 2`."""
    unit = channel.unit.text
    span = f"{unit}, no range stated, all codes".removeprefix(", ")
    if channel.range is not None:
        span = f"{channel.range[0]} to {channel.range[1]}"
    entry = f"converter {channel.converter.name}"
    if channel.input is not None:
        entry += f" input {channel.input}"
    if channel.pin is not None:
        entry += f" ({channel.pin})"
    return ", ".join(part for part in (span, entry) if part)


def reference_text(converter: Converter) -> str:
    """`2.56 V half x 2`: the reference, its name, and the factor of the converter's pin."""
    text = f"{spelled(converter.reference.voltage)} {converter.reference.name}"
    gain = converter.reference_gain
    return text if gain == 1 else f"{text} x {number(float(gain))}"


def full_scale_text(converter: Converter) -> str:
    """`4096 counts`, and whether the board file leaves that to be assumed."""
    counts = " or ".join(number(float(count)) for count in converter.accepted_full_scales)
    return f"{counts} counts" if converter.full_scale_stated else f"{counts} counts (by default)"


def chain_text(channel: Channel) -> str:
    """The stages in order, one short phrase each."""
    return "; ".join(map(_stage_text, channel.chain)) or "straight to the pin"


def gain_text(side: Side, unit: str) -> str:
    """Gain per count in engineering notation."""
    return "no straight line" if side.gain is None else f"{figure(side.gain, unit)}/count"


def offset_text(offset: float | None, unit: str) -> str:
    """Offset in engineering notation."""
    return "no straight line" if offset is None else figure(offset, unit)


def result_unit_text(channel: Channel, judgement: Judgement) -> str:
    """What one count of the result stands for: `0.1 kPa`."""
    stated = channel.firmware.unit
    if stated is not None and judgement.unit_from == "board":
        return stated.text
    return f"{number(judgement.scale, 12)} {channel.unit.text}".strip()


def worst_texts(judgement: Judgement) -> tuple[str, str]:
    """The worst error in range, with its sign, and what is allowed where it stands."""
    unit = judgement.ideal.channel.unit.text
    error = judgement.settled(float(judgement.error[judgement.worst_index]))
    worst = figure(error, unit, digits=3, sign=True)
    return worst, figure(float(judgement.allowed[judgement.worst_index]), unit, digits=3)


def _stage_text(stage: Stage) -> str:
    match stage:
        case Divider():
            load = f" with load {_part(stage.load)}" if stage.load else ""
            return (
                f"divider {_part(stage.top)} over {_part(stage.bottom)}{load}, "
                f"x {number(float(stage.line().gain))}"
            )
        case Amplifier():
            return f"amplifier x {number(float(stage.ratio()))}{_plus(stage.offset)}"
        case Shunt():
            return f"shunt {_part(stage.resistance)}"
        case Linear():
            return f"sensor {_part(stage.sensitivity)}{_start(stage)}"
        case LowPass():
            return f"low-pass {_part(stage.resistance)}, {_part(stage.capacitance)}"
        case _:
            return stage.KIND


def _start(sensor: Linear) -> str:
    """Where a sensor's line starts: its offset, the quantity at which it gives that, or both."""
    if isinstance(sensor.offset, Part) and not sensor.offset.quantity.number:
        return f" from {_part(sensor.at)}" if sensor.at else ""
    at = f" at {_part(sensor.at)}" if sensor.at and sensor.offset else ""
    return _plus(sensor.offset) + at


def _plus(offset: Part | Share | None) -> str:
    match offset:
        case None:
            return ""
        case Part():
            return f" + {_part(offset)}"
        case Share():
            return f" + {offset.text}"


def _part(part: Part) -> str:
    name = f"{part.quantity.designator} " if part.quantity.designator else ""
    return name + spelled(part.quantity)


def place_text(file: str, line: int) -> str:
    """`src/adc.c:31`, as sheets name places."""
    return f"{shown(file)}:{line}"
