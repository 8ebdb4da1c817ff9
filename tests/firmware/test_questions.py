"""What conditionals ask."""

import pytest

from bitweight.firmware.remarks import Undefined
from bitweight.places import Place
from firmware.sources import unit_of, words_of

HEADERS = {
    "inc/guard.h": "#ifndef G\n#define G\nguarded\n#endif\n",
    "inc/rows.h": "1, 2\n",
    "inc/cfg.h": "#ifndef VREF_MV\n#define VREF_MV 3300\n#endif\n",
}


@pytest.mark.parametrize(
    ("source", "text"),
    [
        ("#ifdef X\na\n#elifdef Y\nb\n#elifndef Z\nc\n#endif", "c"),
        ('#if __has_include("rows.h") && !__has_include(<none.h>)\na\n#endif', "a"),
        ("#if __has_attribute(weak) || defined(__has_attribute)\na\n#endif", "a"),
        ("#define D defined(E)\n#define E\n#if D\na\n#endif", "a"),
        ("#if __has_include(ROWS)\na\n#endif", ""),
        ('#define ROWS "rows.h"\n#if __has_include(ROWS)\na\n#endif', "a"),
        ("#if defined\na\n#elif __has_include\nb\n#elif defined(1)\nc\n#else\nd\n#endif", "d"),
        ("#define F(x) x\n#define G F\n#if G (1) && defined F && !defined(Q)\na\n#endif", "a"),
    ],
)
def test_conditionals_are_answered_by_the_macros_in_force(source: str, text: str) -> None:
    """C11 6.10.1; an operator may come from a macro, as gcc has it."""
    assert words_of(unit_of(source + "\n", HEADERS).text) == text


def test_names_that_are_tested_without_definition_are_noted() -> None:
    """It is known where a name was missing and whether a fallback stood in for it."""
    unit = unit_of(
        '#include "guard.h"\n#include "cfg.h"\n#if BOARD == 2 && defined(REV)\n#endif\n', HEADERS
    )
    assert set(unit.undefined) == {
        Undefined("VREF_MV", Place("inc/cfg.h", 1, 9), True),
        Undefined("BOARD", Place("main.c", 3, 5), False),
        Undefined("REV", Place("main.c", 3, 27), False),
    }
