"""Small builders of default facts for tests: a board, a channel, C expressions, findings.

Everything is invented: a trout hatchery with a 10-bit converter at 5 V. No file is read and no C is
parsed; a test says only what matters to it and the rest stands as here.
"""

from collections.abc import Callable, Sequence
from fractions import Fraction
from typing import Any

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Choose, Code, Expression, Leaf, Literal, Purpose
from bitweight.arithmetic.literals import literal
from bitweight.arithmetic.types import CType, DataModel
from bitweight.board.converters import (
    Coding,
    Converter,
    ConverterKind,
    Justification,
    Oversampling,
)
from bitweight.board.hardware import (
    AllowedError,
    Board,
    Channel,
    Deviation,
    Firmware,
    Limit,
    LimitMeasure,
    Target,
)
from bitweight.board.parts import Part, Reference, ReferenceSource
from bitweight.board.stages import Amplifier, Divider, Linear, Shunt, Stage
from bitweight.judge.cases import Case, Facts, judge_case
from bitweight.judge.findings import Finding, Level
from bitweight.limits import Limits
from bitweight.places import Place
from bitweight.quantities import parse_quantity, parse_scaled_unit
from bitweight.trace.conversions import Conversion, Step, Trace
from bitweight.units import parse_unit

BOARD_FILE = "board.toml"
SOURCE = "src/tank.c"
HEADER = "src/board_config.h"
INT32 = DataModel()
"""A target with an int of 32 bits and a double of 64."""
AVR = DataModel(int_bits=16, double_bits=32)
"""A target with an int of 16 bits, where a double is a float."""


def at(line: int, column: int = 1, file: str = SOURCE) -> Place:
    """A place in the source file unless told."""
    return Place(file, line, column)


def part(label: str, text: str) -> Part:
    """A part of the board file."""
    return Part(key=label, label=label, quantity=parse_quantity(text), place=at(9, 1, BOARD_FILE))


def reference(voltage: str = "5 V", **changes: Any) -> Reference:
    """An external reference without a stated source."""
    given: dict[str, Any] = {
        "name": "vref",
        "source": ReferenceSource.EXTERNAL,
        "source_stated": False,
        "voltage": parse_quantity(voltage),
        "pin": None,
        "supply": None,
        "place": at(5, 1, BOARD_FILE),
    }
    return Reference(**(given | changes))


def converter(bits: int = 10, **changes: Any) -> Converter:
    """An unsigned, right-justified converter at 5 V; full scale is 2**bits, half if signed."""
    coding = changes.get("coding", Coding.UNSIGNED)
    given: dict[str, Any] = {
        "name": "adc",
        "kind": ConverterKind.ADC,
        "family": None,
        "bits": bits,
        "reference": reference(),
        "reference_gain": Fraction(1),
        "full_scale_counts": (1 << (bits - coding.signed),),
        "full_scale_stated": True,
        "coding": coding,
        "coding_stated": True,
        "input_gain": Fraction(1),
        "justified": Justification.RIGHT,
        "justified_stated": True,
        "word_bits": 16 if bits <= 16 else 32,
        "word_bits_stated": True,
        "shift": 0,
        "first_transition": Fraction(1, 2),
        "code_offset": 0,
        "oversampling": Oversampling(),
        "clock": None,
        "sampling": None,
        "total_error": None,
        "place": at(7, 1, BOARD_FILE),
        "bits_place": at(8, 1, BOARD_FILE),
        "full_scale_place": at(8, 1, BOARD_FILE),
    }
    return Converter(**(given | changes))


def channel(
    name: str = "tank",
    *,
    unit: str = "V",
    ends: tuple[str, str] | None = ("0 V", "5 V"),
    chain: tuple[Stage, ...] = (),
    count: str | None = "mV",
    allowed: str | None = None,
    **changes: Any,
) -> Channel:
    """A channel straight on its converter whose result counts millivolts."""
    given: dict[str, Any] = {
        "name": name,
        "converter": converter(),
        "input": 3,
        "input_minus": None,
        "pin": "PC3",
        "unit": parse_unit(unit),
        "unit_stated": True,
        "range": None if ends is None else (parse_quantity(ends[0]), parse_quantity(ends[1])),
        "allowed_error": None if allowed is None else allowed_error(allowed, unit),
        "hazard": None,
        "pin_limit": None,
        "sample_rate": None,
        "nominal": None,
        "like": None,
        "chain": chain,
        "firmware": firmware(count, value=(f"{name}_held",)),
        "limits": (),
        "place": at(15, 1, BOARD_FILE),
        "range_place": at(16, 1, BOARD_FILE),
    }
    return Channel(**(given | changes))


def firmware(count: str | None = "mV", **changes: Any) -> Firmware:
    """The firmware's side of a channel; `count` is what one count of its result stands for."""
    given: dict[str, Any] = {
        "reading": ("adc_read(3)",),
        "unit": None if count is None else parse_scaled_unit(count),
        "place": at(20, 1, BOARD_FILE),
        "reading_place": at(21, 1, BOARD_FILE),
        "value_place": at(22, 1, BOARD_FILE),
    }
    return Firmware(**(given | changes))


def allowed_error(text: str, unit: str) -> AllowedError:
    """ "50 mV", "1 %" of the span, or "0.5 % of reading"."""
    quantity = parse_quantity(text.removesuffix(" of reading"))
    share = quantity.value if text.endswith(("%", "reading")) else Fraction(0)
    of_reading = text.endswith("reading")
    return AllowedError(
        absolute=Fraction(0) if share else quantity.within(parse_unit(unit)),
        of_span=Fraction(0) if of_reading else share,
        of_reading=share if of_reading else Fraction(0),
        text=text,
        place=at(17, 1, BOARD_FILE),
    )


def limit(name: str, quantity: str, constant: str = "LIMIT", **changes: Any) -> Limit:
    """A limit in counts of the converter."""
    given: dict[str, Any] = {
        "name": name,
        "at": parse_quantity(quantity),
        "constant": constant,
        "measure": LimitMeasure.COUNTS,
        "bits": None,
        "place": at(25, 1, BOARD_FILE),
        "constant_place": at(26, 1, BOARD_FILE),
    }
    return Limit(**(given | changes))


def board(*channels: Channel, model: DataModel = INT32, **changes: Any) -> Board:
    """A board of some channels."""
    given: dict[str, Any] = {
        "name": "hatchery monitor",
        "revision": None,
        "file": BOARD_FILE,
        "firmware": ("src",),
        "include": (),
        "exclude": (),
        "define": (),
        "build": None,
        "coverage": Fraction(2),
        "target": Target(
            architecture=None,
            model=model,
            clock=None,
            family=None,
            families=(),
            place=at(2, 1, BOARD_FILE),
        ),
        "supplies": (),
        "references": (),
        "converters": (),
        "channels": channels,
        "constants": (),
        "variants": (),
        "variant": None,
        "deviations": (),
        "place": at(1, 1, BOARD_FILE),
    }
    return Board(**(given | changes))


def deviation(rule: str, where: str, reason: str = "known", **changes: Any) -> Deviation:
    """A deviation of the board file without an end."""
    given: dict[str, Any] = {
        "rule": rule,
        "where": where,
        "reason": reason,
        "until": None,
        "place": at(40, 1, BOARD_FILE),
    }
    return Deviation(**(given | changes))


def finding(rule: str = "full-scale", **changes: Any) -> Finding:
    """A warning about the tank on a constant of the header."""
    given: dict[str, Any] = {
        "rule": rule,
        "level": Level.WARNING,
        "channels": ("tank",),
        "message": "ADC_MAX is 1023, but 1024 counts stand for the reference",
        "place": at(3, 18, HEADER),
        "found": "1023",
        "expected": "1024",
    }
    return Finding(**(given | changes))


def divider(top: str = "30k", bottom: str = "10k") -> Divider:
    """A divider to ground."""
    return Divider(top=part("R1", top), bottom=part("R2", bottom), load=None, to=None, place=at(18))


def amplifier(gain: str = "1", offset: str | None = None) -> Amplifier:
    """An amplifier of a stated gain, with an offset at its output."""
    return Amplifier(
        gain=part("gain", gain),
        topology=None,
        feedback=None,
        other=None,
        offset=None if offset is None else part("offset", offset),
        ratiometric=None,
        place=at(18),
    )


def shunt(resistance: str) -> Shunt:
    """A shunt."""
    return Shunt(resistance=part("R3", resistance), place=at(18))


def linear(sensitivity: str, offset: str | None = None) -> Linear:
    """A sensor with a straight line."""
    return Linear(
        sensitivity=part("sensitivity", sensitivity),
        offset=None if offset is None else part("offset", offset),
        at=None,
        ratiometric=None,
        place=at(18),
    )


class C:
    """C expressions of one data model, made as lowering makes them: every operator on its own line.

    Lines count up from 30 in the order in which the operators are made.
    """

    def __init__(self, model: DataModel = INT32) -> None:
        self.model = model
        self._line = 30

    def type(self, name: str) -> CType:
        """A type by its C name."""
        found = self.model.named(tuple(name.split()))
        assert found is not None, name
        return found

    def code(self, type_: str = "uint16_t", *channels: str) -> Code:
        """A reading of the tank (or of the channels given)."""
        return Code(
            channels=channels or ("tank",),
            text="adc_read(3)",
            type=self.type(type_),
            place=at(20, 15),
        )

    def number(self, text: str, name: str | None = None) -> Literal:
        """A constant as C spells it, from a #define of the header where it has a name."""
        value, type_ = literal(text, self.model)
        line = self._next()
        place = at(line, 18, HEADER) if name else at(line, 12)
        leaf = Leaf(
            name=name,
            text=text,
            place=place,
            end_column=place.column + len(text),
            use=at(line, 12),
            names=(name,) if name else (),
        )
        return Literal(value=value, type=type_, leaf=leaf)

    def _operand(self, operand: Expression | str) -> Expression:
        return self.number(operand) if isinstance(operand, str) else operand

    def op(self, left: Expression | str, operator: str, right: Expression | str) -> Expression:
        """A binary operator; texts are constants."""
        one, two = self._operand(left), self._operand(right)
        return building.binary(self.model, operator, one, two, at(self._next(), 20))

    def cast(self, type_: str, operand: Expression) -> Expression:
        """A cast."""
        place = at(self._next(), 10)
        return building.convert(operand, self.type(type_), Purpose.CAST, place)

    def store(self, type_: str, operand: Expression) -> Expression:
        """An assignment to an object of a type."""
        place = at(self._next(), 5)
        return building.convert(operand, self.type(type_), Purpose.STORE, place)

    def choose(
        self, condition: Expression, then: Expression | str, other: Expression | str
    ) -> Expression:
        """`condition ? then : other`."""
        arms = self._operand(then), self._operand(other)
        made = building.choose(self.model, condition, *arms, at(self._next(), 22))
        assert isinstance(made, Choose)
        return made

    def _next(self) -> int:
        self._line += 1
        return self._line


def conversion(expression: Expression, of: str = "tank", **changes: Any) -> Conversion:
    """A conversion that ends in `<channel>_held`."""
    given: dict[str, Any] = {
        "channel": of,
        "result": f"{of}_held",
        "expression": expression,
        "place": at(29, 5),
        "function": f"{of}_update",
        "formula": f"{of}_held = ...",
        "steps": (Step(place=at(20, 15), message="the reading"),),
    }
    return Conversion(**(given | changes))


def trace(*expressions: Expression, of: str = "tank", **changes: Any) -> Trace:
    """What was traced for a channel: one conversion for each expression."""
    given: dict[str, Any] = {
        "channel": of,
        "conversions": tuple(conversion(one, of) for one in expressions),
    }
    return Trace(**(given | changes))


def case(
    *expressions: Expression,
    of: Channel | None = None,
    model: DataModel = INT32,
    among: Sequence[Channel] = (),
    traced: Trace | None = None,
) -> Case:
    """The case of a channel (the tank unless told) whose conversions are these expressions."""
    judged = channel() if of is None else of
    found = trace(*expressions, of=judged.name) if traced is None else traced
    return judge_case(judged, found, board(judged, *among, model=model), model, Limits())


def facts(*cases: Case, **changes: Any) -> Facts:
    """The facts of a run over some cases."""
    given: dict[str, Any] = {"board": board(*(one.channel for one in cases)), "cases": cases}
    return Facts(**(given | changes))


def findings_of(
    check: Callable[[Case, Facts], Any], *cases: Case, **changes: Any
) -> tuple[Finding, ...]:
    """What a channel rule says about some cases."""
    run = facts(*cases, **changes)
    return tuple(found for one in cases for view in one.each for found in check(view, run))
