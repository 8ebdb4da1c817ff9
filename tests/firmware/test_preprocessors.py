"""Definitions from outside and built-in macros."""

import pytest

from firmware.sources import unit_of, words_of


@pytest.mark.parametrize(
    ("defines", "source", "text"),
    [
        ({"A": None}, "A", "1"),
        ({"A": ""}, "A;", ";"),
        ({"A": "3300"}, "#if A > 3000\nyes\n#endif", "yes"),
        ({"SQ(x)": "((x)*(x))"}, "SQ(2)", "((2)*(2))"),
        ({"A": "1\n#define B 2"}, "B", "B"),
        ({"A": "B", "B": "2"}, "A", "2"),
    ],
)
def test_defines_from_outside_are_in_force_from_the_start(
    defines: dict[str, str | None], source: str, text: str
) -> None:
    """A define without value is 1, as C compilers have it."""
    assert words_of(unit_of(source + "\n", defines=defines).text) == text


def test_a_define_from_outside_has_a_place_of_its_own() -> None:
    """What comes from the command line says so; a malformed one is a problem."""
    unit = unit_of("x = A;\n", defines={"1x": None, "A": "7"})
    assert unit.origin(unit.text.index("7")).place.file == "<command line>"
    assert [problem.message for problem in unit.problems] == ["this define is malformed"]


@pytest.mark.parametrize(
    ("source", "text"),
    [
        ("\n__LINE__", "2"),
        ("#define L __LINE__\n\nL", "3"),
        ("__FILE__", '"main.c"'),
        ("__COUNTER__ __COUNTER__", "0 1"),
        ("#ifdef __FILE__\nyes\n#endif", "yes"),
        ('#include "h.h"', '"h.h" "main.c" 1'),
        ("__DATE__ __TIME__", '"Jan 1 1970" "00:00:00"'),
    ],
)
def test_builtin_macros_say_where_they_are_used(source: str, text: str) -> None:
    """C11 6.10.8.1 and GNU C; the clock never shows."""
    headers = {"h.h": "__FILE__ __BASE_FILE__ __INCLUDE_LEVEL__\n"}
    assert words_of(unit_of(source + "\n", headers).text) == text


def test_a_use_may_reach_over_directives() -> None:
    """Arguments may hold conditionals; directives behind a bare name end the search for `(`."""
    source = (
        "#define F(x, y) [x|y]\nF(1\n#if 0\n+2\n#else\n+3\n#endif\n, 4)\nF\n#define Z\n(1, 2)\n"
    )
    assert words_of(unit_of(source).text) == "[1 +3|4] F (1, 2)"
