"""Stages of a chain: the keys of every kind."""

import re
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from bitweight.board.decoding.measures import Measure, Points, Ratio, UnitWord
from bitweight.board.decoding.shapes import (
    Numbers,
    Sign,
    Text,
    one_of,
    table_schema,
)
from bitweight.board.decoding.tables import (
    Decoded,
    Field,
    Mistakes,
    Schema,
    described,
    nearest,
    read_table,
    shortened,
    wrong,
)
from bitweight.board.stages import Side, Topology
from bitweight.documents import Array, Scalar, Table, Value
from bitweight.quantities import Quantity, parse_number, parse_quantity
from bitweight.units import AMPERE, FARAD, KELVIN, OHM, VOLT

_POSITIVE_OHM = Measure("4k7", (OHM,), Sign.POSITIVE)
_ANY_OHM = Measure("4k7", (OHM,), Sign.NOT_NEGATIVE)
_LONGEST_CHAIN = 64


@dataclass(frozen=True, slots=True)
class OffsetText:
    """A voltage of its own, or a share of a supply: "500 mV", "v33 / 2"."""

    def decode(self, value: Value) -> "Quantity | ShareText":
        """The quantity, or the share with its source's name."""
        text = Text().decode(value)
        try:
            return parse_quantity(text)
        except ValueError:
            pass
        match = re.fullmatch(r"\s*([A-Za-z_][\w.\-]*)\s*(?:([*/])\s*(\S+))?\s*", text)
        if match is None:
            message = 'expected a quantity like "500 mV" or a share like "v33 / 2"'
            raise wrong(value.place, f"{message}, found {described(value)}")
        return ShareText(name=match[1], factor=_factor(value, match[2], match[3]), text=text)

    def schema(self) -> Schema:
        """A string."""
        return {"type": "string", "examples": ["500 mV", "v33 / 2"]}


@dataclass(frozen=True, slots=True, kw_only=True)
class ShareText:
    """A share whose source is not looked up yet."""

    name: str
    factor: Fraction
    text: str


def _factor(value: Value, operator: str | None, number: str | None) -> Fraction:
    if operator is None or number is None:
        return Fraction(1)
    try:
        factor = parse_number(number)
    except ValueError:
        raise wrong(value.place, f'expected a number, found "{shortened(number)}"') from None
    if operator == "*":
        return factor
    if not factor:
        raise wrong(value.place, f"expected a divisor other than 0, found {described(value)}")
    return 1 / factor


class StageFields:
    """Keys of stages; several kinds share some."""

    KIND = Field("kind", Text(), "which kind of stage", required=True)
    TOP = Field("top", _ANY_OHM, "the upper resistor", required=True)
    BOTTOM = Field("bottom", _ANY_OHM, "the lower resistor", required=True)
    LOAD = Field("load", _POSITIVE_OHM, "what lies across the lower resistor")
    TO = Field("to", Text(), "the supply or reference it ends at instead of ground")
    GAIN = Field("gain", Ratio(Sign.NOT_ZERO), "output for input")
    TOPOLOGY = Field("topology", one_of(Topology), "how the amplifier is wired")
    FEEDBACK = Field("feedback", _ANY_OHM, "resistor from output to inverting input")
    GROUND = Field("ground", _POSITIVE_OHM, "resistor from inverting input to ground")
    INPUT = Field("input", _POSITIVE_OHM, "resistor from signal to inverting input")
    OFFSET = Field("offset", OffsetText(), "what it adds at its output")
    RATIOMETRIC = Field("ratiometric", Text(), "the supply or reference that its output follows")
    RESISTANCE = Field("resistance", _POSITIVE_OHM, "the resistor", required=True)
    SENSITIVITY = Field(
        "sensitivity", Measure("10 mV/degC", (), Sign.NOT_ZERO), "output for input", required=True
    )
    AT = Field("at", Measure("0 degC"), "the quantity at which the output is the offset")
    CAPACITANCE = Field(
        "capacitance", Measure("100n", (FARAD,), Sign.POSITIVE), "the capacitor", required=True
    )
    R25 = Field("r25", _POSITIVE_OHM, "resistance at 25 degC", required=True)
    BETA = Field("beta", Ratio(Sign.POSITIVE, ((), KELVIN), "3950 K"), "beta constant, in kelvin")
    STEINHART = Field("steinhart_hart", Numbers(3, 4), "coefficients, three or four")
    WITH = Field("with", _POSITIVE_OHM, "the other resistor of its divider")
    SIDE = Field("side", one_of(Side), "where in the divider the sensor is")
    SUPPLY = Field("supply", Text(), "the supply or reference that feeds it")
    R0 = Field("r0", _POSITIVE_OHM, "resistance at 0 degC", required=True)
    CURRENT = Field("current", Measure("1 mA", (AMPERE,), Sign.POSITIVE), "what feeds it")
    POINTS = Field("points", Points(), "the curve, point by point", required=True)
    COEFFICIENTS = Field("coefficients", Numbers(1, 32), "lowest power first", required=True)
    UNIT_IN = Field("unit_in", UnitWord(), "unit of what enters", required=True)
    UNIT_OUT = Field("unit_out", UnitWord(), "unit of what leaves", required=True)
    VOLTAGE = Field(
        "voltage", Measure("1.1 V 3%", (VOLT,), Sign.POSITIVE), "the fixed voltage", required=True
    )


_F = StageFields
_COMPANION = (_F.WITH, _F.SIDE, _F.SUPPLY)
FIELDS: Mapping[str, tuple[Field[object], ...]] = {
    "divider": (_F.KIND, _F.TOP, _F.BOTTOM, _F.LOAD, _F.TO),
    "amplifier": (
        _F.KIND,
        _F.GAIN,
        _F.TOPOLOGY,
        _F.FEEDBACK,
        _F.GROUND,
        _F.INPUT,
        _F.OFFSET,
        _F.RATIOMETRIC,
    ),
    "shunt": (_F.KIND, _F.RESISTANCE),
    "linear": (_F.KIND, _F.SENSITIVITY, _F.OFFSET, _F.AT, _F.RATIOMETRIC),
    "thermistor": (_F.KIND, _F.R25, _F.BETA, _F.STEINHART, *_COMPANION),
    "rtd": (_F.KIND, _F.R0, _F.CURRENT, *_COMPANION),
    "low-pass": (_F.KIND, _F.RESISTANCE, _F.CAPACITANCE),
    "table": (_F.KIND, _F.POINTS, *_COMPANION),
    "polynomial": (_F.KIND, _F.COEFFICIENTS, _F.UNIT_IN, _F.UNIT_OUT),
    "against": (_F.KIND, _F.VOLTAGE),
}
"""The keys of every kind of stage."""


@dataclass(frozen=True, slots=True)
class ChainTables:
    """A list of stages, each a table whose `kind` says which keys it has."""

    def decode(self, value: Value) -> tuple[Decoded | None, ...]:
        """The fields of every stage."""
        mistakes = Mistakes()
        found = self.read(value, mistakes, "")
        mistakes.raise_any()
        return found or ()

    def read(
        self, value: Value, mistakes: Mistakes, path: str
    ) -> tuple[Decoded | None, ...] | None:
        """The fields that are right of every stage; None stands for one of no known kind."""
        many = len(value.items) if isinstance(value, Array) else 0
        if not isinstance(value, Array) or many > _LONGEST_CHAIN:
            most = f"at most {_LONGEST_CHAIN} stages" if many else "a list of stages"
            mistakes.add(value.place, f"{path}expected {most}, found {described(value)}")
            return None
        return tuple(_stage_fields(item, mistakes, path) for item in value.items)

    def schema(self) -> Schema:
        """An array of objects, one shape for each kind."""
        kinds = []
        for kind, fields in FIELDS.items():
            schema = table_schema(fields)
            properties = schema["properties"]
            assert isinstance(properties, dict)
            kinds.append({**schema, "properties": {**properties, "kind": {"const": kind}}})
        return {"type": "array", "items": {"oneOf": kinds}, "maxItems": _LONGEST_CHAIN}


def _stage_fields(value: Value, mistakes: Mistakes, path: str) -> Decoded | None:
    """One stage's fields; without a known kind none of its keys can be judged."""
    if not isinstance(value, Table):
        mistakes.add(
            value.place, f"expected a stage like {{ kind = ... }}, found {described(value)}"
        )
        return None
    kind = value.get("kind")
    if kind is None:
        mistakes.add(value.place, f"missing key 'kind' in a stage: one of {', '.join(FIELDS)}")
        return None
    name = kind.value if isinstance(kind, Scalar) else None
    if not isinstance(name, str) or name not in FIELDS:
        hint = nearest(name, FIELDS) if isinstance(name, str) else ""
        known = hint or f"; known kinds: {', '.join(FIELDS)}"
        mistakes.add(kind.place, f"unknown kind of stage, found {described(kind)}{known}")
        return None
    article = "an" if name in ("amplifier", "rtd", "against") else "a"
    return read_table(value, FIELDS[name], f"{article} {name} stage", mistakes, path)
