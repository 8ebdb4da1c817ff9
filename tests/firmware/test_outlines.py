"""Logical text, comments and directives of one source."""

import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.firmware.files import SourceFile
from bitweight.firmware.outlines import Outline, line_comment, line_text


def outline(text: str) -> Outline:
    return Outline(SourceFile("a.c", text))


@pytest.mark.parametrize(
    ("text", "logical"),
    [
        ("a // b\nc", "a     \nc"),
        ("a /* b\nc */ d", "a     \n     d"),
        ("a /* no end\n x", "a          \n  "),
        ('"/* text */" \'"\' // c', '"/* text */" \'"\'     '),
        ("don't /* text\nb", "don't /* text\nb"),
        ("a\\\nb\nc", "ab \n\nc"),
        ("a \\  \r\nb", "a b    \n"),
        ("a\r\nb\rc", "a \nb\nc"),
        ("x<:1:> %: y", "x[ 1]  #  y"),
        ("#include <a//b.h>\n", "#include <a//b.h>\n"),
        ("a //\\\nb\nc", "a     \n\nc"),
    ],
)
def test_logical_text_has_no_comments_and_no_splices(text: str, logical: str) -> None:
    """Comments are blank, spliced lines are joined, the length stays."""
    assert outline(text).logical == logical
    assert len(logical) == len(text)


@pytest.mark.parametrize(
    ("text", "directives"),
    [
        ("#if A\nx # y\n  # endif", ["#if A", "# endif"]),
        ("/* c */ #define A\n", ["#define A"]),
        ("/* c\n */ #define A\n", ["#define A"]),
        ("x /* c\n */ #define A\n", []),
        ("#define A 1 /* c\n*/ 2\nx", ["#define A 1     \n   2"]),
        ("#define A \\\n 1\n2", ["#define A  1 "]),
        ("/*\n#if A\n*/\n", []),
        ("%:define A", ["# define A"]),
        ("#define S(x) #x", ["#define S(x) #x"]),
        ("#error don't\n#endif", ["#error don't", "#endif"]),
    ],
)
def test_directives_are_found_at_line_starts(text: str, directives: list[str]) -> None:
    """A `#` first on its line begins a directive, which comments may carry over lines."""
    found = outline(text)
    assert [found.logical[slice(*span)].rstrip(" ") for span in found.directives] == [
        each.rstrip(" ") for each in directives
    ]


@given(st.text("ab \\\n\r\"'/*#%:<>\t", max_size=60))
def test_logical_text_keeps_length_lines_and_characters(text: str) -> None:
    """Whatever the text, offsets lead back to the character that was written there."""
    found = outline(text)
    unified = text.replace("\r\n", " \n").replace("\r", "\n")
    assert len(found.logical) == len(found.blank) == len(text)
    assert found.logical.count("\n") == found.blank.count("\n") == unified.count("\n")
    assert not found.blank.strip()
    joined = re.sub(r"\\[ \t]*(?:\r\n|\r|\n)", "", text)
    if not any(sign in joined for sign in ("%:", "<:", ":>", "%>", "<%")):
        for offset, character in enumerate(found.logical):
            if not character.isspace():
                assert text[found.source(offset)] == character


TEXT = 'int a; // first\n/* doc\n * more */ int b; /* in mV */ // twice\nint c;\n"// no";'


@pytest.mark.parametrize(
    ("line", "words"),
    [(1, "first"), (2, "doc"), (3, "more in mV twice"), (4, ""), (5, ""), (6, ""), (0, "")],
)
def test_the_comment_of_a_line_is_its_words(line: int, words: str) -> None:
    """Comment signs are left out, and so are comments of other lines."""
    assert line_comment(SourceFile("a.c", TEXT), line) == words


@pytest.mark.parametrize(("line", "text"), [(1, "a"), (2, "b"), (3, "c"), (4, ""), (5, "")])
def test_the_text_of_a_line_has_no_line_end(line: int, text: str) -> None:
    """All three line ends part lines; lines that are not there are empty."""
    assert line_text(SourceFile("a.c", "a\r\nb\rc\n"), line) == text
