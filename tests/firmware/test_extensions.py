"""Words that compilers for small targets add to C."""

import pytest

from bitweight.firmware.extensions import EXTENSIONS
from firmware.sources import unit_of, words_of


@pytest.mark.parametrize(
    ("source", "text"),
    [
        ("const PROGMEM int t[2];", "const int t[2];"),
        ("__IO uint32_t CR;", "volatile uint32_t CR;"),
        ("__STATIC_INLINE int f(void);", "static inline int f(void);"),
        ("ISR(ADC_vect, ISR_NOBLOCK) { }", "void ADC_vect(void) { }"),
        ("ISR(TIMER1_COMPA_vect)\n{ }", "void TIMER1_COMPA_vect(void) { }"),
        ('static int x __attribute__((section(".n"))) = 5;', "static int x = 5;"),
        ("__weak void f(void) { }", "__attribute__((weak)) void f(void) { }"),
        ("void f(void) __attribute__((weak));", "void f(void) __attribute__((weak));"),
        ('_Pragma("once") int x;', "int x;"),
        ("int ISR;", "int ISR;"),
        ("#define FLASH const PROGMEM\nFLASH int x;", "const int x;"),
        ("#define PROGMEM far_away\nPROGMEM int x;", "far_away int x;"),
        ("#ifdef PROGMEM\nyes\n#else\nno\n#endif", "no"),
        ('"PROGMEM"', '"PROGMEM"'),
    ],
)
def test_words_stand_for_standard_c_where_no_macro_says_otherwise(source: str, text: str) -> None:
    """Placement words vanish, vector routines become functions, definitions come first."""
    assert words_of(unit_of(source + "\n").text) == text


def test_a_word_is_no_macro_use() -> None:
    """What stands for the word stands at its place, in no macro."""
    unit = unit_of("int a;\n__IO int b;\nISR(ADC_vect) { }\n")
    origin = unit.origin(unit.text.index("volatile"))
    assert (origin.place.line, origin.place.column, origin.macro) == (2, 1, None)
    vector = unit.origin(unit.text.index("ADC_vect"))
    assert (vector.place.line, vector.place.column) == (3, 5)
    assert not unit.invocations


def test_every_word_of_the_table_is_well_formed() -> None:
    """No row of the table is lost."""
    assert {"ISR", "PROGMEM", "__IO", "_Pragma", "__attribute__"} <= set(EXTENSIONS)
    assert all(macro.file.path == "<extensions>" for macro in EXTENSIONS.values())
