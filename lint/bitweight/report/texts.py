"""Pieces of text that all reports share: escaped names, figures with their unit, counts.

Everything that comes from a tree or a board file goes through `shown` before it reaches a screen.
"""

import math
import re
import textwrap
import unicodedata
from collections.abc import Iterable, Mapping, Sequence

from bitweight.judge.findings import Finding
from bitweight.units import known, takes_prefix

CAUTION = (
    "static checking is no proof: measurement on the hardware, the applicable safety standard, "
    "local codes and licensed practice decide"
)
"""What stands once below findings of a channel whose failure can do harm."""

_HIDDEN = frozenset({"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"})
"""Unicode general categories that move, hide or reorder what stands around them."""

_NUMBER_GAP = re.compile(r"(?<=\d) (?=[^\W\d]{1,6}\b|%)")
_GLUE = "\0"
"""Stands for a space that is no place to break a line; `shown` leaves no other NUL in a text."""

ELIDED = "..."
"""Stands where a part of a text is left out."""

_BEFORE_OPERAND = re.compile(r"(?<= )([-+*/%<>&|^=!?:]{1,2}) ")
"""An operator with spaces around it: a formula is broken before it, never after."""

_CAST = re.compile(r"\((?:unsigned|signed|long) [a-z ]+\)")

_SHORT = {"\n": "\\n", "\r": "\\r", "\t": "\\t"}

_LARGE = 1e9
"""Numbers from here on show a power of ten."""

_PREFIXES = {-12: "p", -9: "n", -6: "µ", -3: "m", 0: "", 3: "k", 6: "M", 9: "G"}


def shown(text: str) -> str:
    """The text with control, bidirectional and unassigned characters escaped, all else literal."""
    if text.isascii() and text.isprintable():
        return text
    return "".join(map(_visible, text))


def _visible(char: str) -> str:
    if char in _SHORT:
        return _SHORT[char]
    if unicodedata.category(char) not in _HIDDEN:
        return char
    code = ord(char)
    if 0xDC80 <= code <= 0xDCFF:  # a byte that was no UTF-8, as os.fsdecode keeps it
        return f"\\x{code - 0xDC00:02x}"
    if code < 0x100:
        return f"\\x{code:02x}"
    return f"\\u{code:04x}" if code < 0x10000 else f"\\U{code:08x}"


def number(value: float, digits: int = 4) -> str:
    """A number with `digits` significant digits, without trailing zeros; "none" for no number."""
    if not math.isfinite(value):
        return "none" if math.isnan(value) else ("infinite" if value > 0 else "-infinite")
    if value == 0:
        return "0"
    if float(value).is_integer() and abs(value) < _LARGE:
        return str(int(value))
    if 1e-4 <= abs(value) < _LARGE:
        places = max(0, digits - 1 - math.floor(math.log10(abs(value))))
        fixed = f"{value:.{places}f}"
        return fixed.rstrip("0").rstrip(".") if "." in fixed else fixed
    return f"{value:.{digits}g}"


def figure(value: float, unit: str, *, digits: int = 4, sign: bool = False) -> str:
    """A value with its unit in engineering notation (powers of 1000), `-12.21 mV`."""
    shift = _shift((value,), unit)
    text = number(value / 10**shift if shift else value, digits)
    plus = "+" if sign and value > 0 else ""
    return f"{plus}{text} {_PREFIXES[shift]}{shown(unit)}".rstrip()


def figures(
    values: Sequence[float], unit: str, *, resolution: float = 0.0, sign: bool = False
) -> tuple[str, ...]:
    """Values that are read against each other: one prefix, one number of decimals for all.

    `resolution`, in the unit of the values, is the smallest difference that must show; with 0, four
    digits of the largest do.
    """
    shift = _shift(values, unit)
    scaled = [value / 10**shift if shift else value for value in values]
    places = _places(scaled, resolution / 10**shift if shift else resolution)
    suffix = f" {_PREFIXES[shift]}{shown(unit)}".rstrip()
    return tuple(_fixed(value, places, sign) + suffix for value in scaled)


def _fixed(value: float, places: int, sign: bool) -> str:
    if not math.isfinite(value) or abs(value) >= _LARGE:
        return number(value)
    text = f"{value:.{places}f}"
    if float(text) == 0:
        return text.lstrip("-")
    return f"+{text}" if sign and value > 0 else text


def _places(scaled: Iterable[float], resolution: float) -> int:
    if resolution > 0 and math.isfinite(resolution):
        return min(9, max(0, -math.floor(math.log10(resolution))))
    top = max((abs(value) for value in scaled if math.isfinite(value)), default=0.0)
    return min(9, max(0, 3 - math.floor(math.log10(top)))) if top else 0


def _shift(values: Iterable[float], unit: str) -> int:
    """The power of 1000 that suits the largest value, as a power of ten; 0 without a prefix."""
    top = max((abs(value) for value in values if math.isfinite(value)), default=0.0)
    plain = known(unit)
    if top == 0 or plain is None or not takes_prefix(plain):
        return 0
    return min(9, max(-12, 3 * math.floor(math.log10(top * (1 + 1e-12)) / 3)))


def plural(count: int, noun: str) -> str:
    """`1 error`, `2 errors`."""
    return f"{count} {noun}" if count == 1 else f"{count} {noun}s"


def closing(counts: Mapping[str, int], accepted: int) -> str:
    """The last line of every report: channels by status, findings by level."""
    channels = sum(counts[status] for status in ("verified", "mismatched", "untraced"))
    text = (
        f"{plural(channels, 'channel')}: {counts['verified']} verified, "
        f"{counts['mismatched']} mismatched, {counts['untraced']} untraced; "
        f"{plural(counts['error'], 'error')}, {plural(counts['warning'], 'warning')}, "
        f"{plural(counts['note'], 'note')}"
    )
    return f"{text}, {accepted} accepted" if accepted else text


def accepted(findings: Iterable[Finding]) -> int:
    """How many findings are accepted deviations."""
    return sum(finding.deviation is not None for finding in findings)


def wrapped_formula(text: str, width: int) -> tuple[str, ...]:
    """C on lines of at most `width` characters, broken before operators where that is possible."""
    glued = _BEFORE_OPERAND.sub(rf"\1{_GLUE}", shown(text))
    glued = _CAST.sub(lambda match: match[0].replace(" ", _GLUE), glued)
    lines = textwrap.wrap(glued, max(8, width), break_on_hyphens=False)
    return tuple(line.replace(_GLUE, " ") for line in lines) or ("",)


def wrapped(text: str, width: int) -> tuple[str, ...]:
    """Text, escaped, on lines of at most `width` characters; a longer word is cut.

    A number stays with the word behind it, mostly its unit.
    """
    glued = _NUMBER_GAP.sub(_GLUE, shown(text))
    lines = textwrap.wrap(glued, max(8, width), break_on_hyphens=False)
    return tuple(line.replace(_GLUE, " ") for line in lines) or ("",)
