"""Units of measurement: words, prefixes, products and quotients, exact conversion between them.

Text like "mV/degC" enters, a `Unit` leaves. Arithmetic happens in coherent units: V, A, s, K, Pa,
m, g, l, N and every word that is not known, which is a unit of its own and takes no prefix apart.
"""

import re
from dataclasses import dataclass, replace
from fractions import Fraction

Dimension = tuple[tuple[str, int], ...]
"""Coherent base units with their exponents, sorted by name; empty for a plain number."""

_LONGEST = 80
_DEEPEST = 4
"""Characters and brackets of one unit text; far above what anybody writes by hand."""


class UnitError(ValueError):
    """A text that is no unit, or two units of which neither converts to the other."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Unit:
    """A unit: `scale` of it in the coherent unit, and where its zero stands there.

    `zero` is 273.15 for the degree Celsius (in K) and 0 for all others. `below` is what stands
    under the fraction bar as written: "mV/degC" is a sensitivity to a temperature. `text` is the
    unit as shown.
    """

    text: str
    dimension: Dimension = ()
    scale: Fraction = Fraction(1)
    zero: Fraction = Fraction(0)
    below: Dimension = ()

    def __str__(self) -> str:
        return self.text

    def fits(self, other: "Unit") -> bool:
        """Whether quantities of the two units are of one kind."""
        return self.dimension == other.dimension

    def convert_to(self, other: "Unit") -> Fraction:
        """How many `other` one of this unit is, as a difference: 1 degC is a step of 1 K."""
        if not self.fits(other):
            raise UnitError(f"{named(self)} does not convert to {named(other)}")
        return self.scale / other.scale

    def offset_to(self, other: "Unit") -> Fraction:
        """What stands in `other` where this unit reads 0: 0 K is -273.15 degC."""
        self.convert_to(other)
        return (self.zero - other.zero) / other.scale

    def times(self, factor: Fraction) -> "Unit":
        """The unit `factor` times as large: "0.1 kPa" as the step of a counter."""
        return replace(self, scale=self.scale * factor)


def named(unit: Unit) -> str:
    """The unit for a sentence, where a plain number has no text."""
    return unit.text or "a plain number"


def product(*dimensions: Dimension) -> Dimension:
    """The dimension of a product."""
    powers: dict[str, int] = {}
    for base, power in (item for dimension in dimensions for item in dimension):
        powers[base] = powers.get(base, 0) + power
    return tuple(sorted((base, power) for base, power in powers.items() if power))


def inverse(dimension: Dimension, power: int = -1) -> Dimension:
    """The dimension of a reciprocal, or of another power."""
    return product(tuple((base, own * power) for base, own in dimension))


VOLT: Dimension = (("V", 1),)
AMPERE: Dimension = (("A", 1),)
KELVIN: Dimension = (("K", 1),)
OHM: Dimension = product(VOLT, inverse(AMPERE))
SECOND: Dimension = (("s", 1),)
HERTZ: Dimension = inverse(SECOND)
FARAD: Dimension = product(AMPERE, SECOND, inverse(VOLT))
HENRY: Dimension = product(VOLT, SECOND, inverse(AMPERE))
WATT: Dimension = product(VOLT, AMPERE)
LSB: Dimension = (("LSB", 1),)
CYCLES: Dimension = (("cycles", 1),)

_ABSOLUTE_ZERO = Fraction(27315, 100)

_PREFIXED = (
    Unit(text="V", dimension=VOLT),
    Unit(text="A", dimension=AMPERE),
    Unit(text="ohm", dimension=OHM),
    Unit(text="F", dimension=FARAD),
    Unit(text="H", dimension=HENRY),
    Unit(text="Hz", dimension=HERTZ),
    Unit(text="s", dimension=SECOND),
    Unit(text="W", dimension=WATT),
    Unit(text="degC", dimension=KELVIN, zero=_ABSOLUTE_ZERO),
    Unit(text="K", dimension=KELVIN),
    Unit(text="Pa", dimension=(("Pa", 1),)),
    Unit(text="bar", dimension=(("Pa", 1),), scale=Fraction(100_000)),
    Unit(text="m", dimension=(("m", 1),)),
    Unit(text="g", dimension=(("g", 1),)),
    Unit(text="l", dimension=(("l", 1),)),
    Unit(text="N", dimension=(("N", 1),)),
)
_WHOLE = (
    Unit(text="%", scale=Fraction(1, 100)),
    Unit(text="ppm", scale=Fraction(1, 1_000_000)),
    Unit(text="LSB", dimension=LSB),
    Unit(text="cycles", dimension=CYCLES),
)
_KNOWN = {unit.text: unit for unit in (*_PREFIXED, *_WHOLE)}
_PREFIXABLE = frozenset(unit.text for unit in _PREFIXED)
_OHM_WORDS = ("Ω", "\u2126", "Ohm", "OHM", "ohms", "Ohms", "OHMS")
_SYNONYMS = {**dict.fromkeys(_OHM_WORDS, "ohm"), "°C": "degC", "cycle": "cycles"}

PREFIXES = {
    "f": Fraction(1, 10**15),
    "p": Fraction(1, 10**12),
    "n": Fraction(1, 10**9),
    "u": Fraction(1, 10**6),
    "µ": Fraction(1, 10**6),
    "\u03bc": Fraction(1, 10**6),
    "m": Fraction(1, 1000),
    "c": Fraction(1, 100),
    "d": Fraction(1, 10),
    "h": Fraction(100),
    "k": Fraction(1000),
    "M": Fraction(10**6),
    "G": Fraction(10**9),
    "T": Fraction(10**12),
}
"""SI prefixes that board files use; the micro sign and the Greek letter are both read."""

_OWN_WORDS = frozenset({"pH"})
"""Words that would split into a prefix and a known unit but are units of their own."""

_WORD = re.compile(r"[^\W\d]|[%°\u2126]")
_POWERS = {"²": 2, "³": 3}
_TOKEN = re.compile(
    r"\s*(?:(?P<word>(?:[^\W\d²³]|[%°\u2126])(?:[^\W²³]|[%°\u2126])*)(?P<power>\^-?\d{1,2}|[²³])?"
    r"|(?P<operator>[*·/()]))"
)


def known(word: str) -> Unit | None:
    """The unit of one word, its prefix taken apart, or None when the word is a unit of its own."""
    if word in _OWN_WORDS:
        return None
    whole = _KNOWN.get(_SYNONYMS.get(word, word))
    if whole is not None:
        return whole
    rest = _SYNONYMS.get(word[1:], word[1:])
    if word[:1] in PREFIXES and rest in _PREFIXABLE:
        unit = _KNOWN[rest]
        prefix = "u" if word[0] in "µ\u03bc" else word[0]
        return replace(unit, text=prefix + rest, scale=unit.scale * PREFIXES[word[0]])
    return None


def parse_unit(text: str) -> Unit:
    """The unit that a text names, without a number in front; "" is a plain number.

    Raises `UnitError` for anything else than words joined by `*`, `/` and brackets.
    """
    stripped = text.strip()
    if len(stripped) > _LONGEST:
        raise UnitError("expected a unit like V, kPa or mV/degC, found a very long text")
    tokens = _tokens(stripped)
    if not tokens:
        return Unit(text="")
    unit, rest = _product(tokens, 0, 0)
    if rest != len(tokens):
        raise _no_unit(text)
    zero = unit.zero if len(tokens) == 1 else Fraction(0)
    shown = unit.text if len(tokens) == 1 else stripped
    return replace(unit, text=shown, zero=zero)


def coherent(dimension: Dimension) -> Unit:
    """The coherent unit of a dimension, named by a known unit where there is one."""
    for unit in _PREFIXED:
        if unit.dimension == dimension and unit.scale == 1 and not unit.zero:
            return unit
    return Unit(text=_spelled(dimension), dimension=dimension)


def under_bar(unit: Unit) -> Unit:
    """What stands under the bar of a unit: degC for "mV/degC", with its own zero."""
    _, _, below = unit.text.partition("/")
    try:
        return parse_unit(below.strip("() "))
    except UnitError:
        return coherent(unit.below)


def takes_prefix(unit: Unit) -> bool:
    """Whether the unit is a known one without a prefix, so that it can be shown with any."""
    return unit.text in _PREFIXABLE and unit == _KNOWN[unit.text] and unit.text not in ("degC", "K")


def _spelled(dimension: Dimension) -> str:
    above = [_powered(base, power) for base, power in dimension if power > 0]
    below = [_powered(base, -power) for base, power in dimension if power < 0]
    return "/".join(["*".join(above) or "1", *below]) if dimension else ""


def _powered(base: str, power: int) -> str:
    return base if power == 1 else f"{base}^{power}"


def _tokens(text: str) -> list[tuple[str, str]]:
    """Words with their power and operators, in order."""
    found: list[tuple[str, str]] = []
    offset = 0
    while offset < len(text):
        match = _TOKEN.match(text, offset)
        if match is None:
            raise _no_unit(text)
        offset = match.end()
        found.append((match["word"] or match["operator"], match["power"] or ""))
    return found


def _no_unit(text: str) -> UnitError:
    return UnitError(f'expected a unit like V, kPa or mV/degC, found "{text.strip()}"')


def _product(tokens: list[tuple[str, str]], start: int, depth: int) -> tuple[Unit, int]:
    """factor (("*" | "/") factor)*, joined from the left."""
    unit, position = Unit(text=""), start
    divide = position < len(tokens) and tokens[position][0] == "/"
    if divide:
        position += 1
    while True:
        factor, position = _factor(tokens, position, depth)
        unit = _joined(unit, factor, divide=divide)
        if position == len(tokens) or tokens[position][0] not in ("*", "·", "/"):
            return unit, position
        divide = tokens[position][0] == "/"
        position += 1


def _factor(tokens: list[tuple[str, str]], position: int, depth: int) -> tuple[Unit, int]:
    """word power? | "(" product ")"."""
    if position == len(tokens) or depth > _DEEPEST or tokens[position][0] in "*·/)":
        raise _no_unit("".join(word + power for word, power in tokens))
    word, power = tokens[position]
    if word == "(":
        unit, position = _product(tokens, position + 1, depth + 1)
        if position == len(tokens) or tokens[position][0] != ")":
            raise _no_unit("".join(word + power for word, power in tokens))
        return unit, position + 1
    unit = known(word) or Unit(text=word, dimension=((word, 1),))
    return _raised(unit, _exponent(power)), position + 1


def _exponent(power: str) -> int:
    return _POWERS.get(power) or (int(power[1:]) if power else 1)


def _raised(unit: Unit, power: int) -> Unit:
    if power == 1:
        return unit
    return Unit(
        text=unit.text,
        dimension=inverse(unit.dimension, power),
        scale=unit.scale**power,
    )


def _joined(left: Unit, right: Unit, *, divide: bool) -> Unit:
    power = -1 if divide else 1
    return Unit(
        text=left.text or right.text,
        dimension=product(left.dimension, inverse(right.dimension, power)),
        scale=left.scale * right.scale**power,
        zero=left.zero or right.zero,
        below=product(left.below, right.dimension) if divide else left.below,
    )
