"""`typeof` in a form that the grammar knows."""

import pytest

from bitweight.firmware.typeofs import rewritten


@pytest.mark.parametrize(
    ("source", "kept"),
    [
        (b"typeof(a + b) x = 1;", b"(a + b"[1:]),
        (b"__typeof__ (f(x)) y;", b"f(x)"),
        (b"typeof(a) x; typeof((b)) y;", b"(b)"),
    ],
)
def test_an_expression_keeps_its_offset(source: bytes, kept: bytes) -> None:
    """An enum of the same length stands for `typeof`, its expression where it was."""
    made, starts = rewritten(source)
    assert len(made) == len(source)
    assert b"typeof" not in made
    assert made.index(kept) == source.index(kept)
    assert all(made[start : start + 4] == b"enum" for start in starts)
    assert len(starts) == source.count(b"typeof")


@pytest.mark.parametrize("name", [b"unsigned int", b"const char *", b"struct s"])
def test_a_type_name_stands_for_itself(name: bytes) -> None:
    """`typeof(unsigned int)` is `unsigned int`, with blanks where the word was."""
    made, starts = rewritten(b"typeof(" + name + b") x;")
    assert made == b"       " + name + b"  x;"
    assert starts == frozenset()


@pytest.mark.parametrize(
    "source", [b"int x;", b'char *s = "typeof(x)";', b"typeof(x", b"x) typeof", b"typeof"]
)
def test_what_is_no_typeof_stays(source: bytes) -> None:
    """Strings and broken text are left as they are."""
    assert rewritten(source) == (source, frozenset())
