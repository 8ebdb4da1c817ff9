"""Rule `resolution`: the code assumes a converter of other bits."""

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
    """One finding for each count or shift of another width."""
    return constant_findings(case, RULE.name, _say)


def _say(wrong: WrongConstant) -> str:
    return f"{wrong.held}, but the converter's results need {wrong.expected}"


RULE = ChannelRule(
    name="resolution",
    summary="The bits that the conversion assumes differ from the board's.",
    formula=("full-scale count 2**M or 2**M - 1, or a shift by M, where the converter has N bits"),
    source="IEEE 1241 (N bits have 2**N codes); common practice",
    check=check,
)
