"""Specifiers, derivations, members, enumerators and parameters."""

import pytest

from bitweight.firmware.parsing import Parser, UnitSyntax
from bitweight.firmware.syntax import (
    ArrayOf,
    Declarator,
    Derivation,
    FunctionOf,
    Number,
    Opaque,
    PointerTo,
)

KNOWN = frozenset({"int", "uint16_t", "unsigned", "char"})


def unit(text: str) -> UnitSyntax:
    """The outside of a text in which some names are types."""
    return Parser(text, is_type=lambda name: name in KNOWN).unit()


def variable(text: str) -> Declarator:
    """The only object that a text declares."""
    (found,) = unit(text).variables
    return found


def kinds(derivations: tuple[Derivation, ...]) -> str:
    """Derivations from the outermost inwards: `[`, `*` and `(`."""
    signs = {ArrayOf: "[", PointerTo: "*", FunctionOf: "("}
    return "".join(signs[type(one)] for one in derivations)


@pytest.mark.parametrize(
    ("text", "name", "derived"),
    [
        ("int a;", "a", ""),
        ("char *a[3];", "a", "[*"),
        ("char (*a)[3];", "a", "*["),
        ("int (*a)(int);", "a", "*("),
        ("int (*a[2])(int);", "a", "[*("),
        ("int **a;", "a", "**"),
        ("int a[2][3];", "a", "[["),
    ],
)
def test_derivations_go_from_the_outermost_inwards(text: str, name: str, derived: str) -> None:
    """`char *a[3]` is an array of pointers, `char (*a)[3]` a pointer to an array."""
    found = variable(text)
    assert found.name == name
    assert kinds(found.type.derivations) == derived
    assert text[found.start : found.end] == name


@pytest.mark.parametrize(
    ("text", "words", "storage", "qualifiers"),
    [
        ("static const unsigned char a = 1;", ("unsigned", "char"), {"static"}, {"const"}),
        ("volatile uint16_t a;", ("uint16_t",), set(), {"volatile"}),
        ("extern mystery_t a;", ("mystery_t",), {"extern"}, set()),
        ("uint16_t PACKED a = 1;", ("uint16_t",), set(), set()),
        ("EXPORT(a)\nint f(void) { }\nint a;", ("int",), set(), set()),
    ],
)
def test_specifiers(
    text: str, words: tuple[str, ...], storage: set[str], qualifiers: set[str]
) -> None:
    """Beside a known type an unknown word is an extension and changes nothing."""
    found = variable(text).type.specifiers
    assert (found.words, found.storage, found.qualifiers) == (words, storage, qualifiers)


def test_records_have_members_in_order() -> None:
    """Bit fields carry their width; an unnamed inner record is a member without a name."""
    found = variable("struct s { int a, *b; struct { int c; }; unsigned d : 4; } x;")
    fields = found.type.specifiers.fields
    assert fields is not None
    assert [one.name for one in fields] == ["a", "b", "", "d"]
    assert isinstance(fields[3].bits, Number)
    assert fields[3].bits.text == "4"
    assert found.type.specifiers.tag == "s"


def test_a_record_without_a_tag_is_named_by_its_place() -> None:
    """Two unnamed records of a unit are two types."""
    one, two = unit("struct { int a; } x; struct { int a; } y;").variables
    assert one.type.specifiers.tag != two.type.specifiers.tag


def test_enumerators_keep_what_is_written() -> None:
    """A value that is not written is left to whoever counts."""
    (found,) = unit("enum e { A = 3, B };").specifiers
    assert found.enumerators is not None
    assert [(one.name, one.value is None) for one in found.enumerators] == [
        ("A", False),
        ("B", True),
    ]


def test_parameters() -> None:
    """`void` alone is no parameter; what has no name is one all the same."""
    prototypes = unit("int f(void); int g(int a, char *, ...); int h();").prototypes
    heads = [one.type.derivations[0] for one in prototypes]
    assert all(isinstance(one, FunctionOf) for one in heads)
    lists = [[p.name for p in one.parameters] for one in heads if isinstance(one, FunctionOf)]
    assert lists == [[], ["a", ""], []]
    assert [one.variadic for one in heads if isinstance(one, FunctionOf)] == [False, True, False]


def test_a_value_beside_what_is_no_c_is_not_trusted() -> None:
    """`int v = 5 SCALE;` with SCALE not defined has no known value."""
    assert isinstance(variable("int v = 5 SCALE;").value, Opaque)
    assert isinstance(variable("int v = 5 + 1 SCALE;").value, Opaque)
    assert isinstance(variable("int v = 5;").value, Number)


def test_deep_records_end() -> None:
    """Records nested beyond the limit have no members there; nothing is raised."""
    deep = "struct { " * 400 + "int a;" + " } x;" * 400
    assert Parser(deep, is_type=lambda name: name == "int", depth=50).unit().specifiers
