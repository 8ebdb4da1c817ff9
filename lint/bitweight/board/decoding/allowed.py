"""allowed_error: a sum of quantities and shares of the span or of the reading."""

import re
from dataclasses import dataclass
from fractions import Fraction

from bitweight.board.decoding.shapes import Text
from bitweight.board.decoding.tables import Schema, described, wrong
from bitweight.board.hardware import AllowedError
from bitweight.documents import Value
from bitweight.places import Place
from bitweight.quantities import Quantity, parse_quantity
from bitweight.units import Unit, named

_TERM = re.compile(r"(.+?%)(?:\s+of\s+(span|range|reading))?")
_MOST_TERMS = 8


@dataclass(frozen=True, slots=True, kw_only=True)
class AllowedText:
    """An allowed error as written; `absolute` are the terms with a unit, not checked yet."""

    absolute: tuple[Quantity, ...]
    of_span: Fraction
    of_reading: Fraction
    text: str


@dataclass(frozen=True, slots=True)
class AllowedShape:
    """ "50 mV", "1 %" (of the span of range), "0.5 % of reading + 20 mV"."""

    def decode(self, value: Value) -> AllowedText:
        """The terms, added up by what they are of."""
        text = Text().decode(value)
        terms = text.split("+")
        if len(terms) > _MOST_TERMS or len(text) > 200:
            raise wrong(value.place, f"{_EXPECTED}, found {described(value)}")
        absolute: list[Quantity] = []
        shares = {"span": Fraction(0), "reading": Fraction(0)}
        for term in terms:
            match = _TERM.fullmatch(term.strip())
            quantity = _amount(value, match[1] if match else term)
            if match is None:
                absolute.append(quantity)
            else:
                shares["reading" if match[2] == "reading" else "span"] += quantity.value
        if not absolute and not any(shares.values()):
            raise wrong(value.place, f"expected an allowed error above 0, found {described(value)}")
        return AllowedText(
            absolute=tuple(absolute),
            of_span=shares["span"],
            of_reading=shares["reading"],
            text=text,
        )

    def schema(self) -> Schema:
        """A string, with examples."""
        return {"type": "string", "examples": ["50 mV", "1 %", "0.5 % of reading + 20 mV"]}


_EXPECTED = 'expected an error like "50 mV", "1 %" or "0.5 % of reading + 20 mV"'


def _amount(value: Value, text: str) -> Quantity:
    try:
        quantity = parse_quantity(text)
    except ValueError:
        raise wrong(value.place, f"{_EXPECTED}, found {described(value)}") from None
    if quantity.difference < 0 or quantity.tolerance is not None:
        raise wrong(value.place, f"{_EXPECTED}, found {described(value)}")
    return quantity


def allowed_error(allowed: AllowedText, unit: Unit, place: Place) -> AllowedError:
    """The allowed error of a channel in its unit. Raises `BoardError` where a unit does not fit."""
    total = Fraction(0)
    for quantity in allowed.absolute:
        if not quantity.unit.fits(unit):
            message = f"is in {named(quantity.unit)} but the channel's unit is {named(unit)}"
            raise wrong(place, f"allowed_error {message}")
        total += quantity.difference / unit.scale
    return AllowedError(
        absolute=total,
        of_span=allowed.of_span,
        of_reading=allowed.of_reading,
        text=allowed.text,
        place=place,
    )
