"""Remarks are kept once each."""

from bitweight.firmware.files import SourceFile
from bitweight.firmware.remarks import Missing, Problem, Remarks, Undefined
from bitweight.places import Place

FILE = SourceFile("a.c", "one\ntwo\n")


def test_a_remark_made_twice_is_kept_once() -> None:
    """A header read again does not repeat what was found in it."""
    remarks = Remarks()
    for _ in range(2):
        remarks.problem(FILE, 4, "odd")
        remarks.miss("avr/io.h", FILE.place(0))
    assert remarks.problems == (Problem(Place("a.c", 2, 1), "odd"),)
    assert remarks.missing == (Missing("avr/io.h", Place("a.c", 1, 1)),)


def test_a_name_is_noted_at_its_first_test_and_knows_a_later_fallback() -> None:
    """The first place counts; that some #ifndef defined the name is not forgotten."""
    remarks = Remarks()
    remarks.test("VREF", FILE, 0)
    remarks.test("VREF", FILE, 4, fallback=True)
    remarks.test("VREF", FILE, 4)
    assert remarks.undefined == (Undefined("VREF", Place("a.c", 1, 1), True),)


def test_problems_are_bounded() -> None:
    """A hostile file cannot fill the memory with its faults."""
    file = SourceFile("a.c", "\n" * 2000)
    remarks = Remarks()
    for offset in range(2000):
        remarks.problem(file, offset, "odd")
    assert len(remarks.problems) == 500
