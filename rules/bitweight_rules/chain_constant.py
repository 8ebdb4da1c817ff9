"""Rule `chain-constant`: another constant of the signal chain is not the board's."""

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
    """One finding for each constant of the chain that is not the board's."""
    return constant_findings(case, RULE.name, _say)


def _say(wrong: WrongConstant) -> str:
    return f"{wrong.held}, but {wrong.wanted}"


RULE = ChannelRule(
    name="chain-constant",
    summary=(
        "Another constant of the chain (shunt, amplifier gain or offset, sensitivity, "
        "zero code) differs from the board's."
    ),
    formula=("V = I * R for a shunt; V = gain * x + offset for an amplifier or a linear sensor"),
    source="Ohm's law; the parts' data sheets; common practice",
    check=check,
)
