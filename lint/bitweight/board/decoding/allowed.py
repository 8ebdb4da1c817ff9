"""allowed_error: a sum of quantities and shares of the span or of the reading."""

import re
from dataclasses import dataclass, replace
from fractions import Fraction

from bitweight.board.chains import ideal, not_computed
from bitweight.board.decoding.shapes import Text
from bitweight.board.decoding.tables import Mistakes, Schema, described, wrong
from bitweight.board.hardware import AllowedError, Channel
from bitweight.documents import Value
from bitweight.places import Place
from bitweight.quantities import Quantity, parse_quantity
from bitweight.units import LSB, Unit, named

_SHARE = re.compile(r"([\d.][^%\s]*\s*(?:%|ppm))(?:\s+of\s+(span|range|reading))?")
_SIGN = re.compile(r"\s*(?:±|\+/-|\+-)")
_MOST_TERMS = 8
_EXPECTED = 'expected an error like "50 mV", "1 %", "2 LSB" or "0.5 % of reading + 20 mV"'


@dataclass(frozen=True, slots=True, kw_only=True)
class AllowedText:
    """An allowed error as written; `absolute` are the terms with a unit, not checked yet.

    `of_span` and `of_reading` are plain ratios, `steps` is a number of LSB.
    """

    absolute: tuple[Quantity, ...]
    of_span: Fraction
    of_reading: Fraction
    steps: Fraction
    text: str


@dataclass(frozen=True, slots=True)
class AllowedShape:
    """ "50 mV", "1 %" (of the span of range), "2 LSB", "0.5 % of reading + 20 mV"."""

    def decode(self, value: Value) -> AllowedText:
        """The terms, added up by what they are of."""
        text = Text().decode(value)
        terms = _SIGN.sub("", text, count=1).split("+") if _SIGN.match(text) else text.split("+")
        if len(terms) > _MOST_TERMS or len(text) > 200:
            raise wrong(value.place, f"{_EXPECTED}, found {described(value)}")
        quantities: list[Quantity] = []
        shares = {"span": Fraction(0), "reading": Fraction(0)}
        for term in terms:
            match = _SHARE.fullmatch(term.strip())
            if match is None:
                quantities.append(_amount(value, term))
            else:
                shares["reading" if match[2] == "reading" else "span"] += _share(value, match[1])
        if not any(shares.values()) and not any(one.difference for one in quantities):
            raise wrong(value.place, f"expected an allowed error above 0, found {described(value)}")
        steps = [one for one in quantities if one.unit.dimension == LSB]
        return AllowedText(
            absolute=tuple(one for one in quantities if one not in steps),
            of_span=shares["span"],
            of_reading=shares["reading"],
            steps=sum((one.value for one in steps), Fraction(0)),
            text=text,
        )

    def schema(self) -> Schema:
        """A string, with examples."""
        return {"type": "string", "examples": ["50 mV", "1 %", "0.5 % of reading + 20 mV"]}


def _share(value: Value, text: str) -> Fraction:
    """A plain ratio below 1."""
    share = _amount(value, text).value
    if share >= 1:
        raise wrong(value.place, f"expected a share below 100 %, found {described(value)}")
    return share


def _amount(value: Value, text: str) -> Quantity:
    """A quantity of one term; a share that is not spelled as one is none."""
    try:
        quantity = parse_quantity(text)
    except ValueError:
        raise wrong(value.place, f"{_EXPECTED}, found {described(value)}") from None
    strange = "%" in quantity.unit.text and not _SHARE.fullmatch(text.strip())
    if quantity.difference < 0 or quantity.tolerance is not None or strange:
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


def with_steps(channel: Channel, steps: Fraction, mistakes: Mistakes) -> Channel:
    """The channel whose allowed error grows by a number of its own LSB."""
    allowed = channel.allowed_error
    if allowed is None or not steps:
        return channel
    if not_computed(channel) is not None:
        message = "allowed_error in LSB needs a channel whose LSB is the same everywhere"
        mistakes.add(allowed.place, message)
        return channel
    absolute = allowed.absolute + steps * ideal(channel).lsb
    return replace(channel, allowed_error=replace(allowed, absolute=absolute))
