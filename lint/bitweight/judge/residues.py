"""Findings about a whole line: what no single constant explains, with both sides in figures.

A case, the name of a rule and the kind of residual it reports enter; findings leave.
"""

from collections.abc import Iterator

from bitweight.judge.cases import Case, Judgement
from bitweight.judge.explanations import Explanation, WrongConstant
from bitweight.judge.findings import Finding, Level, Replacement
from bitweight.judge.statements import edit, off, quantity, steps, uses


def residual_findings(case: Case, rule: str, kind: str) -> Iterator[Finding]:
    """One finding where the explanation of the case leaves this kind over.

    A reading in another coding is no matter of gain and offset: `sign` speaks of that.
    """
    judgement = case.judgement
    if judgement is None or judgement.coding is not None:
        return
    explanation = judgement.explanation
    if explanation.residual != kind:
        return
    found, expected = _sides(case, explanation, kind)
    culprit = explanation.culprit
    leaf = culprit.leaf if culprit is not None else None
    yield Finding(
        rule=rule,
        level=Level.ERROR,
        channels=(case.channel.name,),
        message="; ".join(_sentences(case, judgement, found, expected)),
        place=judgement.conversion.place if leaf is None else leaf.place,
        found=found,
        expected=expected,
        related=(*(uses(leaf) if leaf is not None else ()), *steps(judgement.conversion)),
        replacement=_edit(culprit),
    )


def _sides(case: Case, explanation: Explanation, kind: str) -> tuple[str, str]:
    """What the code has and what the board wants, in the channel's unit."""
    if kind == "gain" and explanation.gain is not None and explanation.wanted_gain is not None:
        sides = (explanation.gain, explanation.wanted_gain)
        found, expected = (f"{quantity(gain, case.channel)} per count" for gain in sides)
        return found, expected
    offsets = (explanation.offset, explanation.wanted_offset)
    if kind == "offset" and offsets[0] is not None and offsets[1] is not None:
        found, expected = (quantity(offset or 0.0, case.channel) for offset in offsets)
        return found, expected
    return "a curve", "a straight line"


def _sentences(case: Case, judgement: Judgement, found: str, expected: str) -> Iterator[str]:
    kind = judgement.explanation.residual
    if kind == "curve":
        yield "what the code computes is no straight line, but the signal chain is one"
    else:
        yield f"the code has {_article(kind)} of {found}, the board wants {expected}"
    worst = judgement.worst_index
    reads = off(float(judgement.error[worst]), judgement.lsb, case.channel)
    yield f"{reads} at code {int(judgement.codes[worst])}"
    culprit = judgement.explanation.culprit
    if culprit is not None:
        yield f"{culprit.text} would be right as {culprit.expected}"


def _article(kind: str | None) -> str:
    return "an offset" if kind == "offset" else "a gain"


def _edit(culprit: WrongConstant | None) -> Replacement | None:
    if culprit is None or culprit.leaf is None or culprit.replacement is None:
        return None
    return edit(culprit.leaf, culprit.replacement)
