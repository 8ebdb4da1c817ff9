"""Rule `transfer-curve`: the code bends where the chain is straight."""

from collections.abc import Iterator

from bitweight.api import (
    Case,
    ChannelRule,
    Facts,
    Finding,
    residual_findings,
)


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """One finding where the curve takes the reading out of the allowed error."""
    return residual_findings(case, RULE.name, "curve")


RULE = ChannelRule(
    name="transfer-curve",
    summary="The code's curve differs from the chain's and no single constant explains it.",
    formula="value that the code means against q(c), for every code in range",
    source="IEEE 1241 (integral nonlinearity)",
    check=check,
    levels="error: it is reported only where the reading leaves the allowed error",
)
