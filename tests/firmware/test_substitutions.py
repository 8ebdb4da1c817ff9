"""Arguments put into a replacement list."""

import pytest

from firmware.sources import unit_of, words_of


@pytest.mark.parametrize(
    ("define", "use", "text"),
    [
        ("F(a, b) a ## b", "F(x, 1)", "x1"),
        ("F(a, b) a ## b", "F(, 1) F(x,) F(,)", "1 x"),
        ("F(a) # a", 'F( "x\\n"  + \'"\' )', '"\\"x\\\\n\\" + \'\\"\'"'),
        ("F(a) #a #a", "F(q)", '"q" "q"'),
        ("F(a) a # b", "F(1)", "1 # b"),
        ("F(a, ...) g(a, ## __VA_ARGS__)", "F(1) F(1,) F(1,2,3)", "g(1) g(1,) g(1, 2,3)"),
        ("F(a, r...) g(a, ## r)", "F(1) F(1, 2)", "g(1) g(1, 2)"),
        ("F(a, ...) a __VA_OPT__(+ __VA_ARGS__) ;", "F(1) F(1, 2)", "1 ; 1 + 2 ;"),
        ("F(...) #__VA_ARGS__", "F(a, b  ,c)", '"a, b ,c"'),
        ("F(x) x ## 1 ## 2", "F(a)", "a12"),
        ("hash_hash # ## #", "hash_hash", "##"),
    ],
)
def test_operators_work_on_arguments_as_written(define: str, use: str, text: str) -> None:
    """C11 6.10.3.2 and 6.10.3.3, and what GNU C adds for variable arguments."""
    assert words_of(unit_of(f"#define {define}\n{use}\n").text) == text


def test_a_pasted_token_stands_where_its_left_part_is_spelled() -> None:
    """A token made by ## has the place of its first part and came through the macro."""
    unit = unit_of("#define CHANNEL(n) ADC_IN ## n\nx = CHANNEL(7);\n")
    origin = unit.origin(unit.text.index("ADC_IN7"))
    assert (origin.place.line, origin.place.column) == (1, 20)
    assert origin.macro == "CHANNEL"
    assert (origin.use.line, origin.use.column) == (2, 5)
