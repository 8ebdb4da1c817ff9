"""Rule `untraced`: a channel was not found in the code, or could not be followed."""

from collections.abc import Iterator

from bitweight.api import (
    Case,
    ChannelRule,
    Facts,
    Finding,
    Level,
    Related,
    reads_another,
)


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """A warning with the reason, and one for each limit whose constant has no value.

    What was followed only by taking a variable at its default is a note.
    """
    if case.judgement is None and not any(map(reads_another, case.trace.conversions)):
        yield _channel(case)
    yield from _assumed(case)
    yield from _limits(case, facts)


def _assumed(case: Case) -> Iterator[Finding]:
    """A note for each variable that was judged at a default it need not keep."""
    if case.judgement is None:
        return
    for assumption in case.judgement.conversion.assumed:
        yield Finding(
            rule=RULE.name,
            level=Level.NOTE,
            channels=(case.channel.name,),
            message=f"{assumption.message}; give its value in [constants] if it is another",
            place=assumption.place,
        )


def _channel(case: Case) -> Finding:
    channel = case.channel
    place = case.trace.place
    return Finding(
        rule=RULE.name,
        level=Level.WARNING,
        channels=(channel.name,),
        message=case.reason or f"no conversion of {channel.name} was found",
        place=case.place or channel.place,
        related=() if place is None else (Related(place=place, message="followed up to here"),),
    )


def _limits(case: Case, facts: Facts) -> Iterator[Finding]:
    limits = {limit.name: limit for limit in case.channel.limits}
    for threshold in facts.thresholds:
        limit = limits.get(threshold.name)
        if threshold.channel != case.channel.name or limit is None or threshold.value is not None:
            continue
        reason = threshold.reason or "its value could not be worked out"
        yield Finding(
            rule=RULE.name,
            level=Level.WARNING,
            channels=(case.channel.name,),
            message=f"limit {limit.name}: {threshold.text} was not compared: {reason}",
            place=limit.constant_place,
            related=()
            if threshold.place is None
            else (Related(place=threshold.place, message="defined here"),),
        )


RULE = ChannelRule(
    name="untraced",
    summary="A channel of the board was not found in the code, or could not be followed.",
    formula="no conversion from the channel's reading to a result could be evaluated",
    source="common practice: what was not seen is never silently fine",
    check=check,
    levels="warning; note where a variable is judged at its declared default",
    mend="compare the spelling of reading (and value) with the code; limit it by @ FUNCTION or "
    "@ FILE where the same text means several things; select the build with -D and define; give "
    "run-time data a value in [constants]",
)
