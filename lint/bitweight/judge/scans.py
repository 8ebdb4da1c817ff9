"""Converters with more codes than are held at a time: every code is looked at, in blocks.

A grid of codes is judged; a scan over all codes adds those that matter: the worst of each block,
and where each operator first goes wrong. Beyond 24 bits the scan strides, and looks besides at the
places where C usually breaks: both ends, the ends of the range, and around each power of two.
"""

from collections.abc import Callable, Iterator

import numpy as np

from bitweight.board.converters import Converter
from bitweight.judge.codings import ResultScale
from bitweight.judge.evaluations import (
    MOST_CODES,
    Array,
    Codes,
    Evaluation,
    Frame,
    evaluated,
    presented,
    sees_bare_words,
)

_MOST_SCANNED = 1 << 24
"""The most codes of which each is looked at."""
_SCANNED = 1 << 22
"""About how many codes are looked at where there are more."""


def with_scanned(frame: Frame, result: ResultScale, computed: Evaluation) -> Evaluation:
    """The evaluation with every code that matters; the same one where it holds all codes."""
    converter = frame.side.channel.converter
    if converter.code_high - converter.code_low < MOST_CODES:
        return computed
    words = _words(frame, computed)
    found = [computed.codes]
    for codes in _blocks(frame):
        block = evaluated(frame, codes, words(codes))
        found.append(codes[_telling(frame, result, block)])
    kept = np.unique(np.concatenate(found))
    return evaluated(frame, kept, words(kept))


def _words(frame: Frame, computed: Evaluation) -> Callable[[Codes], Codes]:
    """The words behind codes, presented as those of an evaluation are."""
    channel = frame.side.channel
    gain, bare = channel.firmware.reading_gain, sees_bare_words(frame)
    ways = presented(channel.converter, computed.codes, gain, bare=bare)
    way = next(index for index, words in enumerate(ways) if (words == computed.words).all())
    return lambda codes: presented(channel.converter, codes, gain, bare=bare)[way]


def stride(converter: Converter) -> int:
    """Every how many codes a scan looks: 1 up to 24 bits, else an odd number.

    An odd one does not fall in with shifts and masks.
    """
    count = converter.code_high - converter.code_low + 1
    return 1 if count <= _MOST_SCANNED else count // _SCANNED | 1


def _blocks(frame: Frame) -> Iterator[Codes]:
    converter, size = frame.side.channel.converter, frame.limits.block_codes
    step, end = stride(converter), converter.code_high + 1
    for start in range(converter.code_low, end, size * step):
        yield np.arange(start, min(start + size * step, end), step, dtype=np.int64)
    if step > 1:
        yield _breaking(frame)


def _breaking(frame: Frame) -> Codes:
    """The codes around each power of two, both ends of the converter and of the range."""
    converter = frame.side.channel.converter
    powers = [sign << bit for bit in range(converter.width + 1) for sign in (1, -1)]
    ends = [round(frame.side.code_of(end)) for end in (frame.side.low, frame.side.high)]
    spots = (0, converter.code_low, converter.code_high, *powers, *ends)
    near = {spot + step for spot in spots for step in (-2, -1, 0, 1, 2)}
    held = [code for code in near if converter.code_low <= code <= converter.code_high]
    return np.array(sorted(held), dtype=np.int64)


def _telling(frame: Frame, result: ResultScale, block: Evaluation) -> list[int]:
    """Indices of the largest error, the largest loss and the first faults of a block."""
    error = block.held * result.scale + result.zero - frame.side.quantity(block.codes)
    with np.errstate(invalid="ignore"):
        loss = block.held - block.meant
    found = [_largest(error, block), _largest(loss, block)]
    for fault in block.curve.faults:
        found.append(fault.first_index)
        inside = fault.mask & block.in_range
        if inside.any():
            found.append(int(inside.argmax()))
    return found


def _largest(size: Array, block: Evaluation) -> int:
    """The first index of the largest size in range; 0 for a block out of range."""
    return int(np.where(block.in_range, np.nan_to_num(np.abs(size), nan=0.0), -1.0).argmax())
