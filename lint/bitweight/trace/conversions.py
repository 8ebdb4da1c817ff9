"""From a reading to its result: what tracing hands to the judge."""

from dataclasses import dataclass

from bitweight.arithmetic.expressions import Expression
from bitweight.places import Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Step:
    """One stop on the way from the reading to the result."""

    place: Place
    message: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Conversion:
    """One way from a channel's reading to one result.

    `result` names the variable, member, function or macro that holds it; `declared` is where that
    is declared with its type, if it is an object; `assumed` says what had to be assumed, one
    sentence each, where that is used.
    """

    channel: str
    result: str
    expression: Expression
    place: Place
    function: str
    formula: str
    steps: tuple[Step, ...] = ()
    assumed: tuple[Step, ...] = ()
    other_readings: tuple[str, ...] = ()
    declared: Place | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Trace:
    """Everything found for one channel. With no conversions, `reason` says why, for the user."""

    channel: str
    conversions: tuple[Conversion, ...] = ()
    reason: str | None = None
    place: Place | None = None
