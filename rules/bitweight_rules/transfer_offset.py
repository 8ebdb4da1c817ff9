"""Rule `transfer-offset`: the end-to-end offset differs and no single constant explains it."""

from collections.abc import Iterator

from bitweight.api import (
    Case,
    ChannelRule,
    Facts,
    Finding,
    residual_findings,
)


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """One finding where the offset takes the reading out of the allowed error."""
    return residual_findings(case, RULE.name, "offset")


RULE = ChannelRule(
    name="transfer-offset",
    summary="The end-to-end offset differs from the chain's and no single constant explains it.",
    formula="offset of the code against offset of the chain, beyond half an LSB and one step",
    source="IEEE 1241 (offset); half an LSB: rounding idioms, common practice",
    check=check,
    levels="error: it is reported only where the reading leaves the allowed error",
)
