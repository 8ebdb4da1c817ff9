"""Rule `early-division`: integer division or a shift throws resolution away before it is needed."""

from collections.abc import Iterator

import numpy as np

from bitweight.api import (
    Binary,
    Case,
    ChannelRule,
    Facts,
    Finding,
    Judgement,
    Loss,
    place_of,
    quantity,
    stated_or_warning,
    steps,
)


def check(case: Case, facts: Facts) -> Iterator[Finding]:
    """One finding, on the operator that loses most of what is lost."""
    judgement = case.judgement
    if judgement is None or judgement.loss is None:
        return
    loss = judgement.loss
    lost = np.abs(loss.lost) * abs(judgement.scale)
    largest = quantity(float(lost[loss.index]), case.channel)
    yield Finding(
        rule=RULE.name,
        level=stated_or_warning(
            stated=case.channel.allowed_error is not None,
            leaves=bool((lost > judgement.allowed).any()),
        ),
        channels=(case.channel.name,),
        message=_message(case, judgement, loss, largest),
        place=place_of(loss.node, judgement.conversion.place),
        found=f"up to {largest} lost",
        expected="finer counts of the result" if loss.at_end else "multiply before dividing",
        related=steps(judgement.conversion),
    )


def _message(case: Case, judgement: Judgement, loss: Loss, largest: str) -> str:
    code = int(judgement.codes[loss.index])
    if loss.at_end:
        return (
            f"{_what(loss)} cuts {judgement.conversion.result} to whole counts: up to {largest} "
            f"lost, at code {code}, leaves the allowed error by itself"
        )
    lsb = quantity(judgement.lsb, case.channel)
    return f"{_what(loss)} loses up to {largest}, at code {code}, where one LSB is {lsb}"


def _what(loss: Loss) -> str:
    if not isinstance(loss.node, Binary):
        return "converting to an integer here"
    return "dividing here" if loss.node.operator == "/" else "shifting right here"


RULE = ChannelRule(
    name="early-division",
    summary="Integer division or a shift throws resolution away before it is needed.",
    formula="|C value - real value truncated once at the end| > one LSB + one step, for a code in "
    "range",
    source="C11 6.5.5p6 (division truncates toward zero), 6.5.7p5 (right shift); common practice",
    check=check,
    levels="error where truncation alone leaves a stated allowed_error, note where it stays "
    "inside, "
    "warning where none is stated",
)
