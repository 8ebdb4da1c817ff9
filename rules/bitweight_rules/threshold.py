"""Rule `threshold`: a limit constant does not stand for the quantity that the board file gives."""

from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from bitweight.api import (
    Case,
    Channel,
    ChannelRule,
    Facts,
    Finding,
    Ideal,
    Judgement,
    Level,
    Limit,
    LimitMeasure,
    Threshold,
    allowance,
    edit,
    exact_value,
    half_digit,
    ideal,
    not_computed,
    quantity,
    result_unit,
    uses,
)

_HALF = Fraction(1, 2) + Fraction(1, 10**9)
"""Halfway between two counts either neighbour is the nearest."""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Scale:
    """What a constant is compared with: `weight` channel units a count, `zero` at count 0.

    `whole` says that it is compared with whole counts.
    """

    weight: Fraction
    zero: Fraction
    whole: bool


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """A finding for each limit of the channel whose constant stands for another quantity."""
    channel = case.channel
    if not_computed(channel) is not None:
        return
    limits = {limit.name: limit for limit in channel.limits}
    for threshold in facts.thresholds:
        if threshold.channel == channel.name and threshold.name in limits:
            found = _judged(case, facts, limits[threshold.name], threshold)
            if found is not None:
                yield found


def _judged(case: Case, facts: Facts, limit: Limit, threshold: Threshold) -> Finding | None:
    side = case.judgement.ideal if case.judgement is not None else ideal(case.channel)
    scale = _scale(case, side, limit)
    if scale is None or threshold.value is None or threshold.place is None:
        return None
    held = Fraction(threshold.value)
    wanted = limit.at.within(case.channel.unit)
    count = (wanted - scale.zero) / scale.weight
    level = _level(
        stands_off=abs(held * scale.weight + scale.zero - wanted)
        > _allowed(case, facts, side, wanted),
        nearest=_is_nearest(threshold, held - count, whole=scale.whole),
    )
    return None if level is None else _finding(case.channel, limit, threshold, scale, level)


def _level(*, stands_off: bool, nearest: bool) -> Level | None:
    """A count that is the nearest is right, however coarse counts are."""
    if nearest:
        return None
    return Level.ERROR if stands_off else Level.WARNING


def _is_nearest(threshold: Threshold, off: Fraction, *, whole: bool) -> bool:
    """Whether no other constant written with as many digits is nearer; `off` is in counts."""
    text = threshold.leaf.text if threshold.leaf is not None else ""
    digit = None if whole else half_digit(text)
    return abs(off) <= (_HALF if digit is None else digit)


def _scale(case: Case, side: Ideal, limit: Limit) -> _Scale | None:
    converter = case.channel.converter
    if limit.measure is LimitMeasure.COUNTS:
        width = converter.width if limit.bits is None else limit.bits
        weight = side.gain * Fraction(2) ** (converter.width - width)
        return _Scale(weight=weight, zero=side.offset, whole=True)
    if case.judgement is not None:
        return _of_result(case.judgement)
    unit = result_unit(case.channel, next(iter(case.channel.value), ""))
    return None if unit.scale is None else _Scale(weight=unit.scale, zero=unit.zero, whole=True)


def _of_result(judgement: Judgement) -> _Scale:
    return _Scale(
        weight=Fraction(judgement.scale).limit_denominator(10**12),
        zero=Fraction(judgement.zero).limit_denominator(10**6),
        whole=judgement.step > 0,
    )


def _allowed(case: Case, facts: Facts, side: Ideal, wanted: Fraction) -> float:
    """The channel's allowed error at the quantity, in its unit."""
    converter = side.channel.converter
    code = min(max(round(side.code_of(wanted)), converter.code_low), converter.code_high)
    given = allowance(side, np.array([code], dtype=np.int64), facts.board.coverage)
    return float(given.at_step(case.judgement.step if case.judgement is not None else 0.0)[0])


def _finding(
    channel: Channel, limit: Limit, threshold: Threshold, scale: _Scale, level: Level
) -> Finding:
    held = Fraction(threshold.value or 0)
    wanted = limit.at.within(channel.unit)
    right = _right_text(threshold, (wanted - scale.zero) / scale.weight, whole=scale.whole)
    stands_for = quantity(held * scale.weight + scale.zero, channel)
    leaf = threshold.leaf
    editable = leaf is not None and exact_value(leaf.text) is not None
    return Finding(
        rule=RULE.name,
        level=level,
        channels=(channel.name,),
        message=f"{threshold.text} is {_plain(held)}, which stands for {stands_for}; limit "
        f"{limit.name} is at {limit.at}",
        place=threshold.place or limit.constant_place,
        found=f"{_plain(held)} ({stands_for})",
        expected=f"{right} ({limit.at})",
        related=() if leaf is None else uses(leaf),
        replacement=edit(leaf, right + _suffix(leaf.text))
        if leaf is not None and editable
        else None,
    )


def _right_text(threshold: Threshold, count: Fraction, *, whole: bool) -> str:
    """The constant that stands for the limit, with the digits the source gives it."""
    if whole:
        nearest = round(count)
        text = threshold.leaf.text if threshold.leaf is not None else ""
        return f"0x{nearest:X}" if text[:2] in ("0x", "0X") and nearest >= 0 else str(nearest)
    digit = half_digit(threshold.leaf.text) if threshold.leaf is not None else None
    places = 0 if digit is None else max(1, len(str((digit * 2).denominator)) - 1)
    return f"{float(count):.{places or 6}f}"


def _suffix(text: str) -> str:
    """The suffix of a constant: what follows its digits (U, L, f)."""
    letters = "uUlL" if text[:2] in ("0x", "0X") else "uUlLfF"
    return text[len(text.rstrip(letters)) :]


def _plain(value: Fraction) -> str:
    return str(value) if value.denominator == 1 else f"{float(value):.6g}"


RULE = ChannelRule(
    name="threshold",
    summary="A limit constant does not stand for the quantity that the board file gives.",
    formula="q(constant) against `at`: the nearest count is right, further off than allowed_error "
    "is "
    "an error",
    source="IEEE 1241 (code bins); common practice",
    check=check,
    levels="error beyond allowed_error, warning when nearer but not the nearest count",
)
