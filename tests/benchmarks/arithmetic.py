"""How long a typical conversion takes over 65,536 codes, against the same loop in C.

Run by hand: `python tests/benchmarks/arithmetic.py`. Prints the time of each evaluation and its
ratio to the loop that gcc -O2 makes of it; the aim is a ratio below 20.
"""

import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.reals import real_form
from bitweight.arithmetic.types import MODELS
from properties.conversions import CONVERSIONS, Conversion

CODES = np.arange(1 << 16, dtype=np.int64)
TURNS = 200
PROGRAM = """
#include <stdint.h>
#include <stdio.h>
#include <time.h>
static volatile uint16_t codes[65536];
static {type} out[65536];
int main(void) {{
  for (unsigned i = 0; i < 65536; i++) codes[i] = i;
  clock_t start = clock();
  for (int turn = 0; turn < {turns}; turn++) {{
    for (unsigned i = 0; i < 65536; i++) {{ uint16_t x = codes[i]; out[i] = {text}; }}
    __asm__ volatile ("" : : "r" (out) : "memory");
  }}
  printf("%g", (double)(clock() - start) / CLOCKS_PER_SEC / {turns});
  return 0; }}
"""


def in_c(conversion: Conversion, type_name: str) -> float:
    """Seconds of processor time that one run of the loop takes in C."""
    text = PROGRAM.format(type=type_name, text=conversion.text, turns=TURNS)
    with tempfile.TemporaryDirectory() as folder:
        source = Path(folder, "loop.c")
        source.write_text(text)
        program = Path(folder, "loop")
        subprocess.run(["gcc", "-O2", "-fwrapv", str(source), "-o", str(program)], check=True)
        return float(subprocess.run([program], check=True, capture_output=True).stdout)


def best_of(action: Callable[[], object], turns: int = 20) -> float:
    """The shortest of several runs, in seconds of processor time."""
    times = []
    for _ in range(turns):
        start = time.process_time()
        action()
        times.append(time.process_time() - start)
    return min(times)


def main() -> None:
    """Print one line a conversion."""
    model = MODELS["host"]
    print(f"{'C ms':>8} {'ours ms':>8} {'ratio':>6} {'reals ms':>8}  conversion")
    for conversion in CONVERSIONS:
        node = conversion.build(model)
        theirs = in_c(conversion, node.type.name)
        ours = best_of(lambda node=node: evaluate(node, lambda _: CODES))
        form = real_form(node)
        real = best_of(lambda form=form: form.floats(lambda _: CODES))
        columns = f"{theirs * 1e3:8.3f} {ours * 1e3:8.3f} {ours / theirs:6.1f} {real * 1e3:8.3f}"
        print(f"{columns}  {conversion.text}")


if __name__ == "__main__":
    main()
