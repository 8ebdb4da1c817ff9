"""What all runs share: placeholders, declarations, writers, constants."""

import pytest

from bitweight.arithmetic.expressions import Literal
from bitweight.firmware.objects import Arithmetic, Location, Root
from bitweight.places import Place
from bitweight.trace.contexts import named, shown
from tracing_cases import BOARD, INT32, context_of

TEXT = """#define FULL (4096) /* counts */
static int gain = 3;
static int *where = &gain;
static const int *look = &gain;
int table[2];
int cal = 5;
void set(void) { gain = 1; }
void tune(void) { *where = 2; }
void peek(void) { use(*look); }
void pass(void) { fill(table); fill(cal); }
int full(void) { return FULL + 0x10 + cal; }
"""


@pytest.fixture(name="context")
def _context():  # type: ignore[no-untyped-def]
    context = context_of(TEXT, readings={"tank": ("adc(1)", "adc(2)")}, given={"cal[1]": 4})
    for name in ("gain", "where", "look", "table", "cal"):
        context.program.load(name)
    return context


@pytest.mark.parametrize(
    ("name", "writers", "fixed"),
    [
        ("gain", ["set", "tune"], False),
        ("where", [], True),
        ("look", [], True),
        ("table", ["pass"], False),
        ("cal", [], True),
    ],
)
def test_who_writes_an_object(context, name: str, writers: list[str], fixed: bool) -> None:  # type: ignore[no-untyped-def]
    """By assignment, through a pointer kept elsewhere, or by handing out an array."""
    unit = context.program.units["main.c"]
    location = unit.variables[name].location
    declared = context.declared(location, unit)
    assert [one.name for one in context.writers(location.root, declared)] == writers
    assert context.is_fixed(location, declared) is fixed


def test_patterns_are_found_by_their_head(context) -> None:  # type: ignore[no-untyped-def]
    """Readings and stated values are sorted by what they can match."""
    wanted = context.wanted(context.program.units["main.c"])
    assert {head: len(some) for head, some in wanted.items()} == {
        ("call", "adc"): 2,
        ("index", "cal"): 1,
    }
    assert context.reading_names == {"adc"}


def test_placeholders_are_remembered(context) -> None:  # type: ignore[no-untyped-def]
    """An object has one placeholder for each type it is read with; unknowns keep their reason."""
    gain = context.program.units["main.c"].variables["gain"].location
    int_ = Arithmetic(type=INT32.int_)
    assert context.object(gain, int_, BOARD) is context.object(gain, int_, BOARD)
    lost = context.unknown("not followed", BOARD)
    assert context.inputs[id(lost)].reason == "not followed"


def test_a_constant_knows_where_it_is_spelled(context) -> None:  # type: ignore[no-untyped-def]
    """Value, name, place, columns and comment of a macro's constant."""
    unit = context.program.units["main.c"]
    text = unit.translation.text
    start = text.index("4096", unit.functions["full"].syntax.body_start)
    found = context.literal(unit, start, "4096")
    assert isinstance(found, Literal)
    assert found.value == 4096
    assert found.leaf is not None
    assert (found.leaf.name, found.leaf.place) == ("FULL", Place("main.c", 1, 15))
    assert (found.leaf.end_column, found.leaf.comment) == (19, "counts")
    assert found.leaf.use == Place("main.c", 11, 25)
    assert context.literal(unit, start, "4096") is found
    odd = context.literal(unit, start, "12cm")
    assert context.inputs[id(odd)].reason == "12cm is not read as a constant"


def test_a_constant_gets_the_name_of_its_object(context) -> None:  # type: ignore[no-untyped-def]
    """An initialiser's constant is known by its own name first, then by its object's."""
    unit = context.program.units["main.c"]
    plain = context.literal(unit, unit.translation.text.index("3;"), "3")
    found = named(plain, "gain", BOARD)
    assert isinstance(found, Literal)
    assert found.leaf is not None
    assert (found.leaf.name, found.leaf.names, found.leaf.use) == ("gain", ("gain",), BOARD)


@pytest.mark.parametrize(
    ("kind", "path", "text"),
    [
        ("object", ("level", 2), "tank.level[2]"),
        ("pointee", ("level", 2), "tank->level[2]"),
        ("pointee", (2, "level"), "tank[2].level"),
        ("pointee", (), "tank"),
    ],
)
def test_objects_are_shown_as_c(kind: str, path: tuple[str | int, ...], text: str) -> None:
    """A part of what a pointer leads to is written with an arrow."""
    assert shown(Location(Root(kind, "tank"), path)) == text
