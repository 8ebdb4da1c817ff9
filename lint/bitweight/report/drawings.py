"""Curves as characters: the error over the codes against the allowed band.

Arrays of one channel go in, lines of text come out. Nothing is smoothed: every code has its dot, a
code without a value leaves its place empty, what lies beyond the rows is marked at their edge.
"""

from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from bitweight.report.texts import figure, figures

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

_BLOCK = 1 << 18
"""Codes drawn at a time, so that the helper arrays of a 24-bit converter stay small."""

_SPIKE = 4.0
"""Errors this many times larger than the band and than 19 of 20 codes are cut off."""

_SAMPLE = 1 << 16
"""Codes looked at to tell what 19 of 20 reach."""

_BRAILLE = np.array([[0x01, 0x08], [0x02, 0x10], [0x04, 0x20], [0x40, 0x80]])
"""The bit of each dot of a Braille pattern (Unicode block 2800): four rows of two."""


class Ink(Enum):
    """The characters a drawing may use: fine dots and bars, or what every terminal has."""

    FINE = "fine"
    PLAIN = "plain"

    @property
    def dots(self) -> tuple[int, int]:
        """Rows and columns of dots in one character."""
        return (4, 2) if self is Ink.FINE else (1, 1)

    @property
    def edge(self) -> str:
        """The character of the edges of the allowed band."""
        return "╌" if self is Ink.FINE else "-"

    @property
    def light(self) -> str:
        """What a light rule is drawn with."""
        return "─" if self is Ink.FINE else "-"

    @property
    def heavy(self) -> str:
        """What a heavy rule is drawn with."""
        return "━" if self is Ink.FINE else "="

    @property
    def under(self) -> str:
        """What stands below the characters that are wrong."""
        return "▔" if self is Ink.FINE else '"'

    @property
    def bars(self) -> str:
        """Characters of rising weight, the first for nothing."""
        return "▁▂▃▄▅▆▇█" if self is Ink.FINE else "01234567"


@dataclass(frozen=True, slots=True, kw_only=True)
class Curve:
    """A drawn curve.

    `top` and `bottom` are the values of the outermost rows, in the unit of the arrays; `zero` is
    the row of zero. `thin` says that the whole band lies within one row. `outside` has an `x` in
    each column with a code outside the band. `clipped`: some values lie beyond the rows (marks `^`,
    `v`). `gaps`: some codes have no value.
    """

    rows: tuple[str, ...]
    top: float
    bottom: float
    zero: int
    outside: str
    clipped: bool
    gaps: bool
    thin: bool


def curve(error: Array, allowed: Array, *, width: int, height: int, ink: Ink) -> Curve:
    """Error against code in `width` columns and `height` rows, with the edges of the allowed band.

    Both arrays have one entry a code, in order of the codes; `allowed` is the limit at each, a
    number and never negative.
    """
    wide = width * ink.dots[1]
    error, allowed = _spread(error, wide), _spread(allowed, wide)
    top, bottom = _span(error, allowed)
    scale = _Scale(top=top, bottom=bottom, dots=height * ink.dots[0])
    rows = _edges(allowed, scale, width, height, ink)
    drawn = _characters(_dots(error, scale, wide), ink)
    inked = drawn != " "
    rows[inked] = drawn[inked]
    above = _any(error, width, lambda part: error[part] > top)
    below = _any(error, width, lambda part: error[part] < bottom)
    over = _any(error, width, lambda part: np.abs(error[part]) > allowed[part])
    gaps = _any(error, width, lambda part: np.isnan(error[part]))
    rows[0, above] = "^"
    rows[-1, below] = "v"
    return Curve(
        rows=tuple("".join(row) for row in rows),
        top=top,
        bottom=bottom,
        zero=int(scale.dot(np.zeros(1))[0]) // ink.dots[0],
        outside="".join(np.where(over, "x", " ")),
        clipped=bool(above.any() or below.any()),
        gaps=bool(gaps.any()),
        thin=_is_thin(allowed, scale, ink),
    )


def drawing(
    codes: NDArray[np.int64],
    error: Array,
    allowed: Array,
    *,
    unit: str,
    width: int,
    height: int,
    ink: Ink,
) -> tuple[str, ...]:
    """The curve with its axes: values on the left, codes below, and a line that explains the marks.

    Empty arrays give no lines. The lines fit in `width` characters, which must be 40 at least.
    """
    if not len(error):
        return ()
    top, bottom = _span(error, allowed)
    labels = figures((top, 0.0, bottom), unit, resolution=(top - bottom) / 50, sign=True)
    margin = max(map(len, labels)) + 1
    drawn = curve(error, allowed, width=width - margin - 1, height=height, ink=ink)
    legend = _legend(drawn, _band_text(allowed, unit), ink, width - margin - 1)
    return tuple(line.rstrip() for line in _labelled(drawn, labels, margin, codes, legend))


def bars(error: Array, allowed: Array, *, width: int, ink: Ink) -> str:
    """One line: in each column the largest share of the allowed error that its codes use.

    The heaviest character stands for seven eighths and more, `x` for outside, a blank for no value.
    """
    if not len(error):
        return ""
    error, allowed = _spread(error, width), _spread(allowed, width)
    highest = np.full(width, -1.0)
    for part in _parts(len(error)):
        with np.errstate(invalid="ignore", divide="ignore"):
            share = np.where(error[part] == 0, 0.0, np.abs(error[part]) / allowed[part])
        np.fmax.at(highest, _columns(part, len(error), width), share)
    return "".join(_bar(value, ink) for value in highest)


def _bar(share: float, ink: Ink) -> str:
    if share > 1:
        return "x"
    return " " if share < 0 else ink.bars[min(7, int(share * 8))]


def _labelled(
    drawn: Curve,
    labels: tuple[str, ...],
    margin: int,
    codes: NDArray[np.int64],
    legend: Iterable[str],
) -> Iterator[str]:
    at = {0: labels[0], len(drawn.rows) - 1: labels[2], drawn.zero: labels[1]}
    for number, row in enumerate(drawn.rows):
        yield f"{at.get(number, ''):>{margin - 1}} |{row}"
    if "x" in drawn.outside:
        yield f"{'too far':>{margin - 1}} |{drawn.outside}"
    first, last = f"code {codes[0]}", f"code {codes[-1]}"
    blank = " " * (margin + 1)
    yield f"{blank}{first}{last:>{len(drawn.outside) - len(first)}}"
    yield from (blank + line for line in legend)


def _band_text(allowed: Array, unit: str) -> str:
    narrow = figure(float(allowed.min()), unit, digits=3)
    wide = figure(float(allowed.max()), unit, digits=3)
    return narrow if narrow == wide else f"{narrow} to {wide}"


def _legend(drawn: Curve, band: str, ink: Ink, room: int) -> tuple[str, ...]:
    """What the marks mean, on one line where there is room."""
    parts = [f"{ink.edge * 3} allowed {band}"]
    if drawn.thin:
        parts[0] += " (too thin to draw)"
    if drawn.clipped:
        parts.append("^ v beyond the drawing")
    if drawn.gaps:
        parts.append("blank: no value")
    line = "   ".join(parts)
    return (line,) if len(line) <= room else tuple(part[:room] for part in parts)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Scale:
    """The straight line from values to rows of dots, 0 at the top."""

    top: float
    bottom: float
    dots: int

    def dot(self, values: Array) -> NDArray[np.intp]:
        """The row of dots of each value; all must lie within the scale."""
        share = (self.top - values) / (self.top - self.bottom)
        return np.minimum(np.floor(share * self.dots), self.dots - 1).astype(np.intp)


def _span(error: Array, allowed: Array) -> tuple[float, float]:
    """The values of the first and last row: band and error, without rare spikes."""
    band = float(allowed.max())
    low, high = _extremes(error)
    sample = error[:: 1 + len(error) // _SAMPLE]
    sizes = np.abs(sample[np.isfinite(sample)])
    common = max(band, float(np.quantile(sizes, 0.95)) if len(sizes) else 0.0)
    high, low = max(high, 1.2 * band), min(low, -1.2 * band)
    if common > 0 and max(high, -low) > _SPIKE * common:
        high, low = min(high, 1.5 * common), max(low, -1.5 * common)
    return (high, low) if high > low else (1.0, -1.0)


def _extremes(error: Array) -> tuple[float, float]:
    """The smallest and the largest error that is a number; 0 is always between them."""
    low, high = 0.0, 0.0
    for part in _parts(len(error)):
        finite = error[part][np.isfinite(error[part])]
        low = min(low, float(finite.min(initial=0.0)))
        high = max(high, float(finite.max(initial=0.0)))
    return low, high


def _spread(values: Array, least: int) -> Array:
    """The values, each repeated where there are fewer than `least`: a bin wider than a column."""
    if len(values) >= least:
        return values
    return values[np.arange(least) * len(values) // least]


def _parts(count: int) -> Iterator[slice]:
    """`count` codes in blocks."""
    return (slice(start, min(start + _BLOCK, count)) for start in range(0, count, _BLOCK))


def _columns(part: slice, count: int, width: int) -> NDArray[np.intp]:
    """The columns of a block of `count` codes, of which there are at least `width`."""
    codes = np.arange(part.start, part.stop, dtype=np.int64)
    return (codes * width // count).astype(np.intp)


def _any(error: Array, width: int, holds: Callable[[slice], Mask]) -> Mask:
    """The columns in which something holds for at least one code."""
    columns = np.zeros(width, dtype=bool)
    for part in _parts(len(error)):
        with np.errstate(invalid="ignore"):
            mask = holds(part)
        columns[_columns(part, len(error), width)[mask]] = True
    return columns


def _dots(error: Array, scale: _Scale, width: int) -> Mask:
    """The dot of each code that has a value within the scale."""
    dots = np.zeros((scale.dots, width), dtype=bool)
    for part in _parts(len(error)):
        with np.errstate(invalid="ignore"):
            held = np.flatnonzero((error[part] <= scale.top) & (error[part] >= scale.bottom))
        column = _columns(part, len(error), width)[held]
        dots[scale.dot(error[part][held]), column] = True
    return dots


def _characters(dots: Mask, ink: Ink) -> NDArray[np.str_]:
    high, wide = ink.dots
    cells = dots.reshape(dots.shape[0] // high, high, dots.shape[1] // wide, wide)
    if ink is Ink.PLAIN:
        return np.where(cells[:, 0, :, 0], "*", " ")
    patterns = np.einsum("rhcw,hw->rc", cells, _BRAILLE)
    return np.array(
        [[chr(0x2800 + pattern) if pattern else " " for pattern in row] for row in patterns]
    )


def _is_thin(allowed: Array, scale: _Scale, ink: Ink) -> bool:
    """Whether no row lies between the edges of the band anywhere."""
    widest = float(allowed.max())
    if not widest <= scale.top or not -widest >= scale.bottom:
        return False
    high, low = scale.dot(np.array([widest, -widest])) // ink.dots[0]
    return bool(low - high < 1)


def _edges(allowed: Array, scale: _Scale, width: int, height: int, ink: Ink) -> NDArray[np.str_]:
    """Rows with the edges of the band, each column at the limit of its middle code."""
    rows = np.full((height, width), " ")
    middle = allowed[(np.arange(width) * 2 + 1) * len(allowed) // (2 * width)]
    for edge in (middle, -middle):
        with np.errstate(invalid="ignore"):
            held = np.flatnonzero((edge <= scale.top) & (edge >= scale.bottom))
        rows[scale.dot(edge[held]) // ink.dots[0], held] = ink.edge
    return rows
