"""One channel's two sides for every code, and the error between them.

A channel and what was traced for it enter; a `Case` leaves, with a judgement or the reason why
there is none.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from enum import Enum

from bitweight.arithmetic.expressions import Code, walk
from bitweight.arithmetic.types import DataModel
from bitweight.board.chains import ideal, not_computed
from bitweight.board.hardware import Board, Channel
from bitweight.firmware.constants import Conflict
from bitweight.judge.ends import agree, without_bare_copies
from bitweight.judge.evaluations import Frame, steady_words
from bitweight.judge.judgements import Judgement, judge_conversion
from bitweight.judge.sides import Point, Side
from bitweight.limits import Limits
from bitweight.places import Place
from bitweight.trace.conversions import Conversion, Trace
from bitweight.trace.settings import Setting
from bitweight.trace.thresholds import Threshold

__all__ = ["Case", "Facts", "Judgement", "Point", "Side", "Status", "judge_case", "reads_another"]


class Status(Enum):
    """The verdict on a channel."""

    VERIFIED = "verified"
    MISMATCHED = "mismatched"
    UNTRACED = "untraced"


@dataclass(frozen=True, slots=True, kw_only=True)
class Case:
    """One channel with all that is known of it; `judgement` is None if nothing could be compared.

    `judgement` is the worst of those made, `others` are the rest; `reason` says why there is none.
    `place` is the channel's line in the board file.
    """

    channel: Channel
    trace: Trace
    judgement: Judgement | None
    reason: str | None = None
    place: Place | None = None
    others: tuple[Judgement, ...] = ()

    @property
    def each(self) -> tuple["Case", ...]:
        """The case once for every judgement, the worst first, so that a rule sees one at a time."""
        return (self, *(replace(self, judgement=other, others=()) for other in self.others))


@dataclass(frozen=True, slots=True, kw_only=True)
class Facts:
    """The facts of a whole run that rules may look at."""

    board: Board
    cases: tuple[Case, ...]
    settings: tuple[Setting, ...] = ()
    thresholds: tuple[Threshold, ...] = ()
    conflicts: tuple[Conflict, ...] = ()


def judge_case(
    channel: Channel, trace: Trace, board: Board, model: DataModel, limits: Limits
) -> Case:
    """The case of one channel: each of its conversions judged, the worst shown."""
    case = Case(channel=channel, trace=trace, judgement=None, place=channel.place)
    reason = not_computed(channel) or _untraced(channel, trace)
    if reason is not None:
        return replace(case, reason=reason)
    frames = _frames(channel, trace, board, model, limits)
    if not frames:
        return replace(case, reason=_only_raw(channel, trace))
    judged = [judge_conversion(frame) for frame in frames]
    judgements = [one for one in judged if isinstance(one, Judgement)]
    if not judgements:
        return replace(case, reason=next(one for one in judged if isinstance(one, str)))
    if not channel.value and not agree(judgements):
        return replace(case, reason=_ambiguous(judgements))
    worst, *others = sorted(judgements, key=lambda one: -one.worst_ratio)
    return replace(case, judgement=worst, others=tuple(others))


def reads_another(conversion: Conversion) -> tuple[Code, ...]:
    """The readings of a conversion, if none of them is its own channel's."""
    codes = _codes(conversion)
    if any(conversion.channel in code.channels or not code.channels for code in codes):
        return ()
    return codes


def _untraced(channel: Channel, trace: Trace) -> str | None:
    """Why nothing can be judged, before anything is computed."""
    if not trace.conversions:
        return trace.reason or f"no conversion of {channel.name} was found"
    if all(reads_another(one) for one in trace.conversions):
        return f"{trace.conversions[0].result} is computed from another channel's reading"
    if not any(_reads(one) for one in trace.conversions):
        return f"{trace.conversions[0].result} does not depend on the reading"
    return None


def _reads(conversion: Conversion) -> bool:
    return bool(_codes(conversion))


def _codes(conversion: Conversion) -> tuple[Code, ...]:
    """Every reading in a conversion."""
    return tuple(node for node in walk(conversion.expression) if isinstance(node, Code))


def _frames(
    channel: Channel, trace: Trace, board: Board, model: DataModel, limits: Limits
) -> Sequence[Frame]:
    own = [one for one in trace.conversions if _reads(one) and not reads_another(one)]
    read = {name for one in own for code in _codes(one) for name in code.channels}
    others = steady_words(one for one in board.channels if one.name in read - {channel.name})
    frames = [
        Frame(
            conversion=conversion,
            side=ideal(channel),
            board=board,
            model=model,
            limits=limits,
            others=others,
        )
        for conversion in own
    ]
    return frames if channel.value else without_bare_copies(frames)


def _only_raw(channel: Channel, trace: Trace) -> str:
    names = dict.fromkeys(one.result for one in trace.conversions)
    return (
        f"only the raw code leaves ({', '.join(names)}), no conversion of {channel.name} was found"
    )


def _ambiguous(judgements: Sequence[Judgement]) -> str:
    names = dict.fromkeys(one.conversion.result for one in judgements)
    return f"the reading ends in {', '.join(names)}: name one with value = ..."
