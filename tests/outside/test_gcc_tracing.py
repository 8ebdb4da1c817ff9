"""What is traced computes what gcc's program computes, for whole small programs.

gcc is the oracle: each program is compiled with a stub for the converter and run at a few codes. A
program may be untraced; a traced one must agree at every code.
"""

import re
import shutil
import subprocess
from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory

import pytest

from bitweight.arithmetic.types import MODELS
from tracing_cases import at_codes, traced

PROGRAMS = Path(__file__).with_name("tracing_programs.txt")
CODES = (0, 1, 7, 100, 2047, 2048, 4000, 4095)
LEAST_TRACED = 0.75
"""The share of the programs that is traced; a change that loses many of them shows here."""
TYPES = """
typedef unsigned char uint8_t; typedef signed char int8_t; typedef unsigned short uint16_t;
typedef short int16_t; typedef unsigned int uint32_t; typedef int int32_t;
typedef unsigned long uint64_t; typedef long int64_t; typedef _Bool bool;
"""
HEAD = """unsigned short adc(void);
void ext(void *p);
int flag(void);
"""
STUBS = """
unsigned short {0}adc(void) {{ return code; }}
int {0}flag(void) {{ return 0; }}
void {0}ext(void *p) {{ (void)p; }}
int {0}abs(int x) {{ return x < 0 ? -x : x; }}
extern {1} {0}mv;
extern void {0}entry(void);
"""

pytestmark = pytest.mark.skipif(
    shutil.which("gcc") is None or shutil.which("objcopy") is None, reason="gcc is the oracle"
)


def programs() -> dict[str, str]:
    """The programs by name, each with its result declared."""
    found = {}
    for block in re.split(r"^=== ", PROGRAMS.read_text("utf-8"), flags=re.MULTILINE)[1:]:
        name, _, text = block.partition("\n")
        found[name] = f"{HEAD}{kind(name)} mv;\n{text}"
    return found


def kind(name: str) -> str:
    """The C type of a program's result."""
    return "float" if "[float]" in name else "int"


@cache
def compiled() -> dict[str, list[float]]:
    """What gcc's programs compute at the codes, all built into one process."""
    names = list(programs())
    with TemporaryDirectory() as folder:
        here = Path(folder)
        for number, text in enumerate(programs().values()):
            define = "#define true 1\n#define false 0\n"
            (here / f"p{number}.c").write_text(TYPES + define + text, "utf-8")
        sources = [f"p{number}.c" for number in range(len(names))]
        _run(["gcc", "-w", "-O0", "-fwrapv", "-fno-builtin", "-c", *sources], here)
        for number in range(len(names)):
            _run(["objcopy", f"--prefix-symbols=s{number}_", f"p{number}.o"], here)
        (here / "main.c").write_text(_harness(names), "utf-8")
        objects = [f"p{number}.o" for number in range(len(names))]
        _run(["gcc", "-w", "-no-pie", "-o", "all", "main.c", *objects], here)
        lines = _run(["./all"], here).splitlines()
    width = len(CODES)
    return {
        name: [float(line) for line in lines[number * width : (number + 1) * width]]
        for number, name in enumerate(names)
    }


def _harness(names: list[str]) -> str:
    stubs = "".join(STUBS.format(f"s{n}_", kind(name)) for n, name in enumerate(names))
    codes = ", ".join(map(str, CODES))
    calls = "".join(
        f"for (int i = 0; i < {len(CODES)}; i++) {{ code = codes[i]; s{n}_mv = 0; s{n}_entry();"
        f' printf("%.17g\\n", (double)s{n}_mv); }}\n'
        for n in range(len(names))
    )
    return (
        "#include <stdio.h>\nstatic unsigned short code;\n"
        f"static const int codes[] = {{{codes}}};\n{stubs}\n"
        f"int main(void) {{\n{calls}return 0; }}\n"
    )


def _run(command: list[str], folder: Path) -> str:
    done = subprocess.run(command, cwd=folder, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr[:2000]
    return done.stdout


@cache
def computed(name: str) -> list[list[float]] | None:
    """What the traced conversions of a program compute; None where it is untraced."""
    trace = traced(programs()[name], value="mv", model=MODELS["host"])
    if trace.reason is not None:
        assert trace.reason
        return None
    return [at_codes(one.expression, CODES) for one in trace.conversions]


@pytest.mark.parametrize("name", list(programs()))
def test_a_traced_program_agrees_with_gcc(name: str) -> None:
    """Every conversion gives what the compiled program gives, at every code."""
    found = computed(name)
    if found is not None:
        assert found == [compiled()[name]] * len(found)


def test_most_programs_are_traced() -> None:
    """Saying nothing is safe but no use: most of the programs are followed."""
    names = list(programs())
    assert sum(computed(name) is not None for name in names) / len(names) >= LEAST_TRACED
