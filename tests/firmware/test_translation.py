"""Whole units: what the expanded text says and where it comes from."""

import string

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from bitweight.firmware.tokens import kind_of
from bitweight.firmware.translation import TranslationUnit
from bitweight.limits import Limits
from bitweight.places import LineIndex, Place
from firmware.sources import unit_of, words_of

HEADERS = {
    "inc/board.h": "#ifndef BOARD_H\n#define BOARD_H\n#define VREF 3300\n#define FULL 1024\n"
    "#endif\n",
}
MAIN = """#include "board.h"
#define SCALE(c) ((c) * VREF / \\
    FULL)
int mv = SCALE(raw + 1); /* here */
int both = SCALE(VREF);
"""


def origin_of(unit: TranslationUnit, word: str, number: int = 0) -> tuple[Place, Place]:
    offset = -1
    for _ in range(number + 1):
        offset = unit.text.index(word, offset + 1)
    found = unit.origin(offset)
    return found.place, found.use


def test_a_constant_knows_its_definition_and_where_it_bites() -> None:
    """A constant two macros deep names the #define, the macros, and the use in ordinary text."""
    unit = unit_of(MAIN, HEADERS)
    origin = unit.origin(unit.text.index("3300"))
    assert origin.place == Place("inc/board.h", 3, 14)
    assert origin.use == Place("main.c", 4, 10)
    assert (origin.macro, origin.names) == ("VREF", ("VREF", "SCALE"))


def test_an_argument_is_ordinary_text() -> None:
    """What is written as an argument stands where it is written, in no macro."""
    unit = unit_of(MAIN, HEADERS)
    origin = unit.origin(unit.text.index("raw"))
    assert origin.place == origin.use == Place("main.c", 4, 16)
    assert (origin.macro, origin.names) == (None, ())


def test_a_macro_in_an_argument_is_used_there() -> None:
    """A macro named in an argument came through itself alone."""
    unit = unit_of(MAIN, HEADERS)
    origin = unit.origin(unit.text.rindex("3300", 0, unit.text.rindex("3300")))
    assert origin.names == ("VREF",)
    assert origin.use == Place("main.c", 5, 18)


def test_text_behind_a_splice_has_its_own_line() -> None:
    """The token after a line splice stands on the next line of the source."""
    unit = unit_of(MAIN, HEADERS)
    assert origin_of(unit, "1024") == (Place("inc/board.h", 4, 14), Place("main.c", 4, 10))
    full = next(use for use in unit.invocations if use.name == "FULL")
    assert full.use == Place("main.c", 3, 5)


def test_invocations_span_their_expansions() -> None:
    """Every use, nested ones too, has the range of its expansion, outer ones first."""
    unit = unit_of(MAIN, HEADERS)
    assert [(use.name, unit.text[use.start : use.end]) for use in unit.invocations] == [
        ("SCALE", "((raw + 1) * 3300 / 1024)"),
        ("VREF", "3300"),
        ("FULL", "1024"),
        ("SCALE", "((3300) * 3300 / 1024)"),
        ("VREF", "3300"),
        ("VREF", "3300"),
        ("FULL", "1024"),
    ]


def test_an_empty_expansion_has_a_place() -> None:
    """A macro that expands to nothing is an invocation without width."""
    unit = unit_of("#define NOTHING\na NOTHING b")
    (use,) = unit.invocations
    assert use.start == use.end
    assert words_of(unit.text) == "a b"


def test_macros_are_those_in_force_at_an_offset() -> None:
    """Redefinition and #undef take effect in order."""
    unit = unit_of("a\n#define N 1\nb\n#undef N\n#define N 2\nc\n#undef N\nd\n")
    bodies = []
    for word in "abcd":
        macro = unit.macros.at(unit.text.index(word)).get("N")
        bodies.append(macro.body[0].text if macro else None)
    assert bodies == [None, "1", "2", None]
    assert "N" in unit.macros.at(unit.text.index("c"))
    assert "N" not in list(unit.macros.at(0))


def test_text_from_outside_is_expanded_as_if_it_stood_there() -> None:
    """A pattern means what its names mean at that offset; what has no meaning stays."""
    unit = unit_of("#define CH 2\na\n#undef CH\n#define CH 3\n#define BUF(i) adc_buf[i]\nb\n")
    pattern = "BUF(CH) + $any @ ADC1"
    assert unit.expand_text(pattern, unit.text.index("a")) == "BUF(2) + $any @ ADC1"
    assert unit.expand_text(pattern, unit.text.index("b")) == "adc_buf[3] + $any @ ADC1"


def test_an_excerpt_is_read_with_the_last_definitions() -> None:
    """Text from outside becomes a unit of its own, as if it stood behind everything else."""
    unit = unit_of("#define CH 2\na\n#undef CH\n#define CH 3\nb\n").excerpt("read(CH)")
    assert unit.text == "read(3)"
    assert unit.origin(unit.text.index("3")).names == ("CH",)


def test_the_units_own_file_keeps_its_offsets() -> None:
    """Without macro uses the text is as long as the file, and every line stands where it stood."""
    text = "#if 0\nit's {{ odd\r\n#else\nint a; // b\r\n#endif\n#define A\\\n 1\nint c;\n"
    unit = unit_of(text)
    assert len(unit.text) == len(text)
    for word in ("int a", "int c"):
        assert unit.text.index(word) == text.index(word)
    assert unit.end_column(unit.text.index("int c") + 4) == 6


WORDS = ["A", "B", "F(", "G(", ")", ",", "x", "1", "'", '"', "\\\n", "\n", " ", "/*", "*/", "//"]
LINES = [
    "\n#define A ",
    "\n#define F(x) ",
    "\n#define G(x, ...) ",
    "\n#if ",
    "\n#else\n",
    "#",
    "##",
]
MORE = ["\n#endif\n", "\n#ifdef A\n", '\n#include "main.c"\n', "\n#undef F\n", "__VA_ARGS__", "é"]
SCRAPS = st.lists(st.sampled_from(WORDS + LINES + MORE), max_size=40).map("".join)
SMALL = Limits(unit_bytes=40_000, macro_tokens=500, include_depth=20, macro_depth=20)


@settings(max_examples=300, deadline=None)
@given(SCRAPS | st.text(string.printable, max_size=80))
def test_no_text_makes_preprocessing_fail(text: str) -> None:
    """Whatever stands in a file, a unit comes out and every offset of it has an origin."""
    unit = unit_of(text, limits=SMALL)
    for offset in range(len(unit.text)):
        unit.origin(offset)
    assert all(0 <= use.start <= use.end <= len(unit.text) for use in unit.invocations)


@settings(max_examples=200, deadline=None)
@given(SCRAPS)
def test_every_token_is_spelled_where_its_origin_says(text: str) -> None:
    """A name or number of the text stands at its place in the source, unless it was pasted."""
    unit = unit_of(text.replace("##", "#"), limits=SMALL)
    source = text.replace("##", "#")
    index = LineIndex(source)
    for offset, character in enumerate(unit.text):
        if character.isalpha() and kind_of(character) is not None:
            place = unit.origin(offset).place
            spelled = source[index.offset(place.line, place.column)]
            stringized = spelled == "#"
            assert spelled == character or stringized


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ('#include "main.c"\n', "main.c includes itself without end"),
        ("#if 1\nx\n", "this conditional has no #endif"),
        ("#endif\n", "#endif without #if"),
        ("#error wrong   board\n", "#error is active: wrong board"),
        ("#define 1\n", "this #define is malformed"),
        ("#define F(x) x\nF(1\n", "the arguments of F have no end within 500 tokens"),
        ("#define F(x) x\nF(1, 2)\n", "F is used with 2 arguments"),
        ("#define P(a, b) a ## b\nP(+, /)\n", "+ and / do not paste to one token"),
        ("#if 1 / 0\n#endif\n", "a condition divides by zero"),
        ("#include 5\n", "this #include names no file"),
        ("#ifdef\n#endif\n", "#ifdef names no macro"),
        (
            "#define A B B B B B B B B\n#define B C C C C C C C C\n#define C D D D D D D D D\n"
            "#define D E E E E E E E E\n#define E x\nA\n",
            "a macro expands to more than 500 tokens",
        ),
        (
            "".join(f"#define N{n} N{n + 1}\n" for n in range(30)) + "N0\n",
            "macros nest more than 20 deep",
        ),
        ("x" * 50_000 + "\n#define A\ny", "the unit is too large; its rest is not read"),
    ],
)
def test_what_goes_wrong_is_a_problem_with_a_place(text: str, message: str) -> None:
    """Text that cannot be preprocessed as written is named, and the rest goes on."""
    problems = unit_of(text, limits=SMALL).problems
    assert message in [problem.message for problem in problems]
    assert all(problem.place.file == "main.c" for problem in problems)


@pytest.mark.parametrize("text", ["F(" * 20_000, "(" * 50_000 + ")" * 50_000, "F" + "(x" * 9_000])
def test_hostile_nesting_ends(text: str) -> None:
    """Nesting without bound neither fails nor takes time that grows with its square."""
    unit = unit_of(f"#define F(x) x\n#define G(x) F(x) F(x)\n{text}\n")
    assert unit.text


def test_tokens_that_double_are_bounded() -> None:
    """Pasting a token to itself a hundred times over fills no memory."""
    lines = ["#define PASTE(a, b) a ## b", "#define TWICE(a) PASTE(a, a)", "#define A0 x"]
    lines += [f"#define A{number + 1} TWICE(A{number})" for number in range(100)]
    unit = unit_of("\n".join([*lines, "A58"]), limits=SMALL)
    assert len(unit.text) < 100_000


def test_arguments_that_nest_too_deep_are_named() -> None:
    """Fifty uses within each other expand; four hundred are left alone inside, and said to be."""
    fifty = unit_of("#define F(x) x+1\n" + "F(" * 50 + "0" + ")" * 50)
    assert fifty.text.count("+1") == 50
    assert not fifty.problems
    many = unit_of("#define F(x) x+1\n" + "F(" * 400 + "0" + ")" * 400)
    assert "arguments of macros nest more than 60 deep" in [each.message for each in many.problems]
