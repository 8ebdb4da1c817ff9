"""What a whole run costs, against what anybody would have to pay.

Run by hand: `python tests/benchmarks/verification.py [--modules N ...]`. Prints a table
of ratios: processor seconds (user and system) of processes, the best of some runs; peak memory of a
process. Trees are made in a temporary folder (about 10,000 lines a module); no network is used.
"""

import argparse
import os
import platform
import subprocess
import sys
import tempfile
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from benchmarks.arithmetic import CODES, best_of, in_c
from benchmarks.firmware_trees import CHANNELS, board_text, write_tree
from bitweight.arithmetic.evaluation import evaluate
from bitweight.arithmetic.types import MODELS
from properties.conversions import CONVERSIONS

ROOT = Path(__file__).resolve().parents[2]
IMPORTS = "import numpy, rich, tree_sitter"
"""What a program on these libraries pays before it does anything."""
PARSING = """\
import sys
from pathlib import Path
import tree_sitter, tree_sitter_c
parser = tree_sitter.Parser(tree_sitter.Language(tree_sitter_c.language()))
for path in Path(sys.argv[1]).rglob("*.[ch]"):
    parser.parse(path.read_bytes())
"""
"""Parses every .c and .h below a folder once, and keeps nothing."""
ENVIRONMENT = {key: os.environ[key] for key in os.environ if key != "PYTHONDONTWRITEBYTECODE"}
"""Compiled modules are kept, as for anybody who runs a program twice."""
SMALL = ROOT / "corpus" / "demo" / "clean"


@dataclass(frozen=True, slots=True, kw_only=True)
class Cost:
    """What a process took: `seconds` of processor time, `megabytes` at its peak."""

    seconds: float
    megabytes: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """One line of the table: what was measured, against what, and the ratio to stay below."""

    name: str
    ours: str
    theirs: str
    ratio: float
    goal: float


def cost(*command: str) -> Cost:
    """The cost of one process of this interpreter, which must not fail to run."""
    process = subprocess.Popen(
        [sys.executable, *command],
        stdout=subprocess.PIPE,
        stderr=subprocess.DEVNULL,
        env=ENVIRONMENT,
    )
    assert process.stdout is not None
    printed = process.stdout.read()
    _, status, usage = os.wait4(process.pid, 0)
    process.returncode = os.waitstatus_to_exitcode(status)
    if process.returncode:
        raise SystemExit(
            f"{' '.join(command)} ended with {process.returncode}:\n{printed.decode()}"
        )
    return Cost(seconds=usage.ru_utime + usage.ru_stime, megabytes=usage.ru_maxrss / 1024)


def best(turns: int, *command: str) -> Cost:
    """The cheapest of several runs."""
    return min((cost(*command) for _ in range(turns)), key=lambda one: one.seconds)


def verification(board: Path, turns: int = 3) -> Cost:
    """The cost of `verify` with a board file whose firmware must be sound."""
    return best(turns, "-m", "bitweight", "verify", "--board", str(board), "--plain")


def seconds_row(name: str, ours: float, theirs: float, goal: float) -> Row:
    """A row of two times."""
    return Row(
        name=name, ours=f"{ours:.3f} s", theirs=f"{theirs:.3f} s", ratio=ours / theirs, goal=goal
    )


def conversion_rows() -> Iterator[Row]:
    """All codes of a conversion against the loop that gcc makes of it; the worst of them."""
    model = MODELS["host"]
    found = []
    for conversion in CONVERSIONS:
        node = conversion.build(model)
        ours = best_of(lambda node=node: evaluate(node, lambda _: CODES))
        found.append((ours, in_c(conversion, node.type.name)))
    ours, theirs = max(found, key=lambda pair: pair[0] / pair[1])
    yield Row(
        name=f"65,536 codes of a conversion, worst of {len(found)}, against gcc -O2",
        ours=f"{ours * 1e3:.3f} ms",
        theirs=f"{theirs * 1e3:.3f} ms",
        ratio=ours / theirs,
        goal=20,
    )


def small_rows() -> Iterator[Row]:
    """The whole process over a small board against the imports of its libraries."""
    imports = best(5, "-c", IMPORTS).seconds
    files = len(list(SMALL.rglob("*.[ch]")))
    demo = verification(SMALL / "board.toml", 5).seconds
    yield seconds_row(f"demo board ({files} files, 13 channels), against imports", demo, imports, 3)
    one = best(
        5, "-m", "bitweight", "verify", "--board", str(SMALL / "board.toml"), "--plain",
        "--channel", "light",
    ).seconds  # fmt: skip
    yield seconds_row(f"one channel of it ({files} files), against imports", one, imports, 3)


def tree_rows(folder: Path, sizes: list[int]) -> Iterator[Row]:
    """Growing trees against parsing them, against each other; many channels against one."""
    before: tuple[int, float] | None = None
    for modules in sizes:
        tree = folder / f"tree{modules}"
        lines = write_tree(tree, modules)
        board = tree / "board.toml"
        board.write_text(board_text(10))
        name = f"{lines:,} lines"
        ours = verification(board, 2)
        theirs = best(2, "-c", PARSING, str(tree)).seconds
        yield seconds_row(
            f"{name}, 10 channels, cold, against parsing all", ours.seconds, theirs, 1
        )
        yield Row(
            name=f"{name}: peak memory",
            ours=f"{ours.megabytes:.0f} MB",
            theirs="400 MB",
            ratio=ours.megabytes / 400,
            goal=1,
        )
        if before is not None:
            larger, seconds = lines / before[0], before[1]
            yield seconds_row(
                f"{name}, against {before[0]:,} lines", ours.seconds, seconds, 1.05 * larger
            )
        before = (lines, ours.seconds)
    yield from channel_rows(tree)


def channel_rows(tree: Path) -> Iterator[Row]:
    """All channels of a tree against one of them."""
    board = tree / "board.toml"
    board.write_text(board_text(1))
    one = verification(board, 2).seconds
    board.write_text(board_text(CHANNELS))
    many = verification(board, 2).seconds
    yield seconds_row(f"{CHANNELS} channels against 1, the last tree", many, one, 1.5)


def show(row: Row) -> None:
    """Prints a row as soon as it is measured."""
    mark = "" if row.ratio <= row.goal else "  over"
    print(
        f"{row.name:62} {row.ours:>10} {row.theirs:>10} {row.ratio:7.2f} {row.goal:7.2f}{mark}",
        flush=True,
    )


def main() -> None:
    """Print the machine and the table."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--modules", type=int, nargs="+", default=[4, 8, 16])
    sizes = parser.parse_args().modules
    print(f"{os.cpu_count()} cores, {platform.machine()}, Python {platform.python_version()}")
    print(f"{'':62} {'ours':>10} {'theirs':>10} {'ratio':>7} {'goal':>7}")
    for rows in (conversion_rows(), small_rows()):
        for row in rows:
            show(row)
    with tempfile.TemporaryDirectory() as folder:
        for row in tree_rows(Path(folder), sizes):
            show(row)


if __name__ == "__main__":
    main()
