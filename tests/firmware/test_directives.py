"""The directives of one source."""

import pytest

from bitweight.firmware.directives import Keyword, Script
from bitweight.firmware.files import SourceFile


def script(text: str) -> Script:
    return Script(SourceFile("a.h", text))


def test_neighbouring_definitions_are_one_step() -> None:
    """Definitions with only white space and comments between them come into force together."""
    found = script("#define A 1\n/* c */\n#define B 2\nx\n#define C 3\n#undef A\n#define D\n")
    assert [(each.keyword, list(each.macros)) for each in found.directives] == [
        (Keyword.DEFINE, ["A", "B"]),
        (Keyword.DEFINE, ["C"]),
        (Keyword.UNDEF, []),
        (Keyword.DEFINE, ["D"]),
    ]


def test_conditionals_know_their_branches() -> None:
    """Each branch leads to the next one and to the end of its own group."""
    found = script("#if A\n#ifdef B\n#else\n#endif\n#elif C\n#endif\n")
    assert found.following == [4, 2, 3, 6, 5, 6]
    assert found.closing == [5, 3, 3, 3, 5, 5]


def test_branches_without_a_group_are_marked() -> None:
    """A stray #else leads nowhere; a group without #endif leads behind the last directive."""
    found = script("#else\n#if A\n#elif B\n")
    assert found.following == [-1, 2, 3]
    assert found.closing == [-1, 3, 3]


@pytest.mark.parametrize(
    ("text", "guard"),
    [
        ("/* c */\n#ifndef A_H\n#define A_H\nint x;\n#endif // A_H\n", "A_H"),
        ("#if !defined(A_H)\n#define A_H\n#endif", "A_H"),
        ("#if ! defined A_H\n#endif\n", "A_H"),
        ("#ifndef A_H\n#endif\nint x;\n", None),
        ("int x;\n#ifndef A_H\n#endif\n", None),
        ("#ifndef A_H\n#else\n#endif\n", None),
        ("#ifndef A_H\n#endif\n#ifndef B\n#endif\n", None),
        ("#ifdef A_H\n#endif\n", None),
        ("#if !defined(A_H) || 1\n#endif\n", None),
        ("#ifndef A_H\n", None),
        ("", None),
    ],
)
def test_a_guard_stands_around_the_whole_file(text: str, guard: str | None) -> None:
    """Only a conditional that holds everything keeps a file from being read twice."""
    assert script(text).guard == guard


def test_names_of_a_stretch_are_its_identifiers() -> None:
    """Strings, character constants and number suffixes are no names."""
    text = "a1 = 0x1Fu + \"b c\" + 'd' + 1.f + $e;"
    assert script(text).names(0, len(text)) == {"a1", "$e"} | {""}
