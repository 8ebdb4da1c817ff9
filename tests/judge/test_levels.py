"""Hazards, and the level that a loss earns."""

import pytest

import facts
from bitweight.judge.findings import Level
from bitweight.judge.levels import stated_or_warning, with_hazards


@pytest.mark.parametrize(
    ("level", "raised"),
    [(Level.NOTE, Level.WARNING), (Level.WARNING, Level.ERROR), (Level.ERROR, Level.ERROR)],
)
def test_hazard_raises(level: Level, raised: Level) -> None:
    """A hazard raises a finding by one level and lends it its words."""
    found = with_hazards(facts.finding(level=level), {"tank": "overflow of the tank"})
    assert (found.level, found.hazard) == (raised, "overflow of the tank")


def test_other_channels_stay() -> None:
    """The hazard of another channel changes nothing."""
    finding = facts.finding()
    assert with_hazards(finding, {"pump": "runs dry"}) is finding


@pytest.mark.parametrize(
    ("stated", "leaves", "level"),
    [
        (False, False, Level.WARNING),
        (False, True, Level.WARNING),
        (True, False, Level.NOTE),
        (True, True, Level.ERROR),
    ],
)
def test_stated_or_warning(stated: bool, leaves: bool, level: Level) -> None:
    """Only a stated allowed error makes a loss a note or an error."""
    assert stated_or_warning(stated=stated, leaves=leaves) is level
