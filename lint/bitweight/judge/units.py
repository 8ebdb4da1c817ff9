"""What one count of a result stands for: as the board file states it, or as the result's name says.

A channel's unit and the name of a result enter; a size in the channel's unit leaves, exactly, with
where it is from. A unit that neither states is inferred later, together with the explanation of the
line.
"""

import re
from dataclasses import dataclass
from fractions import Fraction

from bitweight.board.hardware import Channel
from bitweight.units import Unit, UnitError, parse_unit

BOARD = "board"
NAME = "name"
INFERRED = "inferred"


@dataclass(frozen=True, slots=True, kw_only=True)
class ResultUnit:
    """One count of a result is `scale` channel units, and a result of 0 is `zero` channel units.

    `unit_from` says who says so; `scale` is None where the unit is to be inferred. `zero` is other
    than 0 only where a temperature is held in another scale than the channel's.
    """

    scale: Fraction | None
    zero: Fraction
    unit_from: str


def result_unit(channel: Channel, result: str) -> ResultUnit:
    """The unit of the result: the board file's, else the name's where its dimension fits."""
    stated = channel.firmware.unit
    if stated is not None:
        return _converted(stated, channel.unit, BOARD)
    named = unit_in_name(result, channel.unit)
    if named is not None:
        return _converted(named, channel.unit, NAME)
    return ResultUnit(scale=None, zero=Fraction(0), unit_from=INFERRED)


def unit_in_name(result: str, wanted: Unit) -> Unit | None:
    """The unit that the words of a name give, or None: "tank_kpa_x10" is 0.1 kPa.

    Single letters are no units here: the `a` of `i_a` is a phase as often as an ampere. `wanted` is
    the channel's unit, whose dimension the name must fit.
    """
    words = _words(result)
    for index in range(len(words) - 1, -1, -1):
        unit = _unit_at(words, index, wanted)
        if unit is not None:
            return unit.times(_multiple(words[index + 1 :]))
    return None


def _converted(unit: Unit, wanted: Unit, unit_from: str) -> ResultUnit:
    try:
        scale = unit.convert_to(wanted)
        zero = unit.offset_to(wanted)
    except UnitError:
        return ResultUnit(scale=None, zero=Fraction(0), unit_from=INFERRED)
    return ResultUnit(scale=scale, zero=zero, unit_from=unit_from)


_WORD = re.compile(r"[A-Z]+(?![a-z])\d*|[A-Z]?[a-z]+\d*|\d+")
_MULTIPLE = re.compile(r"x(10+)")

_UNITS = {
    "nv": "nV", "uv": "uV", "mv": "mV", "cv": "cV", "dv": "dV", "kv": "kV",
    "volt": "V", "volts": "V", "millivolt": "mV", "millivolts": "mV",
    "microvolt": "uV", "microvolts": "uV",
    "na": "nA", "ua": "uA", "ma": "mA", "amp": "A", "amps": "A", "ampere": "A", "amperes": "A",
    "milliamp": "mA", "milliamps": "mA", "microamp": "uA", "microamps": "uA",
    "mohm": "mohm", "ohm": "ohm", "ohms": "ohm", "kohm": "kohm",
    "pa": "Pa", "hpa": "hPa", "kpa": "kPa", "bar": "bar", "mbar": "mbar",
    "degc": "degC", "celsius": "degC", "mdegc": "mdegC", "ddegc": "ddegC", "cdegc": "cdegC",
    "dc": "ddegC", "cc": "cdegC", "mc": "mdegC",
    "kelvin": "K", "mk": "mK", "dk": "dK", "ck": "cK",
    "hz": "Hz", "khz": "kHz", "uw": "uW", "mw": "mW", "kw": "kW", "watt": "W", "watts": "W",
    "um": "um", "mm": "mm", "cm": "cm", "km": "km", "mg": "mg", "kg": "kg", "ml": "ml",
    "mn": "mN", "kn": "kN", "us": "us", "ms": "ms", "pct": "%", "percent": "%", "ppm": "ppm",
}  # fmt: skip
"""Words of names and the units they stand for; each counts only where its dimension fits."""

_PREFIX_WORDS = {
    "nano": Fraction(1, 10**9),
    "micro": Fraction(1, 10**6),
    "milli": Fraction(1, 1000),
    "centi": Fraction(1, 100),
    "deci": Fraction(1, 10),
}
_AFTER_PREFIX = {**_UNITS, "c": "degC", "v": "V", "a": "A", "k": "K", "w": "W", "g": "g", "m": "m"}
"""Units that a prefix word may stand before: only there is a letter alone a unit."""


def _words(name: str) -> list[str]:
    """Lower-case words of the last member of a name: `tank.level_mV` gives level, mv."""
    member = re.split(r"\.|->", name.split("(")[0])[-1]
    parts = re.split(r"[^A-Za-z0-9]+", member)
    return [word.lower() for part in parts for word in _split(part)]


def _split(part: str) -> list[str]:
    """`tankMv` is two words; a part that is a unit as it stands (mV, kPa) is one."""
    return [part] if part.lower() in _UNITS else _WORD.findall(part)


def _unit_at(words: list[str], index: int, wanted: Unit) -> Unit | None:
    """The unit that ends at a word: two words joined (K, Pa) or prefixed, else the word alone."""
    before = words[index - 1] if index else ""
    if before in _PREFIX_WORDS:
        unit = _fitting(_AFTER_PREFIX.get(words[index]), wanted)
        return unit.times(_PREFIX_WORDS[before]) if unit else None
    return _spelled(before + words[index], wanted) or _spelled(words[index], wanted)


def _spelled(word: str, wanted: Unit) -> Unit | None:
    """A unit from the table, or the channel's own where a name can spell it (pH, NTU, mg_l)."""
    own = re.sub(r"\W", "", wanted.text).lower()
    if len(own) > 1 and word == own:
        return wanted
    return _fitting(_UNITS.get(word), wanted)


def _fitting(text: str | None, wanted: Unit) -> Unit | None:
    if text is None:
        return None
    unit = parse_unit(text)
    return unit if unit.fits(wanted) else None


def _multiple(following: list[str]) -> Fraction:
    """What `_x10` behind a unit makes of it: a count is a tenth."""
    match = _MULTIPLE.fullmatch(following[0]) if following else None
    return Fraction(1, int(match[1])) if match else Fraction(1)
