"""A result that configuration code justifies otherwise than the board file says.

The settings of a case enter; findings of the rule `justification` leave. What the conversion itself
assumes is judged elsewhere, and goes first: one cause is one finding.
"""

from collections.abc import Iterator

from bitweight.arithmetic.expressions import Code, walk
from bitweight.judge.cases import Case, Facts
from bitweight.judge.findings import Finding, Level
from bitweight.judge.selections import contradicting, selections

_BYTE = 8


def alignment_findings(case: Case, facts: Facts, rule: str) -> Iterator[Finding]:
    """A finding for each selection of the other justification."""
    converter = case.channel.converter
    stated = converter.justified_stated
    if _blamed(case, rule) or not (stated or _reads_whole_word(case)):
        return
    assumed = "" if stated else " (assumed: the board file states no justification)"
    for setting in contradicting(selections(case, facts, rule), converter.justified.value):
        yield Finding(
            rule=rule,
            level=Level.ERROR if stated else Level.WARNING,
            channels=(case.channel.name,),
            message=f"{setting.target} selects results justified {setting.value}, but "
            f"{converter.name} is "
            f"justified {converter.justified.value}{assumed}",
            place=setting.place,
            found=setting.value,
            expected=converter.justified.value,
        )


def _reads_whole_word(case: Case) -> bool:
    """Whether the code reads a register that is wider than a byte, and so sees the alignment.

    The high byte alone is a converter of eight bits; what a driver returns it has aligned itself.
    """
    conversions = case.trace.conversions
    codes = [node for one in conversions for node in walk(one.expression) if isinstance(node, Code)]
    return any(code.text.isidentifier() and code.type.bits > _BYTE for code in codes)


def _blamed(case: Case, rule: str) -> bool:
    wrong = () if case.judgement is None else case.judgement.explanation.wrong
    return any(one.rule == rule for one in wrong)
