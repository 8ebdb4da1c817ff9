"""Stages of a chain: the facts made of their keys."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from fractions import Fraction

from bitweight.board.decoding.stage_fields import ShareText, StageFields
from bitweight.board.decoding.tables import Decoded, Field, Mistakes, nearest, shortened
from bitweight.board.parts import Part, Share, Source
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
    Side,
    Stage,
    Thermistor,
    Topology,
)
from bitweight.board.stages import Table as PointTable
from bitweight.places import Place
from bitweight.quantities import Quantity
from bitweight.units import OHM, Unit

_F = StageFields
_UNITLESS = Unit(text="")


@dataclass(frozen=True, slots=True)
class StageMaker:
    """Makes stages; `sources` are supplies and references by name (None: defined, but wrong)."""

    sources: Mapping[str, Source | None]
    mistakes: Mistakes

    def stage(self, decoded: Decoded) -> Stage | None:
        """The stage of these fields, or None after a mistake."""
        kind = decoded.get(_F.KIND) or ""
        before = len(self.mistakes.found)
        stage = _MAKERS[kind](self, decoded)
        return stage if decoded.sound and len(self.mistakes.found) == before else None

    def part(self, decoded: Decoded, field: Field[Quantity]) -> Part | None:
        """The part that a key names; without a designator it is one of its own."""
        quantity = decoded.get(field)
        if quantity is None:
            return None
        place = decoded.place(field)
        if quantity.designator is None:
            return Part(key=str(place), label=field.name, quantity=quantity, place=place)
        name = quantity.designator
        return Part(key=f"part {name}", label=name, quantity=quantity, place=place)

    def needed(self, decoded: Decoded, field: Field[Quantity], why: str) -> Part:
        """A part that this stage cannot do without; a stand-in after a mistake."""
        part = self.part(decoded, field)
        if part is not None:
            return part
        if not decoded.given(field) and not field.required:
            self.mistakes.add(decoded.table.place, f"missing key '{field.name}' in {why}")
        stand_in = Quantity(value=Fraction(1), unit=_UNITLESS)
        return Part(key="", label=field.name, quantity=stand_in, place=decoded.table.place)

    def source(self, decoded: Decoded, field: Field[str]) -> Source | None:
        """The supply or reference that a key names."""
        name = decoded.get(field)
        return self.named(name, decoded.place(field)) if name is not None else None

    def named(self, name: str, place: Place) -> Source | None:
        """The supply or reference of this name; an undefined one is a mistake."""
        if name not in self.sources:
            hint = nearest(name, self.sources)
            message = f"no supply or reference '{shortened(name)}' is defined{hint}"
            self.mistakes.add(place, message)
            return None
        return self.sources[name]

    def offset(self, decoded: Decoded) -> Offset | None:
        """The voltage that a stage adds."""
        content, place = decoded.get(_F.OFFSET), decoded.place(_F.OFFSET)
        match content:
            case None:
                return None
            case Quantity():
                key = f"part {content.designator} offset" if content.designator else str(place)
                return Part(key=key, label="offset", quantity=content, place=place)
            case ShareText():
                source = self.named(content.name, place)
                if source is None:
                    return None
                return Share(source=source, factor=content.factor, text=content.text, place=place)


def _divider(maker: StageMaker, decoded: Decoded) -> Stage:
    top = maker.needed(decoded, _F.TOP, "a divider stage")
    bottom = maker.needed(decoded, _F.BOTTOM, "a divider stage")
    if not bottom.quantity.value:
        total = "a divider of 0 ohm" if not top.quantity.value else "bottom of 0 ohm"
        maker.mistakes.add(bottom.place, f"{total} puts nothing on the pin")
    return Divider(
        top=top,
        bottom=bottom,
        load=maker.part(decoded, _F.LOAD),
        to=maker.source(decoded, _F.TO),
        place=decoded.table.place,
    )


def _amplifier(maker: StageMaker, decoded: Decoded) -> Stage:
    topology, other = _wiring(decoded)
    if decoded.given(_F.GAIN):
        _only_gain(maker, decoded)
    elif topology is None:
        message = "missing gain, or topology with feedback and ground or input"
        maker.mistakes.add(decoded.table.place, f"{message}, in an amplifier stage")
    by_parts = topology is not None and not decoded.given(_F.GAIN)
    return Amplifier(
        gain=maker.part(decoded, _F.GAIN),
        topology=topology,
        feedback=_feedback(maker, decoded, topology) if by_parts else None,
        other=maker.needed(decoded, other, _amplifier_kind(topology)) if by_parts else None,
        offset=maker.offset(decoded),
        ratiometric=maker.source(decoded, _F.RATIOMETRIC),
        place=decoded.table.place,
    )


def _feedback(maker: StageMaker, decoded: Decoded, topology: Topology | None) -> Part:
    """The feedback resistor; 0 ohm makes a follower, but turns an inverting amplifier off."""
    part = maker.needed(decoded, _F.FEEDBACK, _amplifier_kind(topology))
    if topology is Topology.INVERTING and not part.quantity.value:
        maker.mistakes.add(part.place, "feedback of 0 ohm makes the gain 0")
    return part


def _amplifier_kind(topology: Topology | None) -> str:
    inverting = topology is Topology.INVERTING
    return "an inverting amplifier stage" if inverting else "a non-inverting amplifier stage"


def _wiring(decoded: Decoded) -> tuple[Topology | None, Field[Quantity]]:
    """How the amplifier is wired, by word or by the resistor that is named."""
    stated = decoded.get(_F.TOPOLOGY)
    if stated is None and decoded.given(_F.FEEDBACK):
        stated = Topology.INVERTING if decoded.given(_F.INPUT) else Topology.NON_INVERTING
    return stated, _F.INPUT if stated is Topology.INVERTING else _F.GROUND


def _only_gain(maker: StageMaker, decoded: Decoded) -> None:
    """A stated gain and resistors could contradict each other."""
    for field in (_F.FEEDBACK, _F.GROUND, _F.INPUT):
        if decoded.given(field):
            message = f"gain and {field.name} are both given; keep one of them"
            maker.mistakes.add(decoded.place(field), message)


def _shunt(maker: StageMaker, decoded: Decoded) -> Stage:
    resistance = maker.needed(decoded, _F.RESISTANCE, "a shunt stage")
    return Shunt(resistance=resistance, place=decoded.table.place)


def _linear(maker: StageMaker, decoded: Decoded) -> Stage:
    return Linear(
        sensitivity=maker.needed(decoded, _F.SENSITIVITY, "a linear stage"),
        offset=maker.offset(decoded),
        at=maker.part(decoded, _F.AT),
        ratiometric=maker.source(decoded, _F.RATIOMETRIC),
        place=decoded.table.place,
    )


def _low_pass(maker: StageMaker, decoded: Decoded) -> Stage:
    return LowPass(
        resistance=maker.needed(decoded, _F.RESISTANCE, "a low-pass stage"),
        capacitance=maker.needed(decoded, _F.CAPACITANCE, "a low-pass stage"),
        place=decoded.table.place,
    )


def _thermistor(maker: StageMaker, decoded: Decoded) -> Stage | None:
    what = "a thermistor stage"
    if decoded.given(_F.BETA) == decoded.given(_F.STEINHART):
        message = f"expected either beta or steinhart_hart in {what}"
        maker.mistakes.add(decoded.table.place, message)
    companion = maker.needed(decoded, _F.WITH, what)
    supply = _feed(maker, decoded, what)
    if supply is None:
        return None
    return Thermistor(
        r25=maker.needed(decoded, _F.R25, what),
        beta=maker.part(decoded, _F.BETA),
        steinhart_hart=decoded.get(_F.STEINHART) or (),
        companion=companion,
        side=decoded.get(_F.SIDE) or Side.BOTTOM,
        supply=supply,
        place=decoded.table.place,
    )


def _rtd(maker: StageMaker, decoded: Decoded) -> Stage:
    if decoded.given(_F.CURRENT) == decoded.given(_F.WITH):
        message = "expected either current, or with and supply, in an rtd stage"
        maker.mistakes.add(decoded.table.place, message)
    supply = _feed(maker, decoded, "an rtd stage") if decoded.given(_F.WITH) else None
    return Rtd(
        r0=maker.needed(decoded, _F.R0, "an rtd stage"),
        current=maker.part(decoded, _F.CURRENT),
        companion=maker.part(decoded, _F.WITH),
        side=decoded.get(_F.SIDE) or Side.BOTTOM,
        supply=supply,
        place=decoded.table.place,
    )


def _table(maker: StageMaker, decoded: Decoded) -> Stage:
    points = decoded.get(_F.POINTS) or ()
    resistive = bool(points) and points[0][1].unit.dimension == OHM
    if resistive and not decoded.given(_F.WITH):
        message = "missing key 'with' in a table stage whose points are resistances"
        maker.mistakes.add(decoded.table.place, message)
    supply = _feed(maker, decoded, "a table stage") if decoded.given(_F.WITH) else None
    return PointTable(
        points=points,
        companion=maker.part(decoded, _F.WITH),
        side=decoded.get(_F.SIDE) or Side.BOTTOM,
        supply=supply,
        place=decoded.table.place,
    )


def _polynomial(maker: StageMaker, decoded: Decoded) -> Stage:
    return Polynomial(
        coefficients=decoded.get(_F.COEFFICIENTS) or (),
        unit_in=decoded.get(_F.UNIT_IN) or _UNITLESS,
        unit_out=decoded.get(_F.UNIT_OUT) or _UNITLESS,
        place=decoded.table.place,
    )


def _against(maker: StageMaker, decoded: Decoded) -> Stage:
    voltage = maker.needed(decoded, _F.VOLTAGE, "an against stage")
    return Against(voltage=voltage, place=decoded.table.place)


def _feed(maker: StageMaker, decoded: Decoded, what: str) -> Source | None:
    """What feeds a sensor's divider; where only one voltage is defined it may be left out."""
    if decoded.given(_F.SUPPLY):
        return maker.source(decoded, _F.SUPPLY)
    candidates = set(maker.sources)
    if len(candidates) != 1:
        known = f": one of {', '.join(sorted(candidates))}" if candidates else ""
        maker.mistakes.add(decoded.table.place, f"missing key 'supply' in {what}{known}")
        return None
    return maker.sources[candidates.pop()]


_MAKERS: Mapping[str, Callable[[StageMaker, Decoded], Stage | None]] = {
    "divider": _divider,
    "amplifier": _amplifier,
    "shunt": _shunt,
    "linear": _linear,
    "thermistor": _thermistor,
    "rtd": _rtd,
    "low-pass": _low_pass,
    "table": _table,
    "polynomial": _polynomial,
    "against": _against,
}
