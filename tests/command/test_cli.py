"""The entry point: errors become one line and a status."""

import os
import subprocess
import sys
from pathlib import Path

import pytest

from bitweight.command import cli
from bitweight.command.options import Options
from bitweight.errors import (
    BoardError,
    LimitReached,
    Mistake,
    RuleError,
    SourceError,
    UsageError,
)
from bitweight.places import Place
from bitweight.version import VERSION
from command.processes import bitweight


def test_version() -> None:
    """`--version` prints the program's name and version."""
    run = bitweight("--version")
    assert (run.returncode, run.stdout, run.stderr) == (0, f"bitweight {VERSION}\n", "")


def test_help() -> None:
    """`--help` explains the commands and the exit statuses."""
    run = bitweight("--help")
    assert run.returncode == 0
    assert "verify" in run.stdout
    assert "Exit status" in run.stdout


def test_usage_error() -> None:
    """A bad command line is one line on standard error and status 2."""
    run = bitweight("verify", "src")
    assert run.returncode == 2
    assert run.stdout == ""
    assert run.stderr.splitlines() == [
        "bitweight: error: the following arguments are required: --board "
        "(see bitweight verify --help)"
    ]


def test_usage_errors_load_no_arithmetic() -> None:
    """The version, help and usage errors answer without the heavy modules."""
    code = (
        "import sys; from bitweight.command.cli import main; main(['--version']); main(['x']);"
        "sys.exit(any(name in sys.modules for name in ('numpy', 'rich', 'tree_sitter')))"
    )
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, check=False)
    assert run.returncode == 0


ERRORS = {
    "usage": (UsageError("no channel x"), 2, "bitweight: error: no channel x\n"),
    "source": (SourceError(path="src", message="is empty"), 2, "src: error: is empty\n"),
    "rule": (RuleError("rule 'x' failed"), 2, "bitweight: error: rule 'x' failed\n"),
    "limit": (LimitReached("too deep"), 2, "bitweight: error: too deep\n"),
    "system": (
        PermissionError(13, "Permission denied", "a.c"),
        2,
        "bitweight: error: a.c: Permission denied\n",
    ),
    "memory": (MemoryError(), 2, "bitweight: error: out of memory\n"),
    "interrupt": (KeyboardInterrupt(), 130, ""),
    "bug": (
        ZeroDivisionError("by\nzero"),
        2,
        "bitweight: internal error: ZeroDivisionError: by\\nzero; please report\n",
    ),
    "recursion": (
        RecursionError("deep"),
        2,
        "internal error: RecursionError: deep; please report\n",
    ),
}


@pytest.mark.parametrize(("error", "status", "words"), ERRORS.values(), ids=ERRORS.keys())
def test_errors(
    error: BaseException,
    status: int,
    words: str,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    """Every error becomes at most one line and its status, never a traceback."""

    def fail(options: Options) -> int:
        raise error

    monkeypatch.setattr(cli, "_run", fail)
    assert cli.main(["--version"]) == status
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err.endswith(words)
    assert len(captured.err.splitlines()) == bool(words)


def test_all_mistakes_of_a_board_file(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """Each mistake of a board file is a line of its own."""
    mistakes = tuple(
        Mistake(place=Place("b.toml", line), message=f"wrong\n{line}") for line in (3, 9)
    )

    def fail(options: Options) -> int:
        raise BoardError(mistakes)

    monkeypatch.setattr(cli, "_run", fail)
    assert cli.main(["--version"]) == 2
    assert capsys.readouterr().err.splitlines() == [
        "b.toml:3:1: error: wrong\\n3",
        "b.toml:9:1: error: wrong\\n9",
    ]


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="needs /dev/full")
def test_a_full_disk() -> None:
    """Standard output that takes nothing is an error, said once."""
    with Path("/dev/full").open("w") as full:
        run = bitweight("--version", stdout=full)
    assert run.returncode == 2
    assert run.stderr.splitlines() == ["bitweight: error: standard output: No space left on device"]


def test_a_reader_that_has_left() -> None:
    """A closed pipe is no error and no noise."""
    reader, writer = os.pipe()
    os.close(reader)
    try:
        run = bitweight("--version", stdout=writer)
    finally:
        os.close(writer)
    assert (run.returncode, run.stderr) == (0, "")


def test_an_interrupt_that_upsets_a_library(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """An error raised while an interrupt unwinds the program is still an interrupt."""

    def fail(options: Options) -> int:
        try:
            raise KeyboardInterrupt
        finally:
            raise AttributeError("half undone")

    monkeypatch.setattr(cli, "_run", fail)
    assert cli.main(["--version"]) == 130
    assert capsys.readouterr().err == ""
