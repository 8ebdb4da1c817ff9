"""A small invented board with its outcome, built from facts directly: no file is read.

The channels: `depth` (verified), `battery` (mismatched: a full-scale count of 1023 for 1024 and a
low reference), `flow` (untraced).
"""

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction

import numpy as np

from bitweight.arithmetic.evaluation import Curve
from bitweight.arithmetic.expressions import Leaf, Literal
from bitweight.arithmetic.types import CType, Kind
from bitweight.board.chains import ideal
from bitweight.board.converters import (
    Coding,
    Converter,
    ConverterKind,
    Justification,
    Oversampling,
)
from bitweight.board.hardware import Board, Channel, Firmware, Target
from bitweight.board.parts import Part, Reference, ReferenceSource
from bitweight.board.stages import Divider, Linear, Shunt, Stage
from bitweight.judge.cases import Case, Facts, Judgement, Point, Side, Status
from bitweight.judge.explanations import EffectPoint, Explanation, WrongConstant
from bitweight.judge.findings import Finding, Level, Related, Replacement
from bitweight.judge.outcomes import Outcome
from bitweight.places import Place
from bitweight.quantities import parse_quantity, parse_scaled_unit
from bitweight.trace.conversions import Conversion, Step, Trace
from bitweight.units import parse_unit

BOARD_FILE = "hatchery/board.toml"
HEADER = "hatchery/src/adc_cfg.h"
LONG = CType(name="long", kind=Kind.INTEGER, bits=32, signed=True, rank=4)


def at(line: int, column: int = 1, file: str = BOARD_FILE) -> Place:
    """A place, in the board file unless told."""
    return Place(file, line, column)


def part(label: str, text: str) -> Part:
    """A part of the board file."""
    return Part(key=label, label=label, quantity=parse_quantity(text), place=at(9))


def converter(**changes: object) -> Converter:
    """A 10-bit converter at 5 V."""
    given: dict[str, object] = {
        "name": "adc",
        "kind": ConverterKind.ADC,
        "family": None,
        "bits": 10,
        "reference": Reference(
            name="vref",
            source=ReferenceSource.EXTERNAL,
            source_stated=False,
            voltage=parse_quantity("5 V"),
            pin=None,
            supply=None,
            place=at(5),
        ),
        "reference_gain": Fraction(1),
        "full_scale_counts": (1024,),
        "full_scale_stated": True,
        "coding": Coding.UNSIGNED,
        "coding_stated": False,
        "input_gain": Fraction(1),
        "justified": Justification.RIGHT,
        "justified_stated": False,
        "word_bits": 16,
        "word_bits_stated": False,
        "shift": 0,
        "first_transition": Fraction(1, 2),
        "code_offset": 0,
        "oversampling": Oversampling(),
        "clock": None,
        "sampling": None,
        "total_error": None,
        "place": at(7),
        "bits_place": at(8),
        "full_scale_place": at(8),
    }
    return Converter(**(given | changes))  # type: ignore[arg-type]


def channel(name: str, unit: str, ends: tuple[str, str], chain: tuple[Stage, ...]) -> Channel:
    """A channel on input 2 of the converter."""
    return Channel(
        name=name,
        converter=converter(),
        input=2,
        input_minus=None,
        pin="PC2",
        unit=parse_unit(unit),
        unit_stated=True,
        range=(parse_quantity(ends[0]), parse_quantity(ends[1])),
        allowed_error=None,
        hazard=None,
        pin_limit=None,
        sample_rate=None,
        nominal=None,
        like=None,
        chain=chain,
        firmware=Firmware(
            reading=("adc_read(2)",),
            value=(f"{name}_m{unit.lower()}",),
            unit=parse_scaled_unit(f"1 m{unit}"),
            place=at(20),
            reading_place=at(21),
            value_place=at(22),
        ),
        limits=(),
        place=at(15),
        range_place=at(16),
    )


BATTERY = channel(
    "battery",
    "V",
    ("0 V", "16 V"),
    (
        Divider(
            top=part("R21", "R21 27k 1%"),
            bottom=part("R22", "R22 10k 1%"),
            load=None,
            to=None,
            place=at(17),
        ),
    ),
)
DEPTH = channel(
    "depth",
    "m",
    ("0 m", "2 m"),
    (
        Linear(
            sensitivity=part("sensitivity", "8 mA/m"),
            offset=part("offset", "4 mA"),
            at=None,
            ratiometric=None,
            place=at(30),
        ),
        Shunt(resistance=part("R41", "R41 200 ohm 0.1%"), place=at(31)),
    ),
)
FLOW = channel("flow", "V", ("0 V", "5 V"), ())

FULL_SCALE = Leaf(
    name="ADC_MAX",
    text="1023",
    place=at(3, 18, HEADER),
    end_column=22,
    use=at(12, 24, "hatchery/src/battery.c"),
)
REFERENCE = Leaf(
    name="VREF_MV",
    text="4900",
    place=at(4, 18, HEADER),
    end_column=22,
    use=at(12, 16, "hatchery/src/battery.c"),
)


def judgement(
    of: Channel, gain_ratio: Fraction, allowed: float, explanation: Explanation
) -> Judgement:
    """A channel whose firmware reads `gain_ratio` times what the board delivers."""
    line = ideal(of)
    codes = line.all_codes
    quantity = line.quantity(codes)
    value = quantity * float(gain_ratio)
    error = value - quantity
    held = line.in_range(codes)
    inside = np.flatnonzero(held)
    spots = (inside[0], inside[len(inside) // 2], inside[-1])
    gain, offset = float(line.gain), float(line.offset)
    ratio = float(gain_ratio)
    return Judgement(
        conversion=conversion(of.name),
        ideal=line,
        codes=codes,
        words=codes,
        in_range=held,
        curve=Curve(values=codes, type=LONG, faults=()),
        quantity=quantity,
        value=value,
        error=error,
        allowed=np.full(len(codes), allowed),
        allowed_from="budget",
        scale=0.001,
        step=0.001,
        lsb=float(line.lsb),
        unit_from="board",
        hardware=Side(gain=gain, offset=offset),
        firmware=Side(gain=gain * ratio, offset=offset * ratio),
        worst_index=int(inside[np.argmax(np.abs(error[inside]))]),
        points=tuple(
            Point(
                at_count=int(codes[spot]),
                hardware=float(quantity[spot]),
                firmware=float(value[spot]),
            )
            for spot in spots
        ),
        explanation=explanation,
    )


def conversion(name: str) -> Conversion:
    """A conversion in the channel's own source file."""
    place = at(12, 5, f"hatchery/src/{name}.c")
    return Conversion(
        channel=name,
        result=f"{name}_mv",
        expression=Literal(value=0, type=LONG),
        place=place,
        function=f"{name}_update",
        formula=f"{name}_mv = (long)raw * VREF_MV * 37 / 10 / ADC_MAX",
        steps=(Step(place=place, message="scaled here"),),
    )


def case(of: Channel, judged: Judgement | None, reason: str | None = None) -> Case:
    """A channel's case."""
    conversions = () if judged is None else (judged.conversion,)
    trace = Trace(channel=of.name, conversions=conversions, reason=reason)
    return Case(channel=of, trace=trace, judgement=judged, reason=reason)


def finding(rule: str = "full-scale", **changes: object) -> Finding:
    """An error on the full-scale count."""
    given: dict[str, object] = {
        "rule": rule,
        "level": Level.WARNING,
        "channels": ("battery",),
        "message": "ADC_MAX is 1023, but 1024 counts stand for the reference",
        "place": FULL_SCALE.place,
        "found": "1023",
        "expected": "1024",
        "related": (Related(place=FULL_SCALE.use, message="used here"),),
        "replacement": Replacement(place=FULL_SCALE.place, end_column=22, text="1024"),
    }
    return Finding(**(given | changes))  # type: ignore[arg-type]


def low_reference() -> Finding:
    """An error on the reference, that can harm."""
    return finding(
        "reference-value",
        level=Level.ERROR,
        message="VREF_MV is 4900 mV, but reference vref is 5 V",
        place=REFERENCE.place,
        found="4900 mV",
        expected="5000 mV",
        related=(),
        replacement=Replacement(place=REFERENCE.place, end_column=22, text="5000"),
        hazard="a battery read low is overcharged and can vent gas",
    )


def unread_flow() -> Finding:
    """A channel that was not found."""
    return finding(
        "untraced",
        channels=("flow",),
        message="flow is untraced: adc_read(7) is not called anywhere",
        place=at(40),
        found="",
        expected="",
        related=(),
        replacement=None,
    )


SOURCE_LINES: Mapping[tuple[str, int], str] = {
    (HEADER, 3): "#define ADC_MAX  1023",
    (HEADER, 4): "#define VREF_MV\t 4900 /* [red]trimmed[/red] */",
}


def board(**changes: object) -> Board:
    """The board of the three channels."""
    given: dict[str, object] = {
        "name": "Trout hatchery monitor",
        "revision": "C",
        "file": BOARD_FILE,
        "firmware": ("src",),
        "include": (),
        "exclude": (),
        "define": (),
        "build": None,
        "coverage": Fraction(2),
        "target": Target(
            architecture=None,
            model=None,  # type: ignore[arg-type]
            clock=None,
            family=None,
            families=(),
            place=at(1),
        ),
        "supplies": (),
        "references": (),
        "converters": (converter(),),
        "channels": (BATTERY, DEPTH, FLOW),
        "constants": (),
        "variants": (),
        "variant": None,
        "deviations": (),
        "place": at(1),
    }
    return Board(**(given | changes))  # type: ignore[arg-type]


def outcome(*more: Finding) -> Outcome:
    """The whole run; `more` findings come after the usual three."""
    wrong = (
        _wrong(FULL_SCALE, "full-scale", "full-scale count", (0.0, 0.008, 0.016)),
        _wrong(REFERENCE, "reference-value", "reference vref", (0.0, -0.16, -0.32)),
    )
    explained = Explanation(
        wrong=wrong,
        roles=((FULL_SCALE, "full-scale"), (REFERENCE, "reference vref")),
    )
    findings = (finding(), low_reference(), unread_flow(), *more)
    open_ones = [one for one in findings if one.deviation is None]
    return Outcome(
        facts=Facts(
            board=board(),
            cases=(
                case(DEPTH, judgement(DEPTH, Fraction(1), 0.005, Explanation())),
                case(BATTERY, judgement(BATTERY, Fraction(49 * 1024, 50 * 1023), 0.1, explained)),
                case(FLOW, None, "adc_read(7) is not called anywhere"),
            ),
        ),
        findings=findings,
        statuses={
            "depth": Status.VERIFIED,
            "battery": Status.MISMATCHED,
            "flow": Status.UNTRACED,
        },
        reasons={"flow": "adc_read(7) is not called anywhere"},
        counts={
            "verified": 1,
            "mismatched": 1,
            "untraced": 1,
            **{level.value: sum(one.level is level for one in open_ones) for level in Level},
        },
        source_lines=SOURCE_LINES,
    )


def with_names(of: Outcome, name: str) -> Outcome:
    """The outcome with the battery renamed, to see what a hostile name does."""
    cases = tuple(
        replace(one, channel=replace(one.channel, name=name))
        if one.channel.name == "battery"
        else one
        for one in of.facts.cases
    )
    findings = tuple(
        replace(one, channels=tuple(name if each == "battery" else each for each in one.channels))
        for one in of.findings
    )
    statuses = {name if key == "battery" else key: status for key, status in of.statuses.items()}
    return replace(of, facts=replace(of.facts, cases=cases), findings=findings, statuses=statuses)


def _wrong(leaf: Leaf, rule: str, role: str, effect: tuple[float, float, float]) -> WrongConstant:
    return WrongConstant(
        rule=rule,
        role=role,
        text=leaf.name or leaf.text,
        place=leaf.place,
        leaf=leaf,
        found=leaf.text,
        expected="5000",
        level=Level.ERROR,
        effect=tuple(
            EffectPoint(at_count=count, error=error)
            for count, error in zip((0, 443, 885), effect, strict=True)
        ),
    )
