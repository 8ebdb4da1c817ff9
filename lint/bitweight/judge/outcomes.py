"""What a run of `verify` yields: the facts, the findings in order, and the counts."""

from collections.abc import Mapping
from dataclasses import dataclass

from bitweight.judge.cases import Facts, Status
from bitweight.judge.findings import Finding


@dataclass(frozen=True, slots=True, kw_only=True)
class Outcome:
    """One verified board. `statuses` has every channel.

    `source_lines` is the text of the lines that findings name.
    `problems` are remarks on the sources for standard error (skipped files, broken conditionals).
    """

    facts: Facts
    findings: tuple[Finding, ...]
    statuses: Mapping[str, Status]
    reasons: Mapping[str, str]
    counts: Mapping[str, int]
    source_lines: Mapping[tuple[str, int], str]
    problems: tuple[str, ...] = ()
