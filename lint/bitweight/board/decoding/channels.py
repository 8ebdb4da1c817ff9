"""[channel.NAME]: the measured and driven quantities, each with its chain, firmware and limits."""

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from bitweight.board.converters import Converter, ConverterKind
from bitweight.board.decoding.allowed import AllowedShape, allowed_error, with_steps
from bitweight.board.decoding.converters import linked, only_one
from bitweight.board.decoding.fields import FirmwareFields, LimitFields
from bitweight.board.decoding.measures import Ends, Measure, UnitWord
from bitweight.board.decoding.shapes import (
    Inner,
    Sign,
    Tables,
    Text,
    Whole,
)
from bitweight.board.decoding.stage_fields import ChainTables
from bitweight.board.decoding.stage_makers import StageMaker
from bitweight.board.decoding.tables import (
    Decoded,
    Field,
    Mistakes,
    nearest,
    read_named,
    read_table,
    shortened,
)
from bitweight.board.decoding.unit_flow import check_flow, default_unit
from bitweight.board.hardware import AllowedError, Channel, Firmware, Limit, LimitMeasure
from bitweight.board.parts import Source
from bitweight.board.stages import Stage
from bitweight.documents import Scalar, Table, Value, merged
from bitweight.errors import BoardError
from bitweight.places import Place
from bitweight.quantities import Quantity
from bitweight.units import HERTZ, VOLT, Unit, named


class ChannelFields:
    """[channel.NAME]"""

    CONVERTER = Field("converter", Text(), "the name of its converter")
    INPUT = Field("input", Whole(0, 1023), "the converter's input number")
    INPUT_MINUS = Field("input_minus", Whole(0, 1023), "the input number of its minus input")
    PIN = Field("pin", Text(), "the pin it comes in at")
    UNIT = Field("unit", UnitWord(), "the unit of the measured quantity")
    RANGE = Field("range", Ends('["0 V", "16 V"]'), "the low and the high end of the quantity")
    ALLOWED_ERROR = Field("allowed_error", AllowedShape(), "the error that the reading may have")
    HAZARD = Field("hazard", Text(), "what can go wrong if this is wrong")
    PIN_LIMIT = Field(
        "pin_limit", Ends('["-0.3 V", "3.6 V"]', (VOLT,)), "absolute maximum voltages at the pin"
    )
    SAMPLE_RATE = Field(
        "sample_rate", Measure("100 Hz", (HERTZ,), Sign.POSITIVE), "how often it is taken"
    )
    NOMINAL = Field(
        "nominal", Measure("3.3 V"), "where it stands while another channel is compared"
    )
    LIKE = Field("like", Text(), "a channel to copy; keys given replace its keys")
    CHAIN = Field("chain", ChainTables(), "the stages between the quantity and the pin")
    FIRMWARE = Field(
        "firmware", Inner("firmware", FirmwareFields.ALL), "where the firmware has the channel"
    )
    LIMIT = Field("limit", Tables(Inner("a limit", LimitFields.ALL)), "thresholds in the firmware")
    ALL = (
        CONVERTER,
        INPUT,
        INPUT_MINUS,
        PIN,
        UNIT,
        RANGE,
        ALLOWED_ERROR,
        HAZARD,
        PIN_LIMIT,
        SAMPLE_RATE,
        NOMINAL,
        LIKE,
        CHAIN,
        FIRMWARE,
        LIMIT,
    )


_F = ChannelFields
_LONGEST_COPY = 16
"""Channels that copy channels; each one costs a merge for every channel."""


@dataclass(frozen=True, slots=True)
class _Surroundings:
    """What a channel may name."""

    converters: Mapping[str, Converter | None]
    maker: StageMaker
    mistakes: Mistakes


def channels(
    root: Table,
    converters: Mapping[str, Converter | None],
    sources: Mapping[str, Source | None],
    mistakes: Mistakes,
) -> dict[str, Channel | None]:
    """The channels by name; None stands for one that is defined, but wrong."""
    around = _Surroundings(converters, StageMaker(sources, mistakes), mistakes)
    tables = read_named(root.get("channel"), _F.ALL, "channel", mistakes)
    if not tables:
        mistakes.add(root.place, "no channel is defined: add a table [channel.NAME]")
    found: dict[str, Channel | None] = {}
    for name, (place, value) in tables.items():
        whole = _with_copied(name, value, tables, mistakes)
        decoded = read_table(whole, _F.ALL, f"[channel.{name}]", mistakes)
        found[name] = _channel(name, place, decoded, around)
    return found


def _with_copied(
    name: str, value: Value, tables: Mapping[str, tuple[Place, Value]], mistakes: Mistakes
) -> Value:
    """The channel's table with what it copies by `like` under its own keys."""
    whole, seen = value, {name}
    while isinstance(whole, Table) and isinstance(value, Table):
        like = value.get("like")
        base_name = like.value if isinstance(like, Scalar) else None
        if like is None or not isinstance(base_name, str):
            return whole
        if base_name in seen:
            mistakes.add(like.place, f"like: channel '{shortened(base_name)}' copies itself")
            return whole
        if base_name not in tables:
            hint = nearest(base_name, tables)
            message = f"like: no channel '{shortened(base_name)}' is defined{hint}"
            mistakes.add(like.place, message)
            return whole
        if len(seen) > _LONGEST_COPY:
            message = f"like: copied through more than {_LONGEST_COPY} channels"
            mistakes.add(like.place, message)
            return whole
        seen.add(base_name)
        value = tables[base_name][1]
        if isinstance(value, Table):
            whole = Table(keys=merged(value, whole).keys, place=whole.place)
    return whole


def _channel(name: str, place: Place, decoded: Decoded, around: _Surroundings) -> Channel | None:
    converter = _converter(decoded, around)
    chain = _chain(decoded, around)
    to_pin = converter is None or converter.kind is ConverterKind.ADC
    unit = decoded.get(_F.UNIT)
    if unit is None and chain is not None and not decoded.given(_F.UNIT):
        unit = default_unit(chain, to_pin=to_pin)
    if unit is not None and chain is not None and converter is not None:
        check_flow(chain, unit, decoded.place(_F.UNIT), around.mistakes, to_pin=to_pin)
    if unit is not None:
        _check_units(decoded, unit, around.mistakes)
    firmware = _firmware(decoded, unit, around.mistakes)
    limits = _limits(decoded, unit, around.mistakes)
    if converter is None or chain is None or unit is None:
        return None
    allowed = decoded.get(_F.ALLOWED_ERROR)
    channel = Channel(
        name=name,
        converter=converter,
        input=decoded.get(_F.INPUT),
        input_minus=decoded.get(_F.INPUT_MINUS),
        pin=decoded.get(_F.PIN),
        unit=unit,
        unit_stated=decoded.given(_F.UNIT),
        range=decoded.get(_F.RANGE),
        allowed_error=_allowed(decoded, unit, around.mistakes),
        hazard=decoded.get(_F.HAZARD),
        pin_limit=decoded.get(_F.PIN_LIMIT),
        sample_rate=decoded.get(_F.SAMPLE_RATE),
        nominal=decoded.get(_F.NOMINAL),
        like=decoded.get(_F.LIKE),
        chain=chain,
        firmware=firmware,
        limits=limits,
        place=place,
        range_place=decoded.place(_F.RANGE) if decoded.given(_F.RANGE) else place,
    )
    return with_steps(channel, allowed.steps, around.mistakes) if allowed is not None else channel


def _converter(decoded: Decoded, around: _Surroundings) -> Converter | None:
    name = decoded.get(_F.CONVERTER)
    if name is not None:
        place = decoded.place(_F.CONVERTER)
        return linked(name, around.converters, "converter", place, around.mistakes)
    if decoded.given(_F.CONVERTER):
        return None
    return only_one(around.converters, "converter", decoded, around.mistakes)


def _chain(decoded: Decoded, around: _Surroundings) -> tuple[Stage, ...] | None:
    """The stages, or None when any of them is wrong."""
    tables = decoded.get(_F.CHAIN)
    if tables is None:
        return None if decoded.given(_F.CHAIN) else ()
    stages = [around.maker.stage(one) if one is not None else None for one in tables]
    whole = tuple(stage for stage in stages if stage is not None)
    return whole if len(whole) == len(stages) else None


def _check_units(decoded: Decoded, unit: Unit, mistakes: Mistakes) -> None:
    """Range and nominal value are of the channel's kind."""
    ends = decoded.get(_F.RANGE) or ()
    nominal = decoded.get(_F.NOMINAL)
    if ends:
        _check_unit("range", ends[0], unit, decoded.place(_F.RANGE), mistakes)
    if nominal is not None:
        _check_unit("nominal", nominal, unit, decoded.place(_F.NOMINAL), mistakes)


def _check_unit(
    what: str, quantity: Quantity, unit: Unit, place: Place, mistakes: Mistakes
) -> None:
    if not quantity.unit.fits(unit):
        message = f"{what} is in {named(quantity.unit)} but the channel's unit is {named(unit)}"
        mistakes.add(place, message)


def _allowed(decoded: Decoded, unit: Unit, mistakes: Mistakes) -> AllowedError | None:
    allowed = decoded.get(_F.ALLOWED_ERROR)
    if allowed is None:
        return None
    try:
        return allowed_error(allowed, unit, decoded.place(_F.ALLOWED_ERROR))
    except BoardError as error:
        mistakes.extend(error.mistakes)
        return None


def _firmware(decoded: Decoded, unit: Unit | None, mistakes: Mistakes) -> Firmware:
    inner = decoded.get(_F.FIRMWARE)
    fields = FirmwareFields
    if inner is None:
        place = decoded.place(_F.FIRMWARE)
        return Firmware(place=place, reading_place=place, value_place=place)
    scaled = inner.get(fields.UNIT)
    if scaled is not None and unit is not None and not scaled.fits(unit):
        message = f'unit: expected {_like(unit)}, found "{shortened(scaled.text)}"'
        mistakes.add(inner.place(fields.UNIT), f"{message}; the channel's unit is {named(unit)}")
    return Firmware(
        reading=inner.get(fields.READING) or (),
        value=inner.get(fields.VALUE) or (),
        unit=scaled,
        reading_gain=inner.get(fields.READING_GAIN) or Fraction(1),
        place=inner.table.place,
        reading_place=inner.place(fields.READING),
        value_place=inner.place(fields.VALUE),
    )


def _like(unit: Unit) -> str:
    """An example of what one count may stand for."""
    if unit.dimension == VOLT:
        return 'a voltage like "1 mV"'
    return f'a quantity like "0.1 {unit.text}"' if unit.text else 'a plain number like "0.1"'


def _limits(decoded: Decoded, unit: Unit | None, mistakes: Mistakes) -> tuple[Limit, ...]:
    tables = decoded.get(_F.LIMIT) or ()
    found = [_limit(inner, unit, mistakes) for inner in tables]
    return tuple(limit for limit in found if limit is not None)


def _limit(inner: Decoded, unit: Unit | None, mistakes: Mistakes) -> Limit | None:
    fields = LimitFields
    at, constant = inner.get(fields.AT), inner.get(fields.CONSTANT)
    if at is not None and unit is not None:
        _check_unit("at", at, unit, inner.place(fields.AT), mistakes)
    if inner.given(fields.BITS) and inner.get(fields.MEASURE) is LimitMeasure.VALUE:
        message = 'bits is the width of counts, but in = "value" says that it is no count'
        mistakes.add(inner.place(fields.BITS), message)
    if at is None or constant is None:
        return None
    return Limit(
        name=inner.get(fields.NAME) or constant,
        at=at,
        constant=constant,
        measure=inner.get(fields.MEASURE) or LimitMeasure.COUNTS,
        bits=inner.get(fields.BITS),
        place=inner.table.place,
        constant_place=inner.place(fields.CONSTANT),
    )
