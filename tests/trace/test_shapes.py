"""Types with everything that takes computing."""

import pytest

from bitweight.firmware.objects import Arithmetic, Array, Location, ObjectType, Record, Root
from bitweight.trace.execution import Execution
from bitweight.trace.families import family_from_text
from tracing_cases import context_of

TEXT = """#define ROWS 2
enum { COLUMNS = ROWS + 1 };
struct in { int x, y; };
struct out { struct in a[COLUMNS]; union { int w; char b[4]; }; unsigned bits : 3; };
int grid[ROWS][COLUMNS * 2];
int open[] = {1, 2, [5] = 3};
struct out tank;
struct out *f(void) { return 0; }
long declared_only(void);
"""
FAMILY = 'document = "invented"\n[types]\nTANK_ADC = "uint8_t"\n'


@pytest.fixture(name="run")
def _run() -> Execution:
    context = context_of(TEXT, families=(family_from_text("own", FAMILY),))
    context.program.load("f")
    return Execution(context, context.program.units["main.c"])


def lengths(type_: ObjectType) -> list[int | None]:
    """The lengths of an array from the outermost inwards."""
    found = []
    while isinstance(type_, Array):
        found.append(type_.length)
        type_ = type_.of
    return found


@pytest.mark.parametrize(("name", "expected"), [("grid", [2, 6]), ("open", [6])])
def test_array_lengths(run: Execution, name: str, expected: list[int]) -> None:
    """Sizes are constant expressions; an open one is that of the initialiser."""
    assert lengths(run.object_type(run.unit.variables[name])) == expected


def test_members(run: Execution) -> None:
    """Members have their sizes and widths; those of unnamed records belong to the outer."""
    tank = run.unit.variables["tank"].type
    assert isinstance(tank, Record)
    assert [name for name, _ in run.field_names(tank)] == ["a", "", "bits"]
    assert lengths(run.member_type(tank, "a") or tank) == [3]
    assert lengths(run.member_type(tank, "b") or tank) == [4]
    bits = run.member_type(tank, "bits")
    assert isinstance(bits, Arithmetic)
    assert bits.type.bits == 3
    assert run.member_type(tank, "absent") is None


def test_what_shares_its_storage(run: Execution) -> None:
    """Members of a union share their storage, those of a struct do not."""
    tank = run.unit.variables["tank"].type
    assert isinstance(tank, Record)
    assert run.sharing(tank, "w") == ("b",)
    assert run.sharing(tank, "b") == ("w",)
    assert run.sharing(tank, "a") == ()


def test_the_type_of_a_part(run: Execution) -> None:
    """The type of an object is followed along members and subscripts."""
    place = Location(Root("object", "tank"), ("a", 1, "y"))
    found = run.type_at(place)
    assert isinstance(found, Arithmetic)
    assert found.type.name == "int"


@pytest.mark.parametrize(
    ("name", "type_"), [("declared_only", "long"), ("TANK_ADC", "unsigned char"), ("absent", None)]
)
def test_what_a_call_returns(run: Execution, name: str, type_: str | None) -> None:
    """From a definition, a prototype, or the data of the microcontroller's family."""
    found = run.returned(name)
    assert (found.type.name if isinstance(found, Arithmetic) else None) == type_


def test_sizes(run: Execution) -> None:
    """Arrays and numbers have a size; how a struct is padded is not assumed."""
    assert run.size(run.object_type(run.unit.variables["grid"])) == 48
    assert run.size(run.unit.variables["tank"].type) is None
