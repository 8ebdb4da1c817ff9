"""`typeof` in a form that the grammar knows."""

import pytest

from bitweight.firmware.typeofs import rewritten


@pytest.mark.parametrize(
    ("source", "made"),
    [
        (b"typeof(x) a;", b"enum{a=x} a;"),
        (b"__typeof__ (x + 1) a;", b"enum     {a=x + 1} a;"),
        (b"typeof(typeof(x)) a;", b"enum{a=enum{a=x}} a;"),
        (b"typeof(unsigned char) a;", b"       unsigned char  a;"),
        (b"typeof(struct s *) a;", b"       struct s *  a;"),
        (b"typeof(f(x, (y))) a;", b"enum{a=f(x, (y))} a;"),
        (b'typeof(f(")")) a;', b'enum{a=f(")")} a;'),
        (b"my_typeof(x);", b"my_typeof(x);"),
        (b's = "typeof(x)";', b's = "typeof(x)";'),
        (b"typeof(x a;", b"typeof(x a;"),
    ],
)
def test_it_becomes_an_enum_of_the_same_length(source: bytes, made: bytes) -> None:
    """Every offset stays; a type name stands for itself, text and broken C are left alone."""
    found, starts = rewritten(source)
    assert found == made
    assert starts == {at for at in range(len(made)) if made[at:].startswith(b"enum")}
