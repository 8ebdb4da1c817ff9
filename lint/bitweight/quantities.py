"""Quantities of a board file: number, unit, tolerance, reference designator; resistor codes.

Text like "4.7 kohm ± 1 %" or "R12 100k 1%" enters, a `Quantity` in exact fractions leaves.
`engineering` writes numbers for people.
"""

import re
from dataclasses import dataclass, replace
from fractions import Fraction

from bitweight.units import PREFIXES, Unit, UnitError, known, named, parse_unit, takes_prefix

_LONGEST = 200
"""Characters of one quantity text; far above what anybody writes by hand."""

_NUMBER = r"[+\-\u2212]?(?:\d{1,40}(?:\.\d{0,40})?|\.\d{1,40})(?:[eE][+\-]?\d{1,2}(?!\d))?"
_FRACTION = rf"{_NUMBER}(?:\s*/\s*\d{{1,40}}(?:\.\d{{1,40}})?)?"
_VALUE = re.compile(rf"({_FRACTION})(\s*)(.*)", re.DOTALL)
_DESIGNATOR = re.compile(r"([A-Za-z][\w.\-]*)\s+(.+)", re.DOTALL)
_SIGNED_TOLERANCE = re.compile(r"(.*?)\s*(?:±|\+/-|\+-)\s*(.+)", re.DOTALL)
_BARE_TOLERANCE = re.compile(rf"(.*\S)\s+({_NUMBER}\s*(?:%|ppm))", re.DOTALL)
_TOLERANCE_ALONE = re.compile(rf"(?:±|\+/-|\+-)?\s*{_NUMBER}\s*(?:%|ppm)")

_MARK = "RLKkMGTpnuµ\u03bcmF"
_CODE_LEADING = re.compile(r"()([RKMpnuµ\u03bc])(\d{1,9})([A-Z]?)")
_CODE_MIDDLE = re.compile(rf"(\d{{1,9}})([{_MARK}])(\d{{1,9}})([A-Z]?)")
_CODE_TRAILING = re.compile(r"(\d{1,9}(?:\.\d{1,9})?)([RKkMGTpnuµ\u03bcF])()([A-Z]?)")
_CODE_WITH_UNIT = re.compile(r"(\S+)\s+(\S+)")
_CODE_BEFORE_UNIT = re.compile(r"\d{1,9}(?:\.\d{1,9})?(?:K|[pnuµ\u03bc]K)")
"""Where K ends a code ("10K", "100nK"), although "K" and "nK" are units too."""

_OHMS = {
    "R": Fraction(1),
    "L": Fraction(1, 1000),
    "K": Fraction(1000),
    "k": Fraction(1000),
    "M": Fraction(10**6),
    "G": Fraction(10**9),
    "T": Fraction(10**12),
}
_FARADS = {mark: PREFIXES[mark] for mark in "pnuµ\u03bcm"} | {"F": Fraction(1)}
_SPACED = {"k": "kohm", "M": "Mohm", "R": "ohm", "p": "pF", "n": "nF", "u": "uF", "µ": "uF"}

_TOLERANCE_LETTERS = {
    "E": "0.005",
    "L": "0.01",
    "P": "0.02",
    "W": "0.05",
    "B": "0.1",
    "C": "0.25",
    "D": "0.5",
    "F": "1",
    "G": "2",
    "H": "3",
    "J": "5",
    "K": "10",
    "M": "20",
    "N": "30",
}
"""Percent for a letter after the code (IEC 60062, from memory except F and K)."""


class QuantityError(ValueError):
    """A text that is no quantity; the message says what was expected."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Tolerance:
    """Half the width of an interval: a plain ratio where `relative`, else in the coherent unit."""

    value: Fraction
    relative: bool
    text: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Quantity:
    """A number with its unit. `value` is in the coherent unit (a temperature in K, from 0 K).

    `designator` names the part it belongs to ("R12"); `text` is the quantity as written.
    """

    value: Fraction
    unit: Unit
    tolerance: Tolerance | None = None
    designator: str | None = None
    text: str = ""

    def __str__(self) -> str:
        return self.text

    @property
    def number(self) -> Fraction:
        """The number as written, in `unit`."""
        return (self.value - self.unit.zero) / self.unit.scale

    @property
    def difference(self) -> Fraction:
        """The value as a difference, in the coherent unit: 5 degC is 5 K, not 278.15 K."""
        return self.value - self.unit.zero

    @property
    def half_width(self) -> Fraction:
        """Half the width of its tolerance, in the coherent unit; 0 without one."""
        if self.tolerance is None:
            return Fraction(0)
        if self.tolerance.relative:
            return abs(self.difference) * self.tolerance.value
        return self.tolerance.value

    def within(self, unit: Unit) -> Fraction:
        """The number in another unit of the same kind; `UnitError` names both otherwise."""
        self.unit.convert_to(unit)
        return (self.value - unit.zero) / unit.scale


def parse_number(text: str) -> Fraction:
    """An exact number: "3", "-1.5e3" or "1/512". Raises `QuantityError` for anything else."""
    match = re.fullmatch(_FRACTION, text.strip())
    if match is None:
        raise QuantityError(f'expected a number like 3, 0.5 or 1/512, found "{text.strip()}"')
    return _number(match.group())


def parse_quantity(text: str) -> Quantity:
    """The quantity that a text states. Raises `QuantityError` or `UnitError` for anything else."""
    stripped = " ".join(text.split())
    if len(stripped) > _LONGEST:
        raise QuantityError('expected a quantity like "16 V" or "4k7", found a very long text')
    designator, rest = _without_designator(stripped)
    value_text, tolerance_text = _without_tolerance(rest)
    try:
        plain = _code(value_text) or _code_with_unit(value_text) or _numbered(value_text)
    except UnitError:
        plain = None
    if plain is None:
        raise QuantityError(f'expected a quantity like "16 V" or "4k7", found "{stripped}"')
    quantity = replace(plain, designator=designator, text=stripped)
    if tolerance_text is None:
        return quantity
    return replace(quantity, tolerance=_tolerance(tolerance_text, quantity))


def parse_scaled_unit(text: str) -> Unit:
    """The unit that one count stands for: "0.1 kPa", "mV", "1/512 A"; shown as written."""
    stripped = " ".join(text.split())
    if len(stripped) > _LONGEST:
        raise QuantityError('expected a unit like "mV" or "0.1 kPa", found a very long text')
    match = _VALUE.fullmatch(stripped)
    if match is None:
        return parse_unit(stripped)
    factor = _number(match[1])
    if factor <= 0:
        raise QuantityError(f'expected a unit like "mV" or "0.1 kPa", found "{stripped}"')
    return replace(parse_unit(match[3]).times(factor), text=stripped)


def engineering(value: Fraction | float, unit: Unit, digits: int = 4) -> str:
    """The number (in `unit`) for people, with a prefix where the unit takes one: "4.095 mV"."""
    number = float(value)
    if takes_prefix(unit):
        # Only messages need it, and it is a fifth of the start-up time.
        import quantiphy

        shown = quantiphy.Quantity(number, unit.text)
        return str(shown.render(prec=digits - 1, show_units=True))
    text = f"{number:.{digits}g}" if abs(number) < 10**digits else f"{number:.0f}"
    return f"{text} {unit.text}".strip()


def spelled(quantity: Quantity, digits: int = 6) -> str:
    """A quantity in its own unit, without tolerance and designator: "100 kohm"."""
    return engineering(quantity.number, quantity.unit, digits)


def _number(text: str) -> Fraction:
    """A number that the pattern has already bounded in digits and exponent."""
    above, _, below = text.replace("\u2212", "-").replace(" ", "").partition("/")
    if not below:
        return Fraction(above)
    divisor = Fraction(below)
    if not divisor:
        raise QuantityError(f'expected a number like 3, 0.5 or 1/512, found "{text}"')
    return Fraction(above) / divisor


def _without_designator(text: str) -> tuple[str | None, str]:
    """Part name and the rest; "R100 1%" has no name: it is a code with its tolerance."""
    match = _DESIGNATOR.fullmatch(text)
    if match is None or _TOLERANCE_ALONE.fullmatch(match[2]):
        return None, text
    value_text, _ = _without_tolerance(match[2])
    starts_value = _VALUE.fullmatch(value_text) or _CODE_LEADING.fullmatch(value_text)
    return (match[1], match[2]) if starts_value else (None, text)


def _without_tolerance(text: str) -> tuple[str, str | None]:
    match = _SIGNED_TOLERANCE.fullmatch(text) or _BARE_TOLERANCE.fullmatch(text)
    return (match[1], match[2]) if match is not None and match[1] else (text, None)


def _code(text: str) -> Quantity | None:
    """A value by IEC 60062, where a letter stands for the decimal mark."""
    match = _CODE_LEADING.fullmatch(text) or _CODE_MIDDLE.fullmatch(text)
    trailing = match or _CODE_TRAILING.fullmatch(text)
    if trailing is None or (match is None and _reads_as_unit(text)):
        return None
    whole, mark, decimals, letter = trailing.groups()
    if letter and letter not in _TOLERANCE_LETTERS:
        return None
    scale, unit = (_OHMS[mark], "ohm") if mark in _OHMS else (_FARADS[mark], "F")
    value = Fraction(f"{whole or '0'}.{decimals or '0'}" if "." not in whole else whole) * scale
    tolerance = _letter_tolerance(letter) if letter else None
    return Quantity(value=value, unit=parse_unit(unit), tolerance=tolerance, text=text)


def _code_with_unit(text: str) -> Quantity | None:
    """A code that names its unit again after a space: "10k Ω", "100n F"."""
    match = _CODE_WITH_UNIT.fullmatch(text)
    quantity = _code(match[1]) if match is not None else None
    if match is None or quantity is None or known(match[2]) != quantity.unit:
        return None
    return replace(quantity, text=text)


def _reads_as_unit(text: str) -> bool:
    match = _VALUE.fullmatch(text)
    if match is None or _CODE_BEFORE_UNIT.fullmatch(text):
        return False
    return known(match[3]) is not None


def _letter_tolerance(letter: str) -> Tolerance:
    percent = _TOLERANCE_LETTERS[letter]
    return Tolerance(value=Fraction(percent) / 100, relative=True, text=f"{percent} %")


def _numbered(text: str) -> Quantity | None:
    """A number followed by a unit, or by nothing."""
    match = _VALUE.fullmatch(text)
    if match is None:
        return None
    word = match[3].strip()
    unit = parse_unit(_SPACED.get(word, word))
    return Quantity(value=_number(match[1]) * unit.scale + unit.zero, unit=unit, text=text)


def _tolerance(text: str, quantity: Quantity) -> Tolerance:
    amount = _numbered(text)
    if amount is None or amount.difference < 0:
        raise QuantityError(f'expected a tolerance like "± 1 %", found "{text}"')
    relative = amount.unit.text in ("%", "ppm") and quantity.unit.text not in ("%", "ppm")
    if relative or (amount.unit.text == "%" and quantity.unit.text == "%"):
        return _relative(amount.value, text)
    if not amount.unit.text:
        raise QuantityError(f'expected a tolerance with its unit, like "± 1 %", found "{text}"')
    if not amount.unit.fits(quantity.unit):
        raise QuantityError(
            f"the tolerance is in {named(amount.unit)} but the value is in {named(quantity.unit)}"
        )
    return Tolerance(value=amount.difference, relative=False, text=text)


def _relative(value: Fraction, text: str) -> Tolerance:
    if value >= 1:
        raise QuantityError(f'expected a tolerance below 100 %, found "{text}"')
    return Tolerance(value=value, relative=True, text=text)
