"""What a finding does to the reading: its own share of the error at a few codes.

A finding and its case go in; a name for each code and the error there come out.
"""

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from bitweight.judge.cases import Case, Judgement
from bitweight.judge.findings import Finding
from bitweight.report.texts import figure

Array = NDArray[np.float64]

_OF_ALL_CODES = frozenset(
    ("narrowing", "overflow", "sign", "transfer-gain", "transfer-offset", "transfer-curve")
)
"""Rules whose fault is what the constants and the early division leave of the error."""
_NAMES = ("bottom", "middle", "top")


def consequence(finding: Finding, case: Case) -> str:
    """The error that this cause alone makes at bottom, middle and top of the range, in words.

    A cause that no constant carries is told where it is worst, too. Empty where it has no effect
    on the reading that could be told.
    """
    for each in case.each:
        judgement = each.judgement
        if judgement is None:
            continue
        for wrong in judgement.explanation.wrong:
            if (wrong.rule, wrong.place) == (finding.rule, finding.place):
                points = [(point.at_count, point.error) for point in wrong.effect]
                return ", ".join(_named(points, judgement))
        share = _share(finding, judgement)
        if share is not None:
            return ", ".join(
                (*_named(_at_points(share, judgement), judgement), _worst(share, judgement))
            )
    return ""


def _named(points: list[tuple[int, float]], judgement: Judgement) -> Iterator[str]:
    names = _NAMES if len(points) == len(_NAMES) else ("",) * len(points)
    for name, (_, error) in zip(names, points, strict=True):
        yield f"{name} {_error(error, judgement)}".strip()


def _error(error: float, judgement: Judgement) -> str:
    unit = judgement.ideal.channel.unit.text
    return figure(judgement.settled(error), unit, digits=3, sign=True)


def _share(finding: Finding, judgement: Judgement) -> Array | None:
    """The error at each code that a cause without a wrong constant makes."""
    lost = judgement.loss.lost * judgement.scale if judgement.loss is not None else None
    if finding.rule == "early-division":
        return lost
    if finding.rule not in _OF_ALL_CODES:
        return None
    left = judgement.error - _of_constants(judgement)
    return left if lost is None else left - lost


def _of_constants(judgement: Judgement) -> Array:
    """What the wrong constants make of the error: a straight line through their known effects."""
    total = np.zeros(judgement.codes.size)
    for wrong in judgement.explanation.wrong:
        if wrong.effect:
            codes = [point.at_count for point in wrong.effect]
            order = np.argsort(codes)
            errors = np.array([point.error for point in wrong.effect])[order]
            total += np.interp(judgement.codes, np.array(codes)[order], errors)
    return total


def _at_points(share: Array, judgement: Judgement) -> list[tuple[int, float]]:
    indices = np.searchsorted(judgement.codes, [point.at_count for point in judgement.points])
    return [(int(judgement.codes[index]), float(share[index])) for index in indices]


def _worst(share: Array, judgement: Judgement) -> str:
    size = np.where(judgement.in_range, np.nan_to_num(np.abs(share), nan=-1.0), -1.0)
    index = int(size.argmax())
    return f"most {_error(float(share[index]), judgement)} at code {int(judgement.codes[index])}"
