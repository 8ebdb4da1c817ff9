"""Values by location."""

from bitweight.arithmetic.expressions import Literal
from bitweight.firmware.objects import ANYWHERE, Arithmetic, Location, Path, Record, Root
from bitweight.trace.memory import Address, Copy, Routine, State, is_number
from tracing_cases import INT32

TANK = Root("object", "tank")
INT = Arithmetic(type=INT32.int_)
PAIR = Record(kind="struct", tag="pair", scope="main.c")


def at(*path: str | int) -> Location:
    """A part of the object `tank`."""
    return Location(TANK, path)


def whole(value: int) -> Literal:
    """An int constant."""
    return Literal(value=value, type=INT32.int_)


def written(*places: Path) -> State:
    """A state in which each of these parts has its position as value."""
    state = State()
    for index, path in enumerate(places):
        state.write(at(*path), whole(index))
    return state


def test_only_expressions_are_numbers() -> None:
    """Pointers, functions and structs are no numbers."""
    assert is_number(whole(1))
    assert not is_number(Address(target=at(), type=INT))
    assert not is_number(Routine(name="f", function=None))
    assert not is_number(Copy(parts=(), source=at(), type=PAIR))


def test_a_write_to_the_whole_drops_its_parts() -> None:
    """What was known of members is gone when the object is written as a whole."""
    state = written(("a",), ("b", 1))
    state.write(at(), Copy(parts=((("a",), whole(7)),), source=at("x"), type=PAIR))
    assert set(state.values) == {at(), at("a")}
    part = state.values[at("a")]
    assert isinstance(part, Literal)
    assert part.value == 7


def test_a_write_at_an_unknown_subscript_drops_every_element() -> None:
    """Any element may be the one that is written."""
    state = written(("v", 0), ("v", 1), ("m",))
    state.write(at("v", ANYWHERE), whole(9))
    assert set(state.values) == {at("m"), at("v", ANYWHERE)}
    state.write(at("v", 1), whole(3))
    assert set(state.values) == {at("m"), at("v", ANYWHERE), at("v", 1)}


def test_copies_change_on_their_own() -> None:
    """A copied state is another state."""
    state = written(("a",))
    copied = state.copy()
    copied.write(at("a"), whole(5))
    assert state.values[at("a")] is not copied.values[at("a")]


def test_parts_and_forgetting() -> None:
    """Parts are listed by the path from the object, and forgotten with it."""
    state = written(("a",), ("b", 1), ("b", 2))
    assert [path for path, _ in state.parts(at("b"))] == [(1,), (2,)]
    assert state.holds(at("b"))
    state.forget(at("b"))
    assert not state.holds(at("b"))
    assert set(state.values) == {at("a")}
