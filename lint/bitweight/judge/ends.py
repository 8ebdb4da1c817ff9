"""Where a reading ends more than once: which ends count, and whether they say the same."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from bitweight.judge.evaluations import Evaluation, Frame, code_grid, evaluated
from bitweight.judge.judgements import Judgement, wrong_mask
from bitweight.judge.knobs import is_power
from bitweight.judge.units import result_unit

_ALIKE = 0.05
"""Part of the span by which two ends may differ and still hold one quantity.

More than most wrong constants do, less than two units, or two ends of a divider, that are no power
of ten apart.
"""


def without_bare_copies(frames: Sequence[Frame]) -> Sequence[Frame]:
    """The ends that scale the code; where none does, those whose counts stand for a quantity.

    A bare copy of the code is a conversion only where its unit is stated, by the board file or its
    name, or where one count stands for a power of ten.
    """
    scaled = [frame for frame in frames if not _is_bare_copy(frame)]
    return scaled or [frame for frame in frames if _counts_quantity(frame)]


def _counts_quantity(frame: Frame) -> bool:
    unit = result_unit(frame.side.channel, frame.conversion.result)
    return unit.scale is not None or is_power(abs(frame.side.gain), 10)


def agree(judgements: Sequence[Judgement]) -> bool:
    """Whether all ends hold the same quantity up to a power of ten."""
    first, *rest = judgements
    return all(_alike(first, other) for other in rest)


def _is_bare_copy(frame: Frame) -> bool:
    converter = frame.side.channel.converter
    codes = code_grid(converter)
    copy = evaluated(frame, codes, converter.words(codes))
    return _same(copy, codes) or _same(copy, copy.words)


def _same(copy: Evaluation, words: NDArray[np.int64]) -> bool:
    return bool((copy.real == words).all())


def _alike(one: Judgement, other: Judgement) -> bool:
    """Whether two curves run together, apart from a power of ten, where neither goes wrong."""
    usable = one.in_range & ~wrong_mask(one.operations) & np.isfinite(one.value)
    usable &= ~(np.interp(one.codes, other.codes, _wrong(other)) > 0)
    left = one.value[usable]
    right = np.interp(one.codes, other.codes, other.value)[usable]
    if left.size < 2 or not np.ptp(left) or not np.ptp(right) or not np.isfinite(right).all():
        return False
    scaled = right * 10.0 ** np.round(np.log10(np.ptp(left) / np.ptp(right)))
    return bool(np.abs(left - scaled).max() <= _ALIKE * np.ptp(left))


def _wrong(judgement: Judgement) -> NDArray[np.float64]:
    wrong = wrong_mask(judgement.operations) | ~np.isfinite(judgement.value)
    return wrong.astype(np.float64)
