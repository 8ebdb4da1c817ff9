"""Directives obeyed on the way through a unit."""

import pytest

from bitweight.firmware.remarks import Missing
from bitweight.places import Place
from firmware.sources import unit_of, words_of

HEADERS = {
    "inc/once.h": "#pragma once\nonce\n",
    "inc/guard.h": "#ifndef G\n#define G\nguarded\n#endif\n",
    "inc/twice.h": "twice\n",
    "inc/rows.h": "1, 2\n",
}


@pytest.mark.parametrize(
    ("source", "text"),
    [
        ("#if 1\na\n#elif 1\nb\n#else\nc\n#endif", "a"),
        ("#if 0\na\n#elif 1\nb\n#elif 1\nd\n#else\nc\n#endif", "b"),
        ("#if 0\na\n#elif 0\nb\n#else\nc\n#endif", "c"),
        ("#if 0\n#if 1\na\n#else\nb\n#endif\n#else\nc\n#endif", "c"),
        ("f(1\n#if 0\n, 2 }}\n#else\n, 3\n#endif\n);", "f(1 , 3 );"),
        ('#include "twice.h"\n#include <twice.h>', "twice twice"),
        ('#include "once.h"\n#include "once.h"', "once"),
        ('#include "guard.h"\n#include "guard.h"', "guarded"),
        ('#define H "twice.h"\n#include H', "twice"),
        ("#define H(x) <x.h>\n#include H(twice)", "twice"),
        ('int t[] = {\n#include "rows.h"\n};', "int t[] = { 1, 2 };"),
        ("#if 1\na", "a"),
        ("a\n#endif\nb", "a b"),
        ("#pragma pack(1)\n#line 5\n#\n#unknown\n#ident x\na", "a"),
    ],
)
def test_directives_decide_what_is_active(source: str, text: str) -> None:
    """C11 6.10.1 and 6.10.2, and what gcc does beyond them."""
    assert words_of(unit_of(source + "\n", HEADERS).text) == text


def test_a_missing_header_is_noted_and_no_more() -> None:
    """Vendor headers are often absent; the rest of the unit is still there."""
    unit = unit_of("\n#include <avr/io.h>\nint a;\n")
    assert unit.missing == (Missing("avr/io.h", Place("main.c", 2, 1)),)
    assert not unit.problems
    assert words_of(unit.text) == "int a;"


def test_includes_are_listed_once() -> None:
    """Every header read is named, in the order it was first met."""
    unit = unit_of('#include "twice.h"\n#include "once.h"\n#include "twice.h"\n', HEADERS)
    assert unit.included == ("inc/twice.h", "inc/once.h")


def test_includes_that_multiply_are_bounded() -> None:
    """Headers that include two more each, a hundred deep, come to an end."""
    headers = {f"h{n}.h": f'#include "h{n + 1}.h"\n' * 2 for n in range(60)}
    unit = unit_of('#include "h0.h"\nint a;\n', headers)
    assert "the unit includes too much; this is left out" in {p.message for p in unit.problems}
    assert words_of(unit.text) == "int a;"
