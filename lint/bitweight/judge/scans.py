"""Converters with more codes than are held at a time: every code is looked at, in blocks.

A grid of codes is judged; a scan over all codes adds those that matter: the worst of each block,
and where each operator first goes wrong.
"""

from collections.abc import Iterator

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
)


def with_scanned(frame: Frame, result: ResultScale, computed: Evaluation) -> Evaluation:
    """The evaluation with every code that matters; the same one where it holds all codes."""
    converter = frame.side.channel.converter
    if converter.code_high - converter.code_low < MOST_CODES:
        return computed
    gain = frame.side.channel.firmware.reading_gain
    ways = presented(converter, computed.codes, gain)
    way = next(index for index, words in enumerate(ways) if (words == computed.words).all())
    found = [computed.codes]
    for codes in _blocks(converter, frame.limits.block_codes):
        block = evaluated(frame, codes, presented(converter, codes, gain)[way])
        found.append(codes[_telling(frame, result, block)])
    kept = np.unique(np.concatenate(found))
    return evaluated(frame, kept, presented(converter, kept, gain)[way])


def _blocks(converter: Converter, size: int) -> Iterator[Codes]:
    for start in range(converter.code_low, converter.code_high + 1, size):
        yield np.arange(start, min(start + size, converter.code_high + 1), dtype=np.int64)


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
