"""Position, record and numbers of a run."""

import pytest

from bitweight.arithmetic.expressions import Code, Literal
from bitweight.errors import LimitReached
from bitweight.firmware.objects import Arithmetic, Location, Root
from bitweight.firmware.syntax import Name, Number
from bitweight.limits import Limits
from bitweight.trace.execution import Execution
from bitweight.trace.machines import Frame
from bitweight.trace.memory import Address, Copy, Routine
from tracing_cases import INT32, context_of

HERE = Name(start=0, end=3, text="int")
INT = Arithmetic(type=INT32.int_)
PLACE = Location(Root("object", "tank"))


def execution(limits: Limits | None = None) -> Execution:
    """A run in the unit of one function."""
    context = context_of("int f(void) { return K; }\nconst int K = 2 + 3;\n", limits=limits)
    context.program.load("f")
    unit = context.program.units["main.c"]
    return Execution(context, unit, unit.functions["f"])


def test_the_innermost_scope_counts() -> None:
    """A local is looked up from the innermost scope outwards."""
    frame = Frame(execution().unit, None, 1)
    outer, inner = (Location(Root("local", name)) for name in ("outer", "inner"))
    frame.scopes[0]["v"] = (outer, INT)
    frame.scopes.append({"v": (inner, INT)})
    assert frame.local("v") == (inner, INT)
    frame.scopes.pop()
    assert frame.local("v") == (outer, INT)
    assert frame.local("w") is None


def test_a_call_owns_its_locals() -> None:
    """Each call has locals of its own."""
    unit = execution().unit
    one, two = (Frame(unit, unit.functions["f"], number) for number in (1, 12))
    place = Location(Root("local", "v", one.scope_of(30)))
    assert one.owns(place)
    assert not two.owns(place)
    assert not one.owns(Location(Root("object", "v", one.scope_of(30))))


def test_steps_are_counted() -> None:
    """A run that takes too many steps ends with an error of its own."""
    run = execution(Limits(steps=2))
    run.spend()
    run.spend()
    with pytest.raises(LimitReached, match="2 steps"):
        run.spend()


@pytest.mark.parametrize(
    ("value", "reason"),
    [
        (Address(target=PLACE, type=INT), "a pointer is used as a number"),
        (Routine(name="f", function=None), "a pointer is used as a number"),
        (Copy(parts=(), source=PLACE, type=INT), "a struct is used as a number"),
    ],
)
def test_only_numbers_are_numbers(value: Address | Routine | Copy, reason: str) -> None:
    """Pointers and structs become unknowns with a reason where a number is needed."""
    run = execution()
    found = run.as_number(value, HERE)
    assert isinstance(found, Code)
    assert run.context.inputs[id(found)].reason == reason
    assert run.fixed(value) is None


def test_constants_leave_no_trace() -> None:
    """Looking for a constant neither changes the state nor notes anything."""
    run = execution()
    assert run.constant(Number(start=0, end=1, text="7")) == 7
    assert not run.events
    assert not run.state.values


def test_constants_of_another_unit() -> None:
    """An expression is evaluated where it stands, to a bounded depth."""
    run = execution()
    assert run.fixed(run.value(Name(start=0, end=1, text="K"))) == 5
    run.frames = [run.frames[0]] * 100
    deep = run.elsewhere(run.unit, Number(start=0, end=1, text="7"))
    assert run.context.inputs[id(deep)].reason == "constants that refer to each other"


def test_events_know_their_function() -> None:
    """What is noted carries the function and file where it happened."""
    run = execution()
    run.note("return", "f", Literal(value=1, type=INT32.int_), run.used(HERE))
    (event,) = run.events
    assert (event.function, event.file, event.index, event.tree) == ("f", "main.c", 0, None)
    assert run.text(HERE) == "int"
    assert run.nowhere.file == "main.c"
