"""`bitweight why`: what a rule checks, how, and from where that is known."""

import difflib
import re
from collections.abc import Sequence

from bitweight.command.options import WhyOptions
from bitweight.command.outputs import say
from bitweight.errors import UsageError
from bitweight.judge.rules import Rule, load_rules
from bitweight.report.texts import shown, wrapped

_WIDTH = 80

_HAZARD = "a channel with a hazard raises note to warning and warning to error"
_RAISABLE = re.compile(r"\b(?:warning|note)\b")
_ACCEPTING = (
    "/* deviation({name}): reason */ on the line or the one above, or [[deviation]] in the board "
    "file"
)


def run_why(options: WhyOptions) -> int:
    """Prints one rule, or all with their summaries; exit status 0.

    Raises `UsageError` with the nearest names for a rule that does not exist.
    """
    rules = load_rules()
    say(catalogue(rules) if options.rule is None else explanation(_named(rules, options.rule)))
    return 0


def catalogue(rules: Sequence[Rule]) -> str:
    """All rules, a name and a summary each."""
    margin = max((len(rule.name) for rule in rules), default=0) + 2
    return "".join(_entry(rule.name, rule.summary, margin) for rule in rules)


def explanation(rule: Rule) -> str:
    """One rule in full."""
    parts = (
        ("rule", rule.name),
        ("checks", rule.summary),
        ("formula", rule.formula),
        ("level", f"{rule.levels}; {_HAZARD}" if _RAISABLE.search(rule.levels) else rule.levels),
        ("source", rule.source),
        ("mend", rule.mend),
        ("accept", _ACCEPTING.format(name=rule.name)),
    )
    return "".join(_entry(label, text, 10) for label, text in parts if text)


def _entry(label: str, text: str, margin: int) -> str:
    first, *rest = (
        line for part in text.splitlines() or [""] for line in wrapped(part, _WIDTH - margin)
    )
    lines = [f"{shown(label):<{margin}}{first}", *(" " * margin + line for line in rest)]
    return "".join(f"{line.rstrip()}\n" for line in lines)


def _named(rules: Sequence[Rule], name: str) -> Rule:
    for rule in rules:
        if rule.name == name:
            return rule
    near = difflib.get_close_matches(name, [rule.name for rule in rules], n=3, cutoff=0.4)
    hint = f"; did you mean {' or '.join(near)}?" if near else "; bitweight why lists all"
    raise UsageError(f"there is no rule {name!r}{hint}")
