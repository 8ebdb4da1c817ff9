"""Findings about constants: each wrong one in plain words, its effect, and its correction.

A case and the name of a rule enter; the findings of that rule leave. The rules differ in how they
say it and in nothing else.
"""

from collections.abc import Callable, Iterator

from bitweight.judge.cases import Case, Judgement
from bitweight.judge.explanations import WrongConstant
from bitweight.judge.findings import Finding, Level, Related, Replacement
from bitweight.judge.statements import edit, quantity, steps, uses

Say = Callable[[WrongConstant], str]


def constant_findings(case: Case, rule: str, say: Say) -> Iterator[Finding]:
    """What a rule says of a case: its wrong constants, or a pair that cancels as one note."""
    judgement = case.judgement
    if judgement is None:
        return
    for wrong in judgement.explanation.wrong:
        if wrong.rule == rule:
            yield _wrong_finding(case, judgement, wrong, say)
    cancelling = judgement.explanation.cancelling
    if cancelling and cancelling[0].rule == rule:
        yield _cancelling_finding(case, judgement, cancelling, say)


def _wrong_finding(case: Case, judgement: Judgement, wrong: WrongConstant, say: Say) -> Finding:
    sentences = (say(wrong), effect(case, wrong), wrong.remark)
    return Finding(
        rule=wrong.rule,
        level=wrong.level,
        channels=(case.channel.name,),
        message="; ".join(sentence for sentence in sentences if sentence),
        place=wrong.place,
        found=wrong.found,
        expected=wrong.expected,
        related=(*_uses(wrong), *steps(judgement.conversion)),
        replacement=_edit(wrong),
    )


def _cancelling_finding(
    case: Case, judgement: Judgement, cancelling: tuple[WrongConstant, ...], say: Say
) -> Finding:
    first, *others = cancelling
    makes_up = [f"{other.text} ({other.found} for {other.expected})" for other in others]
    return Finding(
        rule=first.rule,
        level=Level.NOTE,
        channels=(case.channel.name,),
        message=f"{say(first)}; {' and '.join(makes_up)} makes up for it exactly",
        place=first.place,
        found=first.found,
        expected=first.expected,
        related=(
            *(
                Related(
                    place=other.place,
                    message=f"{other.held}, but {other.wanted}",
                )
                for other in others
            ),
            *_uses(first),
            *steps(judgement.conversion),
        ),
    )


def effect(case: Case, wrong: WrongConstant) -> str:
    """What the fault does where it does most, for a message; nothing where it does nothing."""
    if wrong.level is Level.NOTE:
        return "no result changes by it"
    worst = max(wrong.effect, key=lambda point: abs(point.error), default=None)
    if worst is None or case.judgement is None or not case.judgement.settled(worst.error):
        return ""
    direction = "high" if worst.error > 0 else "low"
    amount = quantity(abs(worst.error), case.channel)
    return f"this alone: up to {amount} {direction} (code {worst.at_count})"


def _uses(wrong: WrongConstant) -> tuple[Related, ...]:
    return () if wrong.leaf is None else uses(wrong.leaf)


def _edit(wrong: WrongConstant) -> Replacement | None:
    if wrong.leaf is None or wrong.replacement is None:
        return None
    return edit(wrong.leaf, wrong.replacement)
