"""Stages of a signal chain, one class a kind: what each does to what passes through it.

A stage that is computed is a straight line; `line` gives it for any values of its parts. The
others are read and checked, and say in `NOT_COMPUTED` that they are not computed yet.
"""

from dataclasses import dataclass
from enum import Enum
from fractions import Fraction
from typing import ClassVar

from bitweight.board.parts import Part, Share, Source, Values, nominal
from bitweight.places import Place
from bitweight.quantities import Quantity
from bitweight.units import Unit, under_bar


@dataclass(frozen=True, slots=True)
class Affine:
    """A straight line: y = gain * x + offset, both in coherent units."""

    gain: Fraction = Fraction(1)
    offset: Fraction = Fraction(0)

    def at(self, x: Fraction) -> Fraction:
        """The value of the line at x."""
        return self.gain * x + self.offset

    def then(self, after: "Affine") -> "Affine":
        """This line followed by another."""
        return Affine(after.gain * self.gain, after.at(self.offset))

    def inverted(self) -> "Affine":
        """The line that undoes this one; its gain must not be 0."""
        return Affine(1 / self.gain, -self.offset / self.gain)


Offset = Part | Share
"""A voltage of its own, or a share of a supply."""


def offset_volts(offset: Offset | None, values: Values, follow: Fraction = Fraction(1)) -> Fraction:
    """What an offset adds, in its coherent unit.

    An offset of its own follows what its stage is ratiometric to; a share follows its supply.
    """
    match offset:
        case None:
            return Fraction(0)
        case Part():
            return values(offset) * follow
        case Share():
            return offset.volts(values)


def relative(source: Source | None, values: Values) -> Fraction:
    """How far a ratiometric source is from its nominal voltage, as a plain ratio."""
    return values(source.part) / nominal(source.part) if source is not None else Fraction(1)


@dataclass(frozen=True, slots=True, kw_only=True)
class Divider:
    """Two resistors in ohm, `bottom` to ground or to another voltage, `load` across it."""

    KIND: ClassVar[str] = "divider"
    top: Part
    bottom: Part
    load: Part | None
    to: Source | None
    place: Place

    def lower(self, values: Values = nominal) -> Fraction:
        """The resistance from the tap down, the load included, in ohm."""
        bottom = values(self.bottom)
        if self.load is None:
            return bottom
        load = values(self.load)
        return bottom * load / (bottom + load)

    def line(self, values: Values = nominal) -> Affine:
        """Volts in to volts out: Kirchhoff's rule at the tap."""
        top, lower = values(self.top), self.lower(values)
        ratio = lower / (top + lower)
        end = values(self.to.part) if self.to is not None else Fraction(0)
        return Affine(ratio, end * (1 - ratio))


class Topology(Enum):
    """How an operational amplifier is wired."""

    NON_INVERTING = "non-inverting"
    INVERTING = "inverting"


@dataclass(frozen=True, slots=True, kw_only=True)
class Amplifier:
    """A gain stated, or given by its resistors in ohm (`other` is to ground, or the input's).

    `offset` is what it adds at its output, in volts; it follows `ratiometric`.
    """

    KIND: ClassVar[str] = "amplifier"
    gain: Part | None
    topology: Topology | None
    feedback: Part | None
    other: Part | None
    offset: Offset | None
    ratiometric: Source | None
    place: Place

    def ratio(self, values: Values = nominal) -> Fraction:
        """The gain, volts out for volts in: 1 + Rf/Rg, or -Rf/Rin (common practice)."""
        if self.gain is not None:
            return values(self.gain)
        if self.feedback is None or self.other is None:
            return Fraction(1)
        quotient = values(self.feedback) / values(self.other)
        return -quotient if self.topology is Topology.INVERTING else 1 + quotient

    def line(self, values: Values = nominal) -> Affine:
        """Volts in to volts out."""
        follow = relative(self.ratiometric, values)
        return Affine(self.ratio(values), offset_volts(self.offset, values, follow))


@dataclass(frozen=True, slots=True, kw_only=True)
class Shunt:
    """A resistor that turns a current into a voltage; `resistance` in ohm."""

    KIND: ClassVar[str] = "shunt"
    resistance: Part
    place: Place

    def line(self, values: Values = nominal) -> Affine:
        """Amperes in to volts out: Ohm's law."""
        return Affine(values(self.resistance))


@dataclass(frozen=True, slots=True, kw_only=True)
class Linear:
    """A sensor with a straight line: `offset` at the quantity `at`, `sensitivity` from there.

    All three in coherent units; the output follows `ratiometric`. Without `at` the line starts at
    the zero of the scale that the sensitivity is stated in: 0 degC for "10 mV/degC".
    """

    KIND: ClassVar[str] = "linear"
    sensitivity: Part
    offset: Offset | None
    at: Part | None
    ratiometric: Source | None
    place: Place

    def line(self, values: Values = nominal) -> Affine:
        """The measured quantity in to what the sensor gives."""
        follow = relative(self.ratiometric, values)
        slope = values(self.sensitivity) * follow
        zero = under_bar(self.sensitivity.quantity.unit).zero
        start = values(self.at) if self.at is not None else zero
        return Affine(slope, offset_volts(self.offset, values, follow) - slope * start)


@dataclass(frozen=True, slots=True, kw_only=True)
class LowPass:
    """An RC filter, in ohm and farad; at rest it passes its input unchanged."""

    KIND: ClassVar[str] = "low-pass"
    resistance: Part
    capacitance: Part
    place: Place

    def line(self, values: Values = nominal) -> Affine:
        """Volts in to volts out, at rest."""
        return Affine()


class Side(Enum):
    """On which side of its companion resistor a sensor lies: to the supply or to ground."""

    TOP = "top"
    BOTTOM = "bottom"


@dataclass(frozen=True, slots=True, kw_only=True)
class Thermistor:
    """A resistor that falls with temperature, in a divider with `companion` at `supply`."""

    KIND: ClassVar[str] = "thermistor"
    NOT_COMPUTED: ClassVar[str] = "thermistor stages are not computed yet"
    r25: Part
    beta: Part | None
    steinhart_hart: tuple[Fraction, ...]
    companion: Part
    side: Side
    supply: Source
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Rtd:
    """A platinum resistor (IEC 60751), fed by a `current` or in a divider with `companion`."""

    KIND: ClassVar[str] = "rtd"
    NOT_COMPUTED: ClassVar[str] = "rtd stages are not computed yet"
    r0: Part
    current: Part | None
    companion: Part | None
    side: Side
    supply: Source | None
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """A curve by points, linear between them: to a resistance (with `companion`) or to volts."""

    KIND: ClassVar[str] = "table"
    NOT_COMPUTED: ClassVar[str] = "table stages are not computed yet"
    points: tuple[tuple[Quantity, Quantity], ...]
    companion: Part | None
    side: Side
    supply: Source | None
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Polynomial:
    """A curve by its coefficients, lowest power first, between `unit_in` and `unit_out`."""

    KIND: ClassVar[str] = "polynomial"
    NOT_COMPUTED: ClassVar[str] = "polynomial stages are not computed yet"
    coefficients: tuple[Fraction, ...]
    unit_in: Unit
    unit_out: Unit
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Against:
    """A fixed `voltage` at the pin, in volts: the channel measures its converter's reference."""

    KIND: ClassVar[str] = "against"
    NOT_COMPUTED: ClassVar[str] = "against stages are not computed yet"
    voltage: Part
    place: Place


Straight = Divider | Amplifier | Shunt | Linear | LowPass
Curved = Thermistor | Rtd | Table | Polynomial | Against
Stage = Straight | Curved


def parts_of(stage: Stage) -> tuple[Part, ...]:
    """The parts that a stage names itself, supplies and references apart."""
    named: tuple[Part | None, ...]
    match stage:
        case Divider():
            named = (stage.top, stage.bottom, stage.load)
        case Amplifier():
            named = (stage.gain, stage.feedback, stage.other, _own(stage.offset))
        case Shunt():
            named = (stage.resistance,)
        case Linear():
            named = (stage.sensitivity, _own(stage.offset), stage.at)
        case LowPass():
            named = (stage.resistance, stage.capacitance)
        case Thermistor():
            named = (stage.r25, stage.beta, stage.companion)
        case Rtd():
            named = (stage.r0, stage.current, stage.companion)
        case Table():
            named = (stage.companion,)
        case Polynomial():
            named = ()
        case Against():
            named = (stage.voltage,)
    return tuple(part for part in named if part is not None)


def sources_of(stage: Stage) -> tuple[Source, ...]:
    """The supplies and references that a stage depends on."""
    named: tuple[Source | None, ...]
    match stage:
        case Divider():
            named = (stage.to,)
        case Amplifier() | Linear():
            shared = stage.offset.source if isinstance(stage.offset, Share) else None
            named = (stage.ratiometric, shared)
        case Thermistor() | Rtd() | Table():
            named = (stage.supply,)
        case Shunt() | LowPass() | Polynomial() | Against():
            named = ()
    return tuple(source for source in named if source is not None)


def _own(offset: Offset | None) -> Part | None:
    return offset if isinstance(offset, Part) else None
