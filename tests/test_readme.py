"""The README does what it says: its commands, links, board file and screens."""

import re
import shlex
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

from bitweight.pipeline import verify
from bitweight.report.sheets import Screen
from bitweight.requests import Request

ROOT = Path(__file__).resolve().parents[1]
TEXT = (ROOT / "README.md").read_text("utf-8")
BLOCK = re.compile(r"^```(\w+)\n(.*?)^```$", re.MULTILINE | re.DOTALL)
LINK = re.compile(r"\]\(([^)#:]+)\)")
INSTALLING = ("python3 -m venv", ".venv/bin/pip install", "pip install")


def blocks(language: str) -> list[str]:
    """The fenced blocks in a language, in order."""
    return [text for name, text in BLOCK.findall(TEXT) if name == language]


def steps() -> list[str]:
    """The single commands of the `sh` blocks, without those that install."""
    found = [
        step.strip()
        for block in blocks("sh")
        for line in block.splitlines()
        for step in line.split("&&")
        if step.strip()
    ]
    return [step for step in found if not step.startswith(INSTALLING)]


def here(step: str) -> list[str]:
    """A step's command with the interpreter that runs the tests in place of the README's."""
    name, *arguments = shlex.split(step)
    return [sys.executable, "-m", Path(name).name, *arguments]


def run(command: list[str], cwd: Path = ROOT) -> subprocess.CompletedProcess[str]:
    """A finished process; what it wrote and its exit status."""
    return subprocess.run(
        command,
        cwd=cwd,
        stdin=subprocess.DEVNULL,
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
    )


def test_the_first_paragraph_states_the_job() -> None:
    """Below the title stands what the program is for, by its name."""
    title, paragraph = TEXT.split("\n\n")[:2]
    assert title == "# bitweight"
    assert "`bitweight`" in paragraph
    assert "converter" in paragraph


def test_two_lines_set_up_and_run() -> None:
    """One line sets up and verifies the demo, one sets up and runs the tests."""
    lines = [line for block in blocks("sh") for line in block.splitlines() if "&&" in line]
    verifying, testing = lines[:2]
    assert all(line.startswith("python3 -m venv .venv && ") for line in (verifying, testing))
    assert ".venv/bin/bitweight verify" in verifying
    assert ".venv/bin/pytest" in testing


@pytest.mark.parametrize("step", [one for one in steps() if "pytest" not in one])
def test_a_command_of_the_readme_runs(step: str) -> None:
    """A command that does not install runs, and its exit status is no failure to run."""
    finished = run(here(step))
    assert finished.returncode in (0, 1), finished.stderr
    assert finished.stdout


@pytest.mark.parametrize("step", [one for one in steps() if "pytest" in one])
def test_the_test_command_finds_the_tests(step: str) -> None:
    """The command that runs the tests collects this very file."""
    finished = run([*here(step), "--collect-only", "tests/test_readme.py"])
    assert finished.returncode == 0, finished.stdout + finished.stderr
    assert "test_readme.py" in finished.stdout


@pytest.mark.parametrize("link", sorted({*LINK.findall(TEXT)}))
def test_a_link_leads_to_a_file(link: str) -> None:
    """What the README links to exists in the repository."""
    assert (ROOT / link).exists()


@pytest.mark.parametrize(
    "path", sorted(set(re.findall(r"`((?:lint|rules|tests|corpus)/[\w./-]+)`", TEXT)))
)
def test_a_path_named_in_the_text_exists(path: str) -> None:
    """What the README names by its path exists in the repository."""
    assert (ROOT / path).exists()


@pytest.fixture
def smallest(tmp_path: Path) -> Path:
    """A folder with the README's smallest board file and the C that it describes."""
    board, code = blocks("toml")[0], blocks("c")[0]
    assert set(tomllib.loads(board)) == {"reference", "converter", "channel"}
    (tmp_path / "src").mkdir()
    (tmp_path / "board.toml").write_text(board)
    (tmp_path / "src" / "battery.c").write_text(code)
    return tmp_path


def test_the_smallest_board_file_verifies_the_code_beside_it(smallest: Path) -> None:
    """The C in the README agrees with the board file in the README: no finding of any level."""
    finished = run(here("bitweight verify src --board board.toml --gate note"), smallest)
    assert (finished.returncode, finished.stderr) == (0, "")
    assert finished.stdout.startswith("1 channel: 1 verified")


def test_another_divider_is_found_in_the_code_beside_it(smallest: Path) -> None:
    """With the board's divider changed the same C no longer agrees."""
    board = smallest / "board.toml"
    board.write_text(board.read_text().replace('bottom = "10k 1%"', 'bottom = "22k 1%"'))
    finished = run(here("bitweight verify src --board board.toml"), smallest)
    assert finished.returncode == 1
    assert "[divider-ratio]" in finished.stdout


def screen(name: str) -> str:
    """The screen that stands below a comment with its name."""
    found = re.search(rf"<!-- {re.escape(name)} -->\n```text\n(.*?)^```$", TEXT, re.M | re.S)
    assert found is not None
    assert found[1].strip()
    return found[1]


def contained(shown: str, printed: str) -> bool:
    """Whether the lines shown stand in the output one below the other."""
    return shown.strip("\n") in "\n".join(line.rstrip() for line in printed.splitlines())


def test_the_plain_lines_are_what_the_program_prints() -> None:
    """The lines shown are the program's for the demo board with its faults."""
    command = "bitweight verify --board corpus/demo/faulty/board.toml --plain"
    assert contained(screen("plain"), run(here(command)).stdout)


def test_the_sheet_is_what_the_program_prints(monkeypatch: pytest.MonkeyPatch) -> None:
    """The sheet shown is the program's, on a terminal of 80 columns without colour."""
    monkeypatch.chdir(ROOT)
    request = Request(board="corpus/demo/faulty/board.toml")
    outcome = verify(request, lambda *_: None)
    printed = "\n".join(line.plain for line in Screen(outcome=outcome).lines(80))
    assert contained(screen("screen: battery"), printed)
