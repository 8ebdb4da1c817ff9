"""[supply], [reference] and [converter]: the voltages and the converters of a board."""

from collections.abc import Mapping
from fractions import Fraction
from typing import TypeVar

from bitweight.board.converters import (
    Coding,
    Converter,
    ConverterClock,
    ConverterKind,
    Justification,
    Oversampling,
    Sampling,
    result_width,
)
from bitweight.board.decoding.fields import (
    WIDEST,
    ClockFields,
    ConverterFields,
    OversamplingFields,
    ReferenceFields,
    SamplingFields,
    SupplyFields,
)
from bitweight.board.decoding.tables import (
    Decoded,
    Field,
    Mistakes,
    nearest,
    read_named,
    read_table,
    shortened,
)
from bitweight.board.parts import Reference, ReferenceSource, Supply
from bitweight.documents import Table, Value
from bitweight.places import Place

_F = ConverterFields
_NARROW_WORD = 16
T = TypeVar("T")
_STEPS = {"0.5 LSB": Fraction(1, 2), "1 LSB": Fraction(1)}


def supplies(root: Table, mistakes: Mistakes) -> dict[str, Supply | None]:
    """The supplies by name; None stands for one that is defined, but wrong."""
    found: dict[str, Supply | None] = {}
    for name, (place, value) in _named(root, "supply", SupplyFields.ALL, mistakes).items():
        decoded = read_table(value, SupplyFields.ALL, f"[supply.{name}]", mistakes)
        voltage = decoded.get(SupplyFields.VOLTAGE)
        found[name] = Supply(name=name, voltage=voltage, place=place) if voltage else None
    return found


def _named(
    root: Table, what: str, fields: tuple[Field[object], ...], mistakes: Mistakes
) -> Mapping[str, tuple[Place, Value]]:
    return read_named(root.get(what), fields, what, mistakes)


def references(
    root: Table, rails: Mapping[str, Supply | None], mistakes: Mistakes
) -> dict[str, Reference | None]:
    """The references by name, each with its supply."""
    tables = _named(root, "reference", ReferenceFields.ALL, mistakes)
    found: dict[str, Reference | None] = {}
    for name, (place, value) in tables.items():
        decoded = read_table(value, ReferenceFields.ALL, f"[reference.{name}]", mistakes)
        found[name] = _reference(name, place, decoded, rails, mistakes)
    return found


def _reference(
    name: str,
    place: Place,
    decoded: Decoded,
    rails: Mapping[str, Supply | None],
    mistakes: Mistakes,
) -> Reference | None:
    fields = ReferenceFields
    if decoded.given(fields.SUPPLY) and decoded.given(fields.VOLTAGE):
        message = "voltage and supply are both given; keep one of them"
        mistakes.add(decoded.place(fields.VOLTAGE), message)
    neither = not decoded.given(fields.SUPPLY) and not decoded.given(fields.VOLTAGE)
    if neither and decoded.is_table:
        mistakes.add(decoded.table.place, f"missing key 'voltage' (or 'supply') in {decoded.where}")
    if decoded.given(fields.SUPPLY) and decoded.get(fields.SOURCE) is ReferenceSource.INTERNAL:
        message = "an internal reference is no supply; keep source or supply"
        mistakes.add(decoded.place(fields.SOURCE), message)
    supply = None
    supply_name = decoded.get(fields.SUPPLY)
    if supply_name is not None:
        supply = linked(supply_name, rails, "supply", decoded.place(fields.SUPPLY), mistakes)
    voltage = supply.voltage if supply is not None else decoded.get(fields.VOLTAGE)
    if voltage is None:
        return None
    if voltage.value <= 0:
        message = f'expected a voltage above 0, found "{voltage.text}"'
        mistakes.add(decoded.place(fields.SUPPLY), message)
        return None
    source = decoded.get(fields.SOURCE)
    return Reference(
        name=name,
        source=source or ReferenceSource.EXTERNAL,
        source_stated=source is not None,
        voltage=voltage,
        pin=decoded.get(fields.PIN),
        supply=supply,
        place=place,
    )


def linked(
    name: str, known: Mapping[str, T | None], what: str, place: Place, mistakes: Mistakes
) -> T | None:
    """What a name stands for. An undefined name is a mistake; a defined but wrong one is None."""
    if name in known:
        return known[name]
    hint = nearest(name, known) or (f"; defined: {', '.join(sorted(known))}" if known else "")
    mistakes.add(place, f"no {what} '{shortened(name)}' is defined{hint}")
    return None


def only_one(
    known: Mapping[str, T | None], what: str, decoded: Decoded, mistakes: Mistakes
) -> T | None:
    """The only candidate, where a name may be left out."""
    if len(known) == 1:
        return next(iter(known.values()))
    if known:
        names = ", ".join(sorted(known))
        message = f"missing key '{what}' in {decoded.where}: several are defined: {names}"
    else:
        message = f"no {what} is defined for {decoded.where}: add a table [{what}.NAME]"
    mistakes.add(decoded.table.place, message)
    return None


def converters(
    root: Table, known: Mapping[str, Reference | None], mistakes: Mistakes
) -> dict[str, Converter | None]:
    """The converters by name, each with its reference."""
    found: dict[str, Converter | None] = {}
    for name, (place, value) in _named(root, "converter", _F.ALL, mistakes).items():
        decoded = read_table(value, _F.ALL, f"[converter.{name}]", mistakes)
        found[name] = _converter(name, place, decoded, known, mistakes)
    return found


def _converter(
    name: str,
    place: Place,
    decoded: Decoded,
    known: Mapping[str, Reference | None],
    mistakes: Mistakes,
) -> Converter | None:
    reference = _reference_of(decoded, known, mistakes)
    bits = decoded.get(_F.BITS)
    if bits is None or reference is None:
        return None
    coding = decoded.get(_F.CODING) or Coding.UNSIGNED
    oversampling = _oversampling(decoded)
    width = result_width(bits, signed=coding.signed, oversampling=oversampling)
    if width > WIDEST:
        message = f"the results take {width} bits, more than {WIDEST}; give the shift"
        mistakes.add(decoded.place(_F.OVERSAMPLING), message)
        return None
    word_bits, shift = _word(decoded, width, mistakes)
    step = _STEPS.get(decoded.get(_F.FIRST_TRANSITION) or "", Fraction(1, 2))
    return Converter(
        name=name,
        kind=decoded.get(_F.KIND) or ConverterKind.ADC,
        family=decoded.get(_F.FAMILY),
        family_place=decoded.place(_F.FAMILY),
        bits=bits,
        reference=reference,
        reference_gain=decoded.get(_F.REFERENCE_GAIN) or Fraction(1),
        full_scale_counts=decoded.get(_F.FULL_SCALE_COUNT) or (1 << (bits - coding.signed),),
        full_scale_stated=decoded.given(_F.FULL_SCALE_COUNT),
        coding=coding,
        coding_stated=decoded.given(_F.CODING),
        input_gain=decoded.get(_F.INPUT_GAIN) or Fraction(1),
        justified=decoded.get(_F.JUSTIFIED) or Justification.RIGHT,
        justified_stated=decoded.given(_F.JUSTIFIED),
        word_bits=word_bits,
        word_bits_stated=decoded.given(_F.WORD_BITS),
        shift=shift,
        first_transition=step,
        code_offset=decoded.get(_F.CODE_OFFSET) or 0,
        oversampling=oversampling,
        clock=_clock(decoded, mistakes),
        sampling=_sampling(decoded),
        total_error=decoded.get(_F.TOTAL_ERROR),
        place=place,
        bits_place=decoded.place(_F.BITS),
        full_scale_place=_full_scale_place(decoded),
    )


def _reference_of(
    decoded: Decoded, known: Mapping[str, Reference | None], mistakes: Mistakes
) -> Reference | None:
    name = decoded.get(_F.REFERENCE)
    if name is not None:
        return linked(name, known, "reference", decoded.place(_F.REFERENCE), mistakes)
    if decoded.given(_F.REFERENCE):
        return None
    return only_one(known, "reference", decoded, mistakes)


def _full_scale_place(decoded: Decoded) -> Place:
    """Where the full-scale count is stated, or the bits that it follows from."""
    stated = decoded.given(_F.FULL_SCALE_COUNT)
    return decoded.place(_F.FULL_SCALE_COUNT) if stated else decoded.place(_F.BITS)


def _oversampling(decoded: Decoded) -> Oversampling:
    inner = decoded.get(_F.OVERSAMPLING)
    if inner is None:
        return Oversampling()
    samples = inner.get(OversamplingFields.SAMPLES) or 1
    return Oversampling(samples=samples, shift=inner.get(OversamplingFields.SHIFT) or 0)


def _word(decoded: Decoded, width: int, mistakes: Mistakes) -> tuple[int, int]:
    """The bits of a converter's word, and those below the code in it."""
    shift = decoded.get(_F.SHIFT)
    stated = decoded.get(_F.WORD_BITS)
    needed = width + (shift or 0)
    word = stated or (_NARROW_WORD if needed <= _NARROW_WORD else WIDEST)
    if needed > word:
        place = decoded.place(_F.WORD_BITS if stated else _F.SHIFT)
        moved = f" shifted by {shift}" if shift else ""
        key = "word_bits" if stated else "shift"
        message = f"{key}: {word} bits cannot hold a {width}-bit code{moved}"
        mistakes.add(place, message)
        return WIDEST, 0
    if decoded.get(_F.JUSTIFIED) is not Justification.LEFT:
        return word, shift or 0
    if shift is not None and shift != word - width:
        message = f"a left-justified code of {width} bits in {word} has shift {word - width}"
        mistakes.add(decoded.place(_F.SHIFT), f"{message}, found {shift}")
    return word, word - width


def _clock(decoded: Decoded, mistakes: Mistakes) -> ConverterClock | None:
    inner = decoded.get(_F.CLOCK)
    if inner is None:
        return None
    low, high = inner.get(ClockFields.MIN), inner.get(ClockFields.MAX)
    if low is not None and high is not None and low.value > high.value:
        message = f'expected min below max, found "{low.text}" and "{high.text}"'
        mistakes.add(inner.place(ClockFields.MIN), message)
    return ConverterClock(
        frequency=inner.get(ClockFields.FREQUENCY),
        minimum=low,
        maximum=high,
        cycles=inner.get(ClockFields.CYCLES),
    )


def _sampling(decoded: Decoded) -> Sampling | None:
    inner = decoded.get(_F.SAMPLING)
    if inner is None:
        return None
    return Sampling(
        time=inner.get(SamplingFields.TIME),
        resistance=inner.get(SamplingFields.RESISTANCE),
        capacitance=inner.get(SamplingFields.CAPACITANCE),
    )
