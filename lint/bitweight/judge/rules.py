"""What a rule is; loading and checking rules by entry point; running them."""

import inspect
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from importlib.metadata import EntryPoint, entry_points

from bitweight.errors import RuleError
from bitweight.judge.cases import Case, Facts
from bitweight.judge.findings import Finding

GROUP = "bitweight.rules"

BY_EFFECT = (
    "error where its effect alone leaves the allowed error, warning where it stays inside, "
    "note where no code changes"
)
"""How a rule's level follows from the reading, unless the rule says otherwise."""


@dataclass(frozen=True, slots=True, kw_only=True)
class ChannelRule:
    """A rule asked once a channel: `check(case, facts)` yields findings.

    `summary` says what it checks in one sentence; `formula` how; `source` names the standard, data
    sheet or "common practice".
    `levels` says which level follows from which effect.
    """

    name: str
    summary: str
    formula: str
    source: str
    check: Callable[[Case, Facts], Iterable[Finding]]
    levels: str = BY_EFFECT
    mend: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class TreeRule:
    """A rule asked once a run: `check(facts)` yields findings."""

    name: str
    summary: str
    formula: str
    source: str
    check: Callable[[Facts], Iterable[Finding]]
    levels: str = BY_EFFECT
    mend: str = ""


Rule = ChannelRule | TreeRule


def load_rules() -> tuple[Rule, ...]:
    """Every registered rule, in order of name.

    Raises `RuleError` for an entry point that does not hold a rule, a duplicate name, a check with
    the wrong number of parameters, and where there is no rule at all: nothing may pass unchecked.
    """
    rules: dict[str, Rule] = {}
    for entry in sorted(entry_points(group=GROUP), key=lambda entry: (entry.name, entry.value)):
        rule = _checked(entry)
        if rule.name in rules:
            raise RuleError(f"{_origin(entry)}: a second rule is named {rule.name!r}")
        rules[rule.name] = rule
    if not rules:
        raise RuleError("no rules are installed; the distribution bitweight brings its own")
    return tuple(rules[name] for name in sorted(rules))


def run_rules(rules: Iterable[Rule], facts: Facts) -> tuple[Finding, ...]:
    """All findings of all rules, unmerged and in no promised order.

    Raises `RuleError` naming the rule when a check fails.
    """
    found: list[Finding] = []
    for rule in rules:
        try:
            match rule:
                case ChannelRule():
                    for view in (view for case in facts.cases for view in case.each):
                        found.extend(rule.check(view, facts))
                case TreeRule():
                    found.extend(rule.check(facts))
        except Exception as error:
            raise RuleError(
                f"rule {rule.name!r} failed: {type(error).__name__}: {error}"
            ) from error
    return tuple(found)


def _checked(entry: EntryPoint) -> Rule:
    try:
        rule = entry.load()
    except Exception as error:
        raise RuleError(f"{_origin(entry)}: cannot be loaded: {error}") from error
    if not isinstance(rule, ChannelRule | TreeRule):
        raise RuleError(f"{_origin(entry)}: holds no rule")
    wanted = 2 if isinstance(rule, ChannelRule) else 1
    if len(inspect.signature(rule.check).parameters) != wanted:
        raise RuleError(f"{_origin(entry)}: check of {rule.name!r} must take {wanted} argument(s)")
    return rule


def _origin(entry: EntryPoint) -> str:
    package = entry.dist.name if entry.dist else "unknown distribution"
    return f"rule {entry.name!r} of {package}"
