"""Places of objects."""

import pytest

from bitweight.firmware.objects import ANYWHERE, Location, Path, Root

TANK = Root("object", "tank")


def at(*path: str | int) -> Location:
    """A part of the object `tank`."""
    return Location(TANK, path)


def test_a_location_is_shown_as_c() -> None:
    """Members and subscripts stand behind the name as C writes them."""
    assert str(at("level", 2, "raw")) == "tank.level[2].raw"


def test_parts_are_within() -> None:
    """An object is within itself and what it is part of, not within another root."""
    assert at("level", 2).within(at("level"))
    assert at("level").within(at("level"))
    assert not at("level").within(at("level", 2))
    assert not at("level").within(Location(Root("object", "sump"), ("level",)))
    assert at().at(("level", 2)) == at("level").part(2)


@pytest.mark.parametrize(
    ("inner", "outer", "possible"),
    [
        ((1,), (1,), True),
        ((1,), (2,), False),
        ((1,), (ANYWHERE,), True),
        ((ANYWHERE,), (2,), True),
        ((1, "a"), (ANYWHERE,), True),
        ((1, "a"), (ANYWHERE, "b"), False),
        ((1,), (1, "a"), False),
    ],
)
def test_an_unknown_subscript_may_be_any(inner: Path, outer: Path, possible: bool) -> None:
    """Whether two places may be one another considers subscripts that are not constant."""
    assert at(*inner).may_be_in(at(*outer)) is possible


def test_a_view_remembers_the_object() -> None:
    """An object looked at as another type is still the same object underneath."""
    assert at("raw").viewed("unsigned char").plain == at("raw")
    assert at("raw").viewed("unsigned char").part(1).plain == at("raw")
    assert at("raw").plain is not None
    assert at("raw").plain == at("raw")
