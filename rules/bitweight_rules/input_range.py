"""Rule `input-range`: the signal chain itself drives the converter past its range."""

from collections.abc import Iterator
from fractions import Fraction

from bitweight.api import (
    Case,
    Channel,
    ChannelRule,
    Facts,
    Finding,
    Ideal,
    Level,
    ideal,
    not_computed,
    quantity,
    volts,
)

Ends = tuple[Fraction, Fraction]


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """One finding where the ends of the range leave the pin's limits or the converter's span."""
    channel = case.channel
    if channel.range is None or not_computed(channel) is not None:
        return
    side = ideal(channel)
    limit = _pin_limit(channel)
    if limit is not None and _beyond(side.pin_ends, limit):
        yield _past_limit(channel, side, limit)
    elif _beyond(side.pin_ends, side.converter_ends):
        yield _past_span(case, side)


def _beyond(ends: Ends, bounds: Ends) -> bool:
    return ends[0] < bounds[0] or ends[1] > bounds[1]


def _pin_limit(channel: Channel) -> Ends | None:
    if channel.pin_limit is None:
        return None
    low, high = channel.pin_limit
    return low.value, high.value


def _past_span(case: Case, side: Ideal) -> Finding:
    channel = case.channel
    pin, span = side.pin_ends, side.converter_ends
    over = pin[1] > span[1]
    end, bound = (pin[1], span[1]) if over else (pin[0], span[0])
    code = channel.converter.code_high if over else channel.converter.code_low
    return Finding(
        rule=RULE.name,
        level=_level(case, side, code),
        channels=(channel.name,),
        message=f"the range puts {volts(end)} on the pin, {channel.converter.name} ends at "
        f"{volts(bound)}: the reading stops at {quantity(side.at(code), channel)}",
        place=channel.place,
        found=_shown(pin),
        expected=f"within {_shown(span)}",
    )


def _level(case: Case, side: Ideal, code: int) -> Level:
    """Error where a value of the range that reads as the last code is off by more than allowed."""
    judgement = case.judgement
    if judgement is None:
        return Level.WARNING
    reached = float(side.at(code))
    missed = min(reached - float(side.low), float(side.high) - reached)
    allowed = judgement.allowed[judgement.in_range]
    return Level.ERROR if missed > float(allowed.max(initial=0.0)) else Level.WARNING


def _past_limit(channel: Channel, side: Ideal, limit: Ends) -> Finding:
    pin = side.pin_ends
    end, bound = (pin[1], limit[1]) if pin[1] > limit[1] else (pin[0], limit[0])
    return Finding(
        rule=RULE.name,
        level=Level.ERROR,
        channels=(channel.name,),
        message=f"the range puts {volts(end)} on the pin, its absolute limit is {volts(bound)}: "
        "this can damage the part, and clamping currents upset its other inputs",
        place=channel.place,
        found=f"{_shown(pin)} at the pin",
        expected=f"within {_shown(limit)}, the pin's limit",
    )


def _shown(ends: Ends) -> str:
    return f"{volts(ends[0])} to {volts(ends[1])}"


RULE = ChannelRule(
    name="input-range",
    summary="The signal chain itself drives the converter past its range, for values inside the "
    "channel's range.",
    formula="chain(range) within code_low..full-scale count times the LSB, and within pin_limit",
    source="IEEE 1241 (full-scale range); the part's absolute maximum ratings",
    check=check,
    levels="error where a value of the range is read off by more than the allowed error, or "
    "pin_limit is exceeded; else warning",
)
