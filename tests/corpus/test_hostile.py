"""Hostile input: bounded work, a clear line, the right exit status, never a traceback."""

import os
from pathlib import Path

import pytest

from command.processes import Finished, bitweight
from corpus.cases import CorpusCase, cases
from corpus.runs import CaseRun, run_case

SECONDS = 5.0
"""Processor time that a hostile case may take, far above what each needs."""

BOARD = """\
[reference.vref]
voltage = "3 V"
[converter.adc]
bits = 12
[channel.rail]
unit = "V"
[channel.rail.firmware]
reading = "adc_read(RAIL)"
value = "rail_mv"
unit = "1 mV"
"""

SOURCE = """\
#define RAIL_COUNTS 4095
extern unsigned adc_read(int input);
unsigned rail_mv;
void rail_poll(void) { rail_mv = adc_read(RAIL) * 3000UL / RAIL_COUNTS; }
"""

HOSTILE = cases("hostile")


@pytest.fixture(scope="module", params=HOSTILE, ids=str)
def case(request: pytest.FixtureRequest) -> CorpusCase:
    """Each hostile case in turn."""
    chosen: CorpusCase = request.param
    return chosen


@pytest.fixture(scope="module")
def run(case: CorpusCase) -> CaseRun:
    """The case, run once."""
    return run_case(case.folder)


def test_bounded_work(run: CaseRun) -> None:
    """No input, however twisted, costs more processor time than the bound."""
    assert run.seconds < SECONDS


def test_the_command_survives(case: CorpusCase, run: CaseRun) -> None:
    """The command ends with the expected status, says why it refuses, and prints no traceback."""
    done = bitweight("verify", "src", "--board", "board.toml", "--plain", cwd=case.folder)
    assert done.returncode == run.exit == case.expectation().exit
    _is_calm(done)
    if run.exit == 2:
        assert "error: " in done.stderr
        assert done.stdout == ""


@pytest.mark.parametrize(
    "name",
    [
        "two\nlines",
        "\x1b[31mred\x1b[0m",
        "tab\tbell\a",
        "[bold]markup[red]",
        "\u202eturned",
        "-rf",
        "a:12:3: error",
        "\udcff\udcfe",
    ],
    ids=["newline", "escape", "tab", "markup", "direction", "dash", "colons", "no-utf-8"],
)
def test_names_that_attack_the_screen(name: str, tmp_path: Path) -> None:
    """Folder and file names are shown literally: no control character reaches the output."""
    folder = tmp_path / "src" / name
    try:
        folder.mkdir(parents=True)
        (folder / f"{name}.c").write_text(SOURCE)
    except OSError as error:  # a file system that takes fewer names
        pytest.skip(f"name not possible here: {error.strerror}")
    (tmp_path / "board.toml").write_text(BOARD)
    done = bitweight("verify", "src", "--board", "board.toml", "--plain", cwd=tmp_path)
    assert done.returncode == 1
    lines = done.stdout.splitlines()
    assert lines[0].endswith("[full-scale]")
    assert len(lines) == 2
    _is_calm(done)


@pytest.mark.parametrize("name", ["board\x1b[2J.toml", "board\nerror: all is lost.toml"])
def test_board_file_with_an_attacking_name(name: str, tmp_path: Path) -> None:
    """A missing or wrong board file is reported in one line, whatever it is called."""
    done = bitweight("verify", "src", "--board", name, cwd=tmp_path)
    assert done.returncode == 2
    assert len(done.stderr.splitlines()) == 1
    _is_calm(done)


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="no named pipes here")
def test_what_is_no_regular_file(tmp_path: Path) -> None:
    """Named pipes and links to devices or out of the tree are not opened."""
    source = tmp_path / "src"
    source.mkdir()
    (source / "rail.c").write_text(SOURCE)
    os.mkfifo(source / "pipe.c")
    (source / "zero.c").symlink_to("/dev/zero")
    (source / "loop").symlink_to(source, target_is_directory=True)
    (tmp_path / "board.toml").write_text(BOARD)
    done = bitweight("verify", "src", "--board", "board.toml", "--plain", cwd=tmp_path)
    assert done.returncode == 1
    assert "loop/rail.c" not in done.stdout
    _is_calm(done)


def _is_calm(done: Finished) -> None:
    text = done.stdout + done.stderr
    assert "Traceback" not in text
    assert "internal error" not in text
    assert [one for one in text if not one.isprintable() and one != "\n"] == []
