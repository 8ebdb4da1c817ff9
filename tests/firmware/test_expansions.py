"""Macro uses expanded and read again."""

import pytest

from firmware.sources import unit_of, words_of


@pytest.mark.parametrize(
    ("source", "text"),
    [
        ("#define A A + 1\nA", "A + 1"),
        ("#define A B\n#define B A\nA B", "A B"),
        ("#define F(x) x\nF F(1) (F)(2)", "F 1 (F)(2)"),
        ("#define F(x) [x]\n#define A F\nA(1) A (2) A", "[1] [2] F"),
        ("#define F(x) [x]\nF\n(1\n,", "F (1 ,"),
        ("#define F(x) [x]\nF((1, 2)) F(a[1, 2])", "[(1, 2)] F(a[1, 2])"),
        ("#define F() 1\nF() F( ) F(x)", "1 1 F(x)"),
        ("#define F(x) <x>\nF() F(\n)", "< > < >"),
        ("#define F(a) a*G\n#define G(a) F(a)\nF(2)(9)", "2*9*G"),
        ("#define f(x) x f\nf(1)(2)", "1 f(2)"),
    ],
)
def test_a_use_is_expanded_and_what_it_gives_is_read_again(source: str, text: str) -> None:
    """No macro expands inside itself, and arguments are looked for behind an expansion."""
    assert words_of(unit_of(source + "\n").text) == text


def test_an_argument_list_without_end_leaves_what_follows() -> None:
    """Uses behind an open parenthesis that is never closed are still expanded."""
    assert words_of(unit_of("#define F(x) x\n#define A 7\nF(A; b = A;\n").text) == "F(7; b = 7;"


def test_names_carry_every_macro_they_came_through() -> None:
    """The macros from the spelling outward are named in order."""
    unit = unit_of("#define C 5\n#define B (C)\n#define A B + 1\nA;\n")
    assert unit.origin(unit.text.index("5")).names == ("C", "B", "A")
    assert unit.origin(unit.text.index("1")).names == ("A",)
