"""Rule `full-scale`: the full-scale count in the code is not the converter's."""

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
    """One finding for each count that must be another one."""
    return constant_findings(case, RULE.name, _say)


def _say(wrong: WrongConstant) -> str:
    return f"{wrong.held}, but {wrong.expected} counts stand for the reference"


RULE = ChannelRule(
    name="full-scale",
    summary="The full-scale count used is not the converter's: 2**N against 2**N - 1, or another.",
    formula=(
        "q(c) = c * reference * reference_gain / (full_scale_count * input_gain), through the chain"
    ),
    source="IEEE 1241 (ideal code bin width: full-scale range / 2**N); data sheets with 2**N - 1",
    check=check,
)
