"""Findings and their levels."""

import pytest

from bitweight.judge.findings import Finding, Level
from bitweight.places import Place


@pytest.mark.parametrize(
    ("level", "raised"),
    [
        (Level.NOTE, Level.WARNING),
        (Level.WARNING, Level.ERROR),
        (Level.ERROR, Level.ERROR),
    ],
)
def test_a_hazard_raises_by_one(level: Level, raised: Level) -> None:
    """Note becomes warning, warning becomes error, and there is nothing above."""
    assert level.raised() is raised


def test_levels_have_an_order() -> None:
    """Every level has a weight, and the words of SARIF 2.1.0 3.27.10 rise in this order."""
    ordered = sorted(Level, key=lambda level: level.weight)
    assert [level.value for level in ordered] == ["note", "warning", "error"]


@pytest.mark.parametrize(
    ("channels", "channel"), [((), None), (("tank",), "tank"), (("tank", "pump"), None)]
)
def test_the_channel_of_a_finding(channels: tuple[str, ...], channel: str | None) -> None:
    """A finding has a channel of its own only where it touches exactly one."""
    finding = Finding(
        rule="full-scale",
        level=Level.NOTE,
        channels=channels,
        message="",
        place=Place("a.c"),
    )
    assert finding.channel == channel
