"""Rule `divider-ratio`: a divider, its inverse or its resistors are not the board's."""

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
    """One finding for each ratio or resistor that is not the board's."""
    return constant_findings(case, RULE.name, _say)


def _say(wrong: WrongConstant) -> str:
    return f"{wrong.held}, but {wrong.wanted}"


RULE = ChannelRule(
    name="divider-ratio",
    summary="The divider ratio in the code, its inverse or its resistors differ from the board's.",
    formula=("ratio = bottom / (top + bottom), a load in parallel with bottom"),
    source="Kirchhoff's rules; common practice",
    check=check,
)
