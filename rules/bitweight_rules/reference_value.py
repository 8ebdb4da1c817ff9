"""Rule `reference-value`: the reference voltage in the code is not the board's."""

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
    """One finding for each reference voltage that is not the board's."""
    return constant_findings(case, RULE.name, _say)


def _say(wrong: WrongConstant) -> str:
    return f"{wrong.held}, but {wrong.wanted}"


RULE = ChannelRule(
    name="reference-value",
    summary="The reference voltage in the code is not the board's.",
    formula=(
        "q(c) = c * reference * reference_gain / (full_scale_count * input_gain), through the chain"
    ),
    source="IEEE 1241 (transfer of an ideal converter); the converter's data sheet",
    check=check,
)
