"""Types that declarations mean."""

import pytest

from bitweight.firmware.objects import (
    Arithmetic,
    Array,
    FunctionType,
    ObjectType,
    Pointer,
    Record,
    Strange,
)
from bitweight.firmware.units import Unit
from firmware.programs import parsed_unit

TEXT = """
typedef unsigned short code_t;
typedef code_t level_t;
typedef struct { code_t raw; unsigned bits : 4; struct { int inner; }; } tank_t;
enum plain { A, B };
enum signed_one { LOW = -1, HIGH };
union word { int w; char b[4]; };
level_t f;
tank_t tank;
const code_t *table[3];
int (*reader)(void);
enum plain p;
enum signed_one q;
union word u;
mystery_t m;
void *anything;
"""


@pytest.fixture(scope="module")
def unit() -> Unit:
    """The unit of the text above."""
    return parsed_unit(TEXT)


def said(type_: ObjectType) -> str:
    """A type in words."""
    match type_:
        case Arithmetic():
            return type_.type.name
        case Pointer():
            return f"pointer to {said(type_.to)}"
        case Array():
            return f"array of {said(type_.of)}"
        case FunctionType():
            return f"function giving {said(type_.returns)}"
        case Record():
            return type_.kind
        case Strange():
            return f"strange {type_.name}".strip()


@pytest.mark.parametrize(
    ("name", "type_"),
    [
        ("f", "unsigned short"),
        ("tank", "struct"),
        ("table", "array of pointer to unsigned short"),
        ("reader", "pointer to function giving int"),
        ("p", "unsigned int"),
        ("q", "int"),
        ("u", "union"),
        ("m", "strange mystery_t"),
        ("anything", "pointer to strange"),
    ],
)
def test_types(unit: Unit, name: str, type_: str) -> None:
    """Typedef names are followed; an enum is signed where it has a negative enumerator."""
    assert said(unit.variables[name].type) == type_


def test_members(unit: Unit) -> None:
    """A bit field has its own width; members of an unnamed inner record belong to the outer."""
    tank = unit.variables["tank"].type
    assert isinstance(tank, Record)
    bits = unit.member(tank, "bits")
    assert isinstance(bits, Arithmetic)
    assert (bits.type.bits, bits.type.signed) == (4, False)
    inner = unit.member(tank, "inner")
    assert inner is not None
    assert said(inner) == "int"
    assert unit.member(tank, "absent") is None


def test_a_typedef_of_itself_ends() -> None:
    """Typedefs in a circle are a strange type, without end or error."""
    unit = parsed_unit("typedef b a;\ntypedef a b;\nb f;\n")
    assert isinstance(unit.variables["f"].type, Strange)


def test_records_inside_functions_are_learned() -> None:
    """A record that a function declares has members; a tag with two bodies has none."""
    unit = parsed_unit(
        "void f(void) { struct one { int m; }; struct two { int m; }; }\n"
        "void g(void) { struct two { int other; }; }\n"
    )
    assert "one" not in unit.records
    for function in unit.functions.values():
        for item in function.body.items:
            unit.learn(item.specifiers)  # type: ignore[union-attr]
    assert [one.name for one in unit.records["one"]] == ["m"]
    assert unit.records["two"] == ()
