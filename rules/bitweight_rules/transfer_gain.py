"""Rule `transfer-gain`: the end-to-end slope differs and no single constant explains it."""

from collections.abc import Iterator

from bitweight.api import (
    Case,
    ChannelRule,
    Facts,
    Finding,
    residual_findings,
)


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """One finding where the gain alone takes the reading out of the allowed error."""
    return residual_findings(case, RULE.name, "gain")


RULE = ChannelRule(
    name="transfer-gain",
    summary="The end-to-end slope differs from the chain's and no single constant explains it.",
    formula="gain of the code (truncation left out) against gain of the chain, per count",
    source="IEEE 1241 (gain)",
    check=check,
    levels="error: it is reported only where the reading leaves the allowed error",
)
