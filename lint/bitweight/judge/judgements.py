"""A conversion judged against its channel's ideal line, for every code of the converter.

A conversion and its board enter; a `Judgement` leaves, or the reason why there is none, in words
for the user.
"""

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from functools import reduce

import numpy as np
from numpy.typing import NDArray

from bitweight.arithmetic.evaluation import Curve
from bitweight.arithmetic.expressions import Convert, Unknown
from bitweight.arithmetic.values import FaultKind
from bitweight.board.chains import Ideal
from bitweight.board.converters import Coding
from bitweight.judge.allowances import Allowance, allowance
from bitweight.judge.clamps import Clamp, clamps_in_range
from bitweight.judge.codings import ResultScale, other_coding
from bitweight.judge.evaluations import (
    Codes,
    Evaluation,
    Frame,
    Mask,
    code_grid,
    evaluated,
    presented,
    sees_bare_words,
)
from bitweight.judge.findings import Level
from bitweight.judge.inquiries import accepted_line, question
from bitweight.judge.knobs import bare
from bitweight.judge.losses import Loss, coarse_end, truncation_loss
from bitweight.judge.operations import WrongOperation, lasting, wrong_operations
from bitweight.judge.roles import Explanation, explain
from bitweight.judge.scalings import inferred_scale, rough_scale
from bitweight.judge.scans import stride, with_scanned
from bitweight.judge.sides import Point, Side, firmware_side, range_points
from bitweight.judge.statements import settled
from bitweight.judge.suffixes import suffix_for
from bitweight.judge.units import ResultUnit, result_unit
from bitweight.trace.conversions import Conversion

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Judgement:
    """Everything known of a channel whose conversion was evaluated.

    Arrays run over `codes` (the converter's own counts, ascending; all of them up to 18 bits,
    beyond that a grid and every code that matters). `quantity` is q(c), `value` what the firmware
    holds, `error` their difference, `allowed` the limit at each code: all in the channel's unit.
    `scale` is what one count of the result stands for, in the channel's unit; `zero` what a result
    of 0 stands for; `step` is `scale` for an integer result and 0 for a floating one. `words` are
    the raw words behind the codes, `real` the result in real numbers, in counts of the result.
    `operations` are the operators that go wrong, `loss` what early division costs, `clamps` limits
    inside the range, `coding` the one in which the firmware reads a code of another coding. Where a
    converter has more codes than can be looked at, `stride` says that only every so many were.
    """

    conversion: Conversion
    ideal: Ideal
    codes: Codes
    words: Codes
    in_range: NDArray[np.bool_]
    curve: Curve
    quantity: Array
    value: Array
    error: Array
    allowed: Array
    allowed_from: str
    scale: float
    step: float
    lsb: float
    unit_from: str
    hardware: Side
    firmware: Side
    worst_index: int
    points: tuple[Point, ...]
    explanation: Explanation
    zero: float = 0.0
    operations: tuple[WrongOperation, ...] = ()
    loss: Loss | None = None
    clamps: tuple[Clamp, ...] = ()
    coding: Coding | None = None
    stride: int = 1

    @property
    def worst_ratio(self) -> float:
        """The largest error in range as a multiple of the allowed one; infinite for no value."""
        return _worst_ratio(self.error, self.allowed, self.in_range)

    def settled(self, value: float) -> float:
        """A value in the channel's unit, 0 where it is no more than rounding of the arithmetic."""
        return settled(value, self.lsb)

    def quantity_of(self, count: float) -> float:
        """What a count of the result stands for, in the channel's unit."""
        return count * self.scale + self.zero


def judge_conversion(frame: Frame) -> Judgement | str:
    """The judgement of one conversion, or why there is none."""
    codes = code_grid(frame.side.channel.converter)
    if not frame.side.in_range(codes).any():
        return "no code of the converter stands for a quantity inside the channel's range"
    unit = result_unit(frame.side.channel, frame.conversion.result)
    computed = _likeliest(frame, unit, codes)
    reason = _unknown(computed)
    if reason is not None:
        return reason
    explanation = explain(question(frame, unit, computed))
    accepted = replace(frame, side=accepted_line(frame.side, explanation.count))
    scale = unit.scale if unit.scale is not None else inferred_scale(frame, computed, explanation)
    result = ResultScale(
        scale=float(scale),
        zero=float(unit.zero),
        step=float(abs(scale)) if frame.conversion.expression.type.is_integer else 0.0,
    )
    computed = with_scanned(accepted, result, computed)
    return _judged(accepted, result, computed, explanation, unit.unit_from)


def _likeliest(frame: Frame, unit: ResultUnit, codes: Codes) -> Evaluation:
    """The conversion under the presentation of the words that suits it best; the first on a tie."""
    channel = frame.side.channel
    gain = channel.firmware.reading_gain
    ways = presented(channel.converter, codes, gain, bare=sees_bare_words(frame))
    computed = [evaluated(frame, codes, words) for words in ways]
    if len(computed) == 1:
        return computed[0]
    return min(computed, key=lambda one: _rough_error(frame, unit, one))


def _rough_error(frame: Frame, unit: ResultUnit, computed: Evaluation) -> float:
    """The largest error in range, in channel units, of what the code means at the likeliest decade.

    What the target's arithmetic then spoils does not tell how the words arrive.
    """
    inside = computed.in_range
    quantity = frame.side.quantity(computed.codes)[inside]
    held = computed.real[inside]
    scale = float(unit.scale if unit.scale is not None else rough_scale(quantity, held))
    error = np.abs(held * scale + float(unit.zero) - quantity)
    return float(error.max()) if np.isfinite(error).all() else math.inf


def _unknown(computed: Evaluation) -> str | None:
    """Why the value is not known for codes in range."""
    for fault in computed.curve.faults:
        if fault.kind is FaultKind.UNKNOWN and (fault.mask & computed.in_range).any():
            return fault.node.reason if isinstance(fault.node, Unknown) else fault.kind.value
    return None


def _judged(
    frame: Frame,
    result: ResultScale,
    computed: Evaluation,
    explanation: Explanation,
    unit_from: str,
) -> Judgement:
    allowed = allowance(frame.side, computed.codes, frame.board.coverage)
    limit = allowed.at_step(result.step)
    value = computed.held * result.scale + result.zero
    error = value - allowed.quantity
    outside = _worst_ratio(error, limit, computed.in_range) > 1
    coding = other_coding(computed, frame, result) if outside else None
    meant = computed.real * result.scale + result.zero - allowed.quantity
    again = _mended(frame, computed, explanation)
    found = _Faults() if coding else _faults(computed, again, result, allowed)
    known = computed.in_range & ~_unjudged(found.operations, meant)
    meant_ill = outside and _worst_ratio(meant, limit, known) > _ROUNDING
    worst = _worst_index(error, computed.in_range)
    return Judgement(
        conversion=frame.conversion,
        ideal=frame.side,
        codes=computed.codes,
        words=computed.words,
        in_range=computed.in_range,
        curve=computed.curve,
        quantity=allowed.quantity,
        value=value,
        error=error,
        allowed=limit,
        allowed_from=allowed.says(worst, result.step),
        scale=result.scale,
        zero=result.zero,
        step=result.step,
        lsb=allowed.lsb,
        unit_from=unit_from,
        hardware=Side(gain=float(frame.side.gain), offset=float(frame.side.offset)),
        firmware=firmware_side(
            computed, value, wrong_mask(found.operations), allowed.resolution(result.step)
        ),
        worst_index=worst,
        points=range_points(computed, allowed.quantity, value),
        explanation=_unblamed(explanation)
        if coding
        else _completed(
            explanation,
            meant_ill=meant_ill,
            silent=outside and not found.tell_error,
            clamped=bool(found.clamps),
        ),
        operations=found.operations,
        loss=found.loss,
        clamps=found.clamps,
        coding=coding,
        stride=stride(frame.side.channel.converter),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _Faults:
    """What goes wrong in the arithmetic of a conversion."""

    operations: tuple[WrongOperation, ...] = ()
    loss: Loss | None = None
    clamps: tuple[Clamp, ...] = ()

    @property
    def tell_error(self) -> bool:
        """Whether any of them is an error or a warning by itself."""
        inside = any(one.in_range for one in self.operations)
        return inside or self.loss is not None or bool(self.clamps)


def _mended(frame: Frame, computed: Evaluation, explanation: Explanation) -> Evaluation | None:
    """The conversion with its wrong constants mended; None where that is not known."""
    if explanation.mended is None:
        return None
    conversion = replace(frame.conversion, expression=explanation.mended)
    words = computed.words >> explanation.moved
    return evaluated(replace(frame, conversion=conversion), computed.codes, words)


def _lasting(found: _Faults, again: Evaluation, right: Mask) -> _Faults:
    """The faults without those that come right when the wrong constants are mended (`again`).

    `right` are the codes at which nothing is lost then.
    """
    loss = found.loss
    kept = loss is None or loss.at_end or bool((~right & (loss.lost != 0))[again.in_range].any())
    operations = lasting(found.operations, wrong_operations(again))
    return replace(found, operations=operations, loss=loss if kept else None)


def _right(computed: Evaluation, result: ResultScale, allowed: Allowance) -> Mask:
    """The codes whose value is off by no more than one LSB and one step."""
    wanted = (allowed.quantity - result.zero) / result.scale
    with np.errstate(invalid="ignore"):
        return np.asarray(np.abs(computed.held - wanted) <= _tolerance(result, allowed))


def _tolerance(result: ResultScale, allowed: Allowance) -> float:
    """One LSB and one step, in counts of the result."""
    return (allowed.lsb + result.step) / abs(result.scale) * _ROUNDING


def _faults(
    computed: Evaluation, again: Evaluation | None, result: ResultScale, allowed: Allowance
) -> _Faults:
    """What goes wrong, and does so `again` with the wrong constants mended."""
    counts = abs(result.scale)
    operations = tuple(
        replace(one, suffix=suffix_for(computed, one)) for one in wrong_operations(computed)
    )
    wrong = wrong_mask(operations)
    wanted = (allowed.quantity - result.zero) / result.scale
    limit = allowed.at_step(result.step) / counts
    tolerance = _tolerance(result, allowed)
    # Terms that round half up offset what is lost: what ends right has lost nothing.
    right = _right(computed, result, allowed)
    loss = truncation_loss(computed, wrong | right, tolerance) or coarse_end(
        computed, wrong, wanted, limit
    )
    found = _Faults(
        operations=operations,
        loss=None if loss is None or _is_stored_wrong(loss, operations) else loss,
        clamps=clamps_in_range(computed, wanted, limit),
    )
    return found if again is None else _lasting(found, again, _right(again, result, allowed))


def _is_stored_wrong(loss: Loss, operations: Iterable[WrongOperation]) -> bool:
    """Whether what is left by the truncation does not fit where it is put: one cause, told once."""
    return any(
        one.in_range and isinstance(one.node, Convert) and bare(one.node.operand) is loss.node
        for one in operations
    )


_ROUNDING = 1 + 1e-9
"""Binary64 may miss a loss of exactly one LSB plus one step by a rounding; that is no loss more."""


def wrong_mask(operations: Iterable[WrongOperation]) -> NDArray[np.bool_]:
    """The codes at which any of the operators goes wrong; one False where there is none."""
    return reduce(np.logical_or, (one.mask for one in operations), np.array([False]))


def _unjudged(operations: Sequence[WrongOperation], meant: Array) -> NDArray[np.bool_]:
    """The codes that say nothing of gain and offset.

    At these an operator has no value in any type, or a conversion takes a word apart wrongly: a
    fault that is told for itself.
    """
    valueless = wrong_mask(one for one in operations if one.exact is None)
    converted = wrong_mask(one for one in operations if isinstance(one.node, Convert))
    return (valueless & ~np.isfinite(meant)) | converted


def _unblamed(explanation: Explanation) -> Explanation:
    """An explanation that blames no constant: the coding explains the difference."""
    return replace(explanation, wrong=(), cancelling=(), residual=None, culprit=None)


def _completed(
    explanation: Explanation, *, meant_ill: bool, silent: bool, clamped: bool
) -> Explanation:
    """An explanation that leaves nothing over where all is well, and passes nothing in silence.

    `meant_ill` says that what the code means leaves the allowed error, `silent` that the result
    does and no fault of the arithmetic tells it, `clamped` that a limit does it.
    """
    blamed = any(wrong.level is not Level.NOTE for wrong in explanation.wrong)
    if explanation.residual and not meant_ill and not silent:
        return replace(explanation, residual=None, culprit=None)
    if blamed or explanation.residual or not ((meant_ill and not clamped) or silent):
        return explanation
    return replace(explanation, residual=_residual(explanation))


def _residual(explanation: Explanation) -> str:
    """By what the lines differ, where they are known: "gain" or "offset", else "curve"."""
    gain, wanted = explanation.gain, explanation.wanted_gain
    if gain is None or wanted is None:
        return "curve"
    if not math.isclose(gain, wanted, rel_tol=_ALIKE):
        return "gain"
    offset, level = explanation.offset, explanation.wanted_offset
    return "curve" if offset == level else "offset"


_ALIKE = 1e-6
"""Relative difference of two gains that no converter of 24 bits tells apart over its range."""


def _worst_ratio(error: Array, allowed: Array, in_range: NDArray[np.bool_]) -> float:
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = np.where(error == 0, 0.0, np.abs(error) / allowed)[in_range]
    return float(ratio.max(initial=0.0)) if np.isfinite(ratio).all() else math.inf


def _worst_index(error: Array, in_range: NDArray[np.bool_]) -> int:
    """The index of the largest error in range, that of the lowest code on a tie."""
    size = np.where(in_range, np.nan_to_num(np.abs(error), nan=np.inf), -1.0)
    return int(size.argmax())
