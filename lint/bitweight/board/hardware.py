"""The board file as typed, linked facts. Every fact knows where it stands in the file."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import date
from enum import Enum
from fractions import Fraction

from bitweight.arithmetic.types import DataModel
from bitweight.board.converters import (
    Codes,
    Coding,
    Converter,
    ConverterClock,
    ConverterKind,
    Justification,
    Oversampling,
    Presentation,
    Sampling,
)
from bitweight.board.parts import Part, Reference, ReferenceSource, Share, Source, Supply
from bitweight.board.stages import Stage
from bitweight.places import Place
from bitweight.quantities import Quantity
from bitweight.units import Unit

__all__ = [
    "AllowedError",
    "Board",
    "Channel",
    "Codes",
    "Coding",
    "ConstantFact",
    "Converter",
    "ConverterClock",
    "ConverterKind",
    "Deviation",
    "Firmware",
    "Justification",
    "Limit",
    "LimitMeasure",
    "Oversampling",
    "Part",
    "Presentation",
    "Reference",
    "ReferenceSource",
    "Sampling",
    "Share",
    "Source",
    "Supply",
    "Target",
    "Variant",
]


@dataclass(frozen=True, slots=True, kw_only=True)
class Target:
    """The processor: its C data model, clock and family, and the user's own family files."""

    architecture: str | None
    model: DataModel
    clock: Quantity | None
    family: str | None
    families: tuple[str, ...]
    place: Place
    family_place: Place | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class AllowedError:
    """The error that a channel may have, as the board file states it; the parts add up.

    `absolute` is in the channel's unit, `of_span` and `of_reading` are plain ratios.
    """

    absolute: Fraction
    of_span: Fraction
    of_reading: Fraction
    text: str
    place: Place


class LimitMeasure(Enum):
    """What a limit constant is compared with."""

    COUNTS = "counts"
    VALUE = "value"


@dataclass(frozen=True, slots=True, kw_only=True)
class Limit:
    """A threshold: `constant` (a C expression) stands for the quantity `at`.

    `bits` is the width of the counts where it differs from the converter's.
    """

    name: str
    at: Quantity
    constant: str
    measure: LimitMeasure
    bits: int | None
    place: Place
    constant_place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Firmware:
    """Where the firmware reads a channel and where its result ends: C expressions as written.

    `unit` is what one count of the result stands for; `reading_gain` is counts of the reading for
    one converter count.
    """

    reading: tuple[str, ...] = ()
    value: tuple[str, ...] = ()
    unit: Unit | None = None
    reading_gain: Fraction = Fraction(1)
    place: Place
    reading_place: Place
    value_place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Channel:
    """A measured (or driven) quantity: from its chain to its converter, and its firmware.

    `range` is its low and high end; `pin_limit` the absolute maximum at the pin, in volts.
    """

    name: str
    converter: Converter
    input: int | None
    input_minus: int | None
    pin: str | None
    unit: Unit
    unit_stated: bool
    range: tuple[Quantity, Quantity] | None
    allowed_error: AllowedError | None
    hazard: str | None
    pin_limit: tuple[Quantity, Quantity] | None
    sample_rate: Quantity | None
    nominal: Quantity | None
    like: str | None
    chain: tuple[Stage, ...]
    firmware: Firmware
    limits: tuple[Limit, ...]
    place: Place
    range_place: Place

    @property
    def reading(self) -> tuple[str, ...]:
        """C expressions that yield the raw code."""
        return self.firmware.reading

    @property
    def value(self) -> tuple[str, ...]:
        """C expressions where the result ends; empty when every end is judged."""
        return self.firmware.value


@dataclass(frozen=True, slots=True, kw_only=True)
class ConstantFact:
    """What a C expression stands for, by the user's word.

    `expression` is C text, `where` the function or file it is limited to ("EXPR @ motor.c").
    `role` is the board fact it is ("reference", "divider", "code"), `name` what the role is of
    ("vref", "R12", "i_a"). `unit` is what one count of it stands for, `at` the quantity of an
    ideal code. `value` stands in for run-time data instead of a role.
    """

    expression: str
    where: str | None
    role: str | None
    name: str | None
    unit: Unit | None
    at: Quantity | None
    value: Fraction | None
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Variant:
    """An assembly of the board that overrides parts of its file."""

    name: str
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Deviation:
    """An accepted, recorded departure from a rule; `until` is the last day it holds."""

    rule: str
    where: str
    reason: str
    until: date | None
    place: Place
    rule_place: Place | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Board:
    """One assembly of a board. `file` is the board file as shown; paths are as written in it.

    `paths` are the places of the keys that name files, by key.

    `define` are the macros that select this board, name and replacement text. `variant` is the
    assembly that was asked for, None for the base. `coverage` is the factor k of expanded
    uncertainties.
    """

    name: str
    revision: str | None
    file: str
    firmware: tuple[str, ...]
    include: tuple[str, ...]
    exclude: tuple[str, ...]
    define: tuple[tuple[str, str], ...]
    build: str | None
    coverage: Fraction
    target: Target
    supplies: tuple[Supply, ...]
    references: tuple[Reference, ...]
    converters: tuple[Converter, ...]
    channels: tuple[Channel, ...]
    constants: tuple[ConstantFact, ...]
    variants: tuple[Variant, ...]
    variant: str | None
    deviations: tuple[Deviation, ...]
    place: Place
    paths: Mapping[str, Place] = field(default_factory=dict)
