"""Names of one unit."""

import pytest

from bitweight.firmware.syntax import Name, Pair
from bitweight.firmware.units import Unit
from bitweight.places import Place
from firmware.programs import parsed_unit

TEXT = """#define LEVEL(x) ((x) + OFFSET)
#define OFFSET 3
enum { A, B = 5, C };
static const int limit = 4;
extern int other;
int shared = 1;
int *const fixed = &shared;
const int *moving = &limit;
int twice;
int twice = 2;
__attribute__((weak)) int f(int a) { return LEVEL(a); }
static int g(void) { enum { A = 9 }; return A; }
int h(int);
"""


@pytest.fixture(scope="module")
def unit() -> Unit:
    """The unit of the text above."""
    return parsed_unit(TEXT)


def test_functions(unit: Unit) -> None:
    """Linkage and weakness belong to the definition; a prototype is none."""
    assert sorted(unit.functions) == ["f", "g"]
    assert (unit.functions["f"].static, unit.functions["f"].weak) == (False, True)
    assert (unit.functions["g"].static, unit.functions["g"].weak) == (True, False)
    assert list(unit.prototypes) == ["h"]
    assert unit.functions["f"].key == Place("main.c", 11, 27)


@pytest.mark.parametrize(
    ("name", "constant", "declared_only", "only_reads"),
    [
        ("limit", True, False, True),
        ("other", False, True, True),
        ("shared", False, False, True),
        ("fixed", True, False, False),
        ("moving", False, False, True),
        ("twice", False, False, True),
    ],
)
def test_objects(
    unit: Unit, name: str, constant: bool, declared_only: bool, only_reads: bool
) -> None:
    """`int *const` is constant itself, `const int *` only what it points to."""
    found = unit.variables[name]
    assert (found.constant, found.declared_only, found.only_reads) == (
        constant,
        declared_only,
        only_reads,
    )


def test_a_definition_with_a_value_counts(unit: Unit) -> None:
    """Of several declarations the one with an initialiser is the object."""
    assert unit.variables["twice"].key.line == 10


def test_enumerators_count_on(unit: Unit) -> None:
    """Each enumerator is its own expression, or so many steps from the one before."""
    steps = {name: (one.base is not None, one.step) for name, one in unit.enumerators.items()}
    assert steps == {"A": (False, 0), "B": (True, 0), "C": (True, 1)}


def test_an_enumerator_of_a_function_hides_the_outer_one() -> None:
    """An enum inside a function is known once the function declares it."""
    unit = parsed_unit(TEXT)
    outer = unit.enumerator("A")
    unit.learn(unit.functions["g"].body.items[0].specifiers)  # type: ignore[union-attr]
    inner = unit.enumerator("A")
    assert outer is not None
    assert inner is not None
    assert (outer.key.line, inner.key.line) == (3, 12)


def test_an_excerpt_is_read_with_the_macros_of_the_unit(unit: Unit) -> None:
    """An expression from outside stands at the end of the unit, its names those of the unit."""
    excerpt = unit.excerpt("LEVEL(shared)")
    tree = excerpt.parser.expression()
    assert isinstance(tree, Pair)
    assert isinstance(tree.left, Name)
    assert excerpt.functions is unit.functions
    assert excerpt.variables is unit.variables
    assert unit.excerpt("1 +").parser.expression() is None


def test_places_are_those_of_the_use_and_of_the_spelling(unit: Unit) -> None:
    """What a macro brings is used where the macro is, and spelled where it is defined."""
    offset = unit.translation.text.index("3", unit.functions["f"].syntax.body_start)
    assert unit.place(offset) == Place("main.c", 11, 45)
    assert unit.spelled(offset) == Place("main.c", 2, 16)


def test_an_initialiser_leads_to_objects(unit: Unit) -> None:
    """The names in an initialiser are those through which something may be written."""
    assert unit.addressed_by("fixed") == {"shared"}
    assert unit.addressed_by("shared") == frozenset()
