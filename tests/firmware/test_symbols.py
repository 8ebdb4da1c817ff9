"""The tree as a set of names."""

from firmware.programs import program_of

TREE = {
    "board.h": "#define READ(n) adc_read(n)\nextern int gain;\nint scale(int);\n",
    "adc.c": "int adc_read(int n) { return n; }\nstatic int hidden(void) { return 1; }\n",
    "scale.c": '#include "board.h"\nint gain = 3;\nint scale(int x) { return x * gain; }\n',
    "main.c": '#include "board.h"\nint level(void) { return READ(2); }\n',
    "other.c": "static int hidden(void) { return 2; }\nint unrelated(void) { return hidden(); }\n",
    "weak.c": "__attribute__((weak)) int scale(int x) { return x; }\n",
}


def test_only_units_that_a_name_leads_to_are_parsed() -> None:
    """A name is found through macros and headers; other units stay unread."""
    program = program_of(TREE)
    program.load("adc_read")
    assert sorted(program.units) == ["adc.c", "main.c"]
    program.load("hidden")
    assert sorted(program.units) == ["adc.c", "main.c", "other.c"]


def test_functions_of_external_linkage() -> None:
    """A strong definition hides weak ones, static ones are nobody else's."""
    program = program_of(TREE)
    assert [one.unit.path for one in program.defining("scale")] == ["scale.c"]
    assert program.defining("hidden") == ()
    program.load("hidden")
    own = program.function("hidden", program.units["other.c"])
    assert [one.unit.path for one in own] == ["other.c"]


def test_objects_are_those_that_are_defined() -> None:
    """A declaration leads to the definition with its initialiser."""
    program = program_of(TREE)
    program.load("adc_read")
    found = program.variable("gain", program.units["main.c"])
    assert found is not None
    assert found.unit.path == "scale.c"
    assert found.value is not None
    assert program.variable("absent", None) is None


def test_every_function_that_mentions_a_name() -> None:
    """Bodies are searched as whole words, macros expanded, each function once."""
    program = program_of(TREE)
    assert [one.name for one in program.all_functions("adc_read")] == ["level"]
    assert [one.name for one in program.all_functions("hidden")] == ["unrelated"]


def test_a_header_that_nobody_includes_is_a_unit() -> None:
    """Code that lies in a header alone is read as it stands."""
    program = program_of({"inline.h": "static int twice(int x) { return 2 * x; }\n"})
    program.load("twice")
    assert list(program.units) == ["inline.h"]


def test_one_unit_stands_for_a_header() -> None:
    """What a header says outside of macros is read through one of the units that include it."""
    program = program_of(
        {
            "deep.h": "static int twice(int x) { return 2 * x; }\n",
            "wide.h": '#include "deep.h"\n',
            "a.c": '#include "wide.h"\nint a;\n',
            "b.c": '#include "wide.h"\nint b;\n',
        }
    )
    program.load("twice")
    assert list(program.units) == ["a.c"]
