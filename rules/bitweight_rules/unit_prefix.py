"""Rule `unit-prefix`: the result is off by a power of ten."""

from collections.abc import Iterator

from bitweight.api import (
    Case,
    ChannelRule,
    Facts,
    Finding,
    WrongConstant,
    constant_findings,
)


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """One finding where a power of ten is all that is wrong."""
    return constant_findings(case, RULE.name, _say)


def _say(wrong: WrongConstant) -> str:
    return f"{wrong.held}, off by a power of ten: {wrong.expected} is right"


RULE = ChannelRule(
    name="unit-prefix",
    summary="The result is a power of ten off its stated unit: mV taken for V and the like.",
    formula=(
        "gain of the code / gain of the board = 10**n, n other than 0, where the unit is stated"
    ),
    source="SI prefixes (BIPM SI Brochure, 9th edition, table 7)",
    check=check,
)
