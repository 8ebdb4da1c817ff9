"""Rule `conflicting-constant`."""

import pytest

import facts
from bitweight.firmware.constants import Conflict, Definition
from bitweight.judge.findings import Level
from bitweight_rules.conflicting_constant import RULE
from facts import C, at


def _definition(text: str, file: str) -> Definition:
    return Definition(place=at(3, 9, file), text=text, value=None)


def _conflict(*texts: str, channels: tuple[str, ...] = ("tank",)) -> Conflict:
    return Conflict(
        name="ADC_MAX",
        definitions=tuple(_definition(text, f"src/{index}.h") for index, text in enumerate(texts)),
        channels=channels,
    )


def _found(*conflicts: Conflict) -> tuple[facts.Finding, ...]:
    cases = [facts.case(C().code("int", name), of=facts.channel(name)) for name in ("pump", "tank")]
    return tuple(RULE.check(facts.facts(*cases, conflicts=conflicts)))


@pytest.mark.parametrize("texts", [("1023", "1024"), ("1023", "1024", "4095")])
def test_conflict(texts: tuple[str, ...]) -> None:
    """Definitions of different value are one warning on the last, the others related."""
    (found,) = _found(_conflict(*texts))
    assert (found.level, found.found) == (Level.WARNING, " / ".join(texts))
    assert found.place.file == f"src/{len(texts) - 1}.h"
    assert [one.place.file for one in found.related] == [
        f"src/{index}.h" for index in range(len(texts) - 1)
    ]


def test_channels_follow_the_board() -> None:
    """All channels that use the name are listed, in the board's order."""
    (found,) = _found(_conflict("1", "2", channels=("tank", "pump")))
    assert found.channels == ("pump", "tank")


def test_unused_name_is_silent() -> None:
    """A name that no channel uses is no matter of converters."""
    assert _found(_conflict("1", "2", channels=()), _conflict("1")) == ()
