"""What a hazard does to findings, and the level that an effect on the reading earns."""

from collections.abc import Mapping
from dataclasses import replace

from bitweight.judge.findings import Finding, Level


def with_hazards(finding: Finding, hazards: Mapping[str, str]) -> Finding:
    """The finding one level up, with the caution of the first of its channels that has one.

    `hazards` maps channel names to the board file's own words; a finding of no such channel is
    returned as it came.
    """
    caution = next((hazards[name] for name in finding.channels if name in hazards), None)
    if caution is None:
        return finding
    return replace(finding, level=finding.level.raised(), hazard=caution)


def stated_or_warning(*, stated: bool, leaves: bool) -> Level:
    """The level of a loss that only a stated allowed error can excuse.

    A stated allowed error makes it an error where the loss alone leaves it and a note where it
    stays inside; without one it is a warning.
    """
    if not stated:
        return Level.WARNING
    return Level.ERROR if leaves else Level.NOTE
