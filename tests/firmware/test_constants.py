"""Constants with more than one live value."""

from collections.abc import Mapping

from bitweight.firmware.constants import Conflict, conflicts
from bitweight.firmware.units import Unit
from firmware.programs import program_of


def evaluated(unit: Unit, text: str) -> int | float | None:
    """The value of a definition that is a plain number."""
    del unit
    return int(text) if text.isdigit() else None


def found(texts: Mapping[str, str]) -> tuple[Conflict, ...]:
    """The conflicts of the name VREF_MV, used by the channel tank."""
    return conflicts(program_of(texts), [("VREF_MV", ("tank",))], evaluated)


USE = "int f(void) { return VREF_MV; }\n"


def test_two_headers_with_different_values_conflict() -> None:
    """Each definition is shown once with its place, its text and its value."""
    (conflict,) = found(
        {
            "a.h": "#define VREF_MV 3300\n",
            "b.h": "#define VREF_MV 5000\n",
            "a.c": '#include "a.h"\n' + USE,
            "b.c": '#include "b.h"\n' + USE,
            "c.c": '#include "b.h"\n' + USE,
        }
    )
    assert (conflict.name, conflict.channels) == ("VREF_MV", ("tank",))
    assert [(str(one.place), one.value) for one in conflict.definitions] == [
        ("a.h:1:9", 3300),
        ("b.h:1:9", 5000),
    ]


def test_near_misses_are_silent() -> None:
    """Equal values, names local to one source, dead branches and unknown values are none."""
    assert not found({"a.h": "#define VREF_MV 3300\n", "a.c": '#include "a.h"\n' + USE})
    assert not found(
        {
            "a.h": "#define VREF_MV 3300\n",
            "b.h": "#define VREF_MV 3300\n",
            "a.c": '#include "a.h"\n' + USE,
            "b.c": '#include "b.h"\n' + USE,
        }
    )
    assert not found({"a.c": "#define VREF_MV 3300\n" + USE, "b.c": "#define VREF_MV 5000\n" + USE})
    assert not found(
        {
            "a.h": "#if 0\n#define VREF_MV 5000\n#else\n#define VREF_MV 3300\n#endif\n",
            "a.c": '#include "a.h"\n' + USE,
        }
    )
    assert not found(
        {
            "a.h": "#define VREF_MV 3300\n",
            "b.h": "#define VREF_MV read_vref()\n",
            "a.c": '#include "a.h"\n' + USE,
            "b.c": '#include "b.h"\n' + USE,
        }
    )
