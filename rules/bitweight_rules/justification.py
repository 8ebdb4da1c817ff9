"""Rule `justification`: a left-justified result is read as right-justified, or the reverse."""

from collections.abc import Iterator

from bitweight.api import (
    Case,
    ChannelRule,
    Facts,
    Finding,
    WrongConstant,
    alignment_findings,
    constant_findings,
)


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """Where the code is taken to stand elsewhere in its word, or is configured to."""
    yield from constant_findings(case, RULE.name, _say)
    yield from alignment_findings(case, facts, RULE.name)


def _say(wrong: WrongConstant) -> str:
    return f"{wrong.text} misplaces the code in its word: {wrong.found}, not {wrong.expected}"


RULE = ChannelRule(
    name="justification",
    summary="A left-justified result is read as a right-justified one, or the reverse.",
    formula=("gain of the code / gain of the board = 2**n or 2**-n, n the bits below the code"),
    source="data sheets (left- and right-adjusted result registers); common practice",
    check=check,
)
