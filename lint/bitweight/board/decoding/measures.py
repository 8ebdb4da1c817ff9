"""What quantities and units look like in a board file."""

import itertools
from dataclasses import dataclass

from bitweight.board.decoding.shapes import Number, Sign, Text, each, spoken
from bitweight.board.decoding.tables import Schema, described, shortened, wrong
from bitweight.documents import Array, Scalar, Value
from bitweight.quantities import Quantity, parse_quantity, parse_scaled_unit
from bitweight.units import Dimension, Unit, coherent, parse_unit


@dataclass(frozen=True, slots=True)
class Measure:
    """A quantity of one of some kinds (any kind when none is given), with its unit in the text."""

    example: str
    kinds: tuple[Dimension, ...] = ()
    sign: Sign = Sign.ANY

    def decode(self, value: Value) -> Quantity:
        """The quantity."""
        if not isinstance(value, Scalar) or not isinstance(value.value, str):
            raise wrong(value.place, f"{self._expected()}, found {described(value)}")
        quantity = spoken(value, parse_quantity, value.value)
        if self.kinds and quantity.unit.dimension not in self.kinds:
            raise wrong(value.place, f"{self._expected()}, found {described(value)}")
        if quantity.unit.zero and quantity.value < 0:
            found = shortened(quantity.text)
            raise wrong(value.place, f'expected no less than -273.15 degC, found "{found}"')
        if not self.sign.holds(quantity.difference):
            found = shortened(quantity.text)
            raise wrong(value.place, f'expected a value {self.sign.value}, found "{found}"')
        if self.sign is Sign.POSITIVE and quantity.half_width >= quantity.difference:
            raise wrong(value.place, f'the tolerance reaches 0, found "{shortened(quantity.text)}"')
        return quantity

    def schema(self) -> Schema:
        """A string, with an example."""
        return {"type": "string", "examples": [self.example]}

    def _expected(self) -> str:
        units = " or ".join(coherent(kind).text for kind in self.kinds)
        of = f" in {units}" if units else " with its unit"
        return f'expected a quantity{of}, like "{self.example}"'


@dataclass(frozen=True, slots=True)
class Ratio:
    """A number that needs no unit and may have a tolerance: 11, or "11 1%"."""

    sign: Sign = Sign.ANY
    kinds: tuple[Dimension, ...] = ((),)
    example: str = "11 1%"

    def decode(self, value: Value) -> Quantity:
        """The number as a quantity, without unit where it has none."""
        if isinstance(value, Scalar) and isinstance(value.value, str):
            return Measure(self.example, self.kinds, self.sign).decode(value)
        number = Number(self.sign).decode(value)
        return Quantity(value=number, unit=Unit(text=""), text=str(float(number)))

    def schema(self) -> Schema:
        """A number or a string."""
        return {"anyOf": [{"type": "number"}, {"type": "string", "examples": [self.example]}]}


@dataclass(frozen=True, slots=True)
class Ends:
    """The low and the high end of an interval."""

    example: str
    kinds: tuple[Dimension, ...] = ()

    def decode(self, value: Value) -> tuple[Quantity, Quantity]:
        """Both ends, of one kind, the low one first."""
        if not isinstance(value, Array) or len(value.items) != 2:
            message = f"expected a low and a high end like {self.example}, found {described(value)}"
            raise wrong(value.place, message)
        low, high = each(value, Measure("16 V", self.kinds))
        if not low.unit.fits(high.unit):
            raise wrong(value.place, f"the low end is in {low.unit}, the high end in {high.unit}")
        for end in (low, high):
            if end.tolerance is not None:
                found = shortened(end.text)
                raise wrong(value.place, f'an end takes no tolerance, found "{found}"')
        if low.value >= high.value:
            message = f'expected the low end first, found "{low.text}" before "{high.text}"'
            raise wrong(value.place, message)
        return low, high

    def schema(self) -> Schema:
        """Two strings."""
        return {"type": "array", "items": {"type": "string"}, "minItems": 2, "maxItems": 2}


@dataclass(frozen=True, slots=True)
class UnitWord:
    """A unit, where `scaled` with a number in front: "0.1 kPa"."""

    scaled: bool = False

    def decode(self, value: Value) -> Unit:
        """The unit."""
        text = Text().decode(value)
        return spoken(value, parse_scaled_unit if self.scaled else parse_unit, text)

    def schema(self) -> Schema:
        """A string."""
        return {"type": "string", "examples": ["0.1 kPa" if self.scaled else "kPa"]}


@dataclass(frozen=True, slots=True)
class Points:
    """A curve by at least two pairs of quantities."""

    def decode(self, value: Value) -> tuple[tuple[Quantity, Quantity], ...]:
        """The pairs in order; units of one kind in each place, the first rising or falling."""
        if not isinstance(value, Array) or not 2 <= len(value.items) <= 4096:
            message = 'expected pairs like ["0 degC", "27.2 kohm"], at least two'
            raise wrong(value.place, f"{message}, found {described(value)}")
        points = each(value, _Pair())
        for side, name in ((0, "first"), (1, "second")):
            if len({point[side].unit.dimension for point in points}) > 1:
                raise wrong(
                    value.place, f"the {name} quantities of the points are of several kinds"
                )
        steps = [b[0].value - a[0].value for a, b in itertools.pairwise(points)]
        if not (all(step > 0 for step in steps) or all(step < 0 for step in steps)):
            raise wrong(
                value.place, "expected the first quantities to rise, or to fall, throughout"
            )
        return points

    def schema(self) -> Schema:
        """An array of pairs."""
        return {"type": "array", "items": _Pair().schema(), "minItems": 2, "maxItems": 4096}


@dataclass(frozen=True, slots=True)
class _Pair:
    """Two quantities of any kind."""

    def decode(self, value: Value) -> tuple[Quantity, Quantity]:
        if not isinstance(value, Array) or len(value.items) != 2:
            message = 'expected a pair like ["0 degC", "27.2 kohm"]'
            raise wrong(value.place, f"{message}, found {described(value)}")
        first, second = each(value, Measure("27.2 kohm"))
        return first, second

    def schema(self) -> Schema:
        return {"type": "array", "items": {"type": "string"}, "minItems": 2, "maxItems": 2}
