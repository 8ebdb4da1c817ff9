"""A finding on a sheet."""

import pytest
from rich.cells import cell_len

from bitweight.judge.cases import Case
from bitweight.judge.findings import Finding, Related, Replacement
from bitweight.places import Place
from bitweight.report.blocks import finding_block, reminder
from bitweight.report.drawings import Ink
from report import samples


def block(
    finding: Finding, source: str | None = None, case: Case | None = None, width: int = 60
) -> list[str]:
    """The lines of a finding, with the text of its source line."""
    key = (finding.place.file, finding.place.line)
    sources = {} if source is None else {key: source}
    return [line.plain for line in finding_block(finding, 4, case, sources, width, Ink.PLAIN)]


def test_whole_block() -> None:
    """A finding tells what, where, the source line, values, effect, mend and where it bites."""
    case = samples.outcome().facts.cases[1]
    assert block(samples.finding(), "#define ADC_MAX  1023 // top", case, 70) == [
        "  (4) warning: full-scale",
        "    ADC_MAX is 1023, but 1024 counts stand for the reference",
        "    at        hatchery/src/adc_cfg.h:3, column 18",
        "    code      #define ADC_MAX  1023 // top",
        '                               """"',
        "    found     1023 -> expected 1024",
        "    effect    bottom 0 V, middle +8 mV, top +16 mV",
        "    mend      write 1024",
        "    see       hatchery/src/battery.c:12: used here",
    ]


def place(column: int) -> Place:
    """A place in the header."""
    return Place("a.h", 3, column)


MARKED = {
    "a number": ("#define N 1023", place(11), None, "1023"),
    "a name": ("x = VREF_MV * 2;", place(5), None, "VREF_MV"),
    "an edit's width": (
        "x = (1 << 12) - 1;",
        place(5),
        Replacement(place=place(5), end_column=14, text="4096"),
        "(1 << 12)",
    ),
    "an indented line": ("\t\tx = 4095;", place(7), None, "4095"),
    "a tab inside": ("#define N\t\t4095", place(12), None, "4095"),
    "wide characters before": ("/* 水位 */ x = 4095;", place(14), None, "4095"),
    "an escape before": ("/* \x1b */ x = 4095;", place(13), None, "4095"),
    "a member": ("  tank.level->mm = x;", place(3), None, "tank.level->mm"),
    "an operator": ("x = a >> 2;", place(7), None, ">>"),
    "a long line": ("x" * 400 + " = 4095;" + "y" * 400, place(404), None, "4095"),
    "past the end": ("short", place(80), None, ""),
}


@pytest.mark.parametrize(("source", "where", "edit", "culprit"), MARKED.values(), ids=MARKED.keys())
def test_the_mark_stands_below_the_culprit(
    source: str, where: Place, edit: Replacement | None, culprit: str
) -> None:
    """The mark is as wide as the culprit and stands below it, whatever stands before it."""
    finding = samples.finding(place=where, replacement=edit)
    lines = block(finding, source)
    index = next(n for n, line in enumerate(lines) if line.startswith("    code"))
    code, marks = lines[index : index + 2]
    column = cell_len(marks) - cell_len(marks.lstrip())
    before = code[: len(code)]
    while cell_len(before) > column:
        before = before[:-1]
    assert code[len(before) :].startswith(culprit)
    assert len(marks.strip()) == max(1, len(culprit))
    assert cell_len(code) <= 60


def test_without_a_source_line() -> None:
    """A finding whose line is not known or empty shows no code."""
    assert not any("code  " in line for line in block(samples.finding()))
    assert not any("code  " in line for line in block(samples.finding(), "  "))


def test_an_edit_elsewhere_names_its_place() -> None:
    """A mend that is not at the finding's own place says where."""
    edit = Replacement(place=Place("b.h", 7, 3), end_column=9, text="x")
    lines = block(samples.finding(replacement=edit))
    assert "    mend      write x at b.h:7, column 3 to 8" in lines


def test_many_related_places() -> None:
    """The first places and the last, the result, are listed, those between counted."""
    related = tuple(Related(place=Place("a.c", n), message="used") for n in range(1, 20))
    lines = block(samples.finding(related=related))
    assert lines[-3:] == [
        "              a.c:3: used",
        "              ... 15 more ...",
        "              a.c:19: used",
    ]


def test_hostile_text_stays_printable() -> None:
    """Nothing of a finding can act on the terminal."""
    evil = "\x1b]0;x\x07\n\u202e[red]"
    finding = samples.finding(
        evil, message=evil, found=evil, expected=evil, hazard=evil, deviation=evil
    )
    assert all(line.isprintable() for line in block(finding, evil))


def test_a_reminder_is_short() -> None:
    """On later sheets a shared finding is named, with the effect on that channel."""
    case = samples.outcome().facts.cases[1]
    lines = [line.plain for line in reminder(samples.finding(), 4, case, "depth", 80)]
    assert lines == [
        "  (4) warning: full-scale",
        "    ADC_MAX is 1023, but 1024 counts stand for the reference",
        "    at        hatchery/src/adc_cfg.h:3; shown in full at channel depth",
        "    effect    bottom 0 V, middle +8 mV, top +16 mV",
    ]
