"""The whole program as a process, on a small tree of its own."""

import json
import os
import re
from importlib.resources import files
from pathlib import Path

import jsonschema
import pytest

from bitweight.command.cli import main
from command.processes import Finished, bitweight

SCHEMA = json.loads(files("bitweight.report").joinpath("report.schema.json").read_text("utf-8"))

BOARD = """\
[board]
name = "Feeder"
firmware = ["src"]

[target]
int_bits = 32

[reference.vref]
voltage = "5 V"

[converter.adc]
bits = 10
reference = "vref"
full_scale_count = 1024

[channel.battery]
converter = "adc"
unit = "V"
range = ["0 V", "16 V"]
allowed_error = "0.1 V"
chain = [{ kind = "divider", top = "R1 27k 1%", bottom = "R2 10k 1%" }]
[channel.battery.firmware]
reading = "adc_read(2)"
value = "battery_mv"
unit = "1 mV"
"""

SOURCE = """\
#define ADC_COUNTS 1024
unsigned short adc_read(int input);
long battery_mv;
void battery_update(void)
{
    battery_mv = (long)adc_read(2) * 5000L * 37 / 10 / ADC_COUNTS;
}
"""


@pytest.fixture
def tree(tmp_path: Path) -> Path:
    """A sound tree with its board file."""
    (tmp_path / "src").mkdir()
    (tmp_path / "board.toml").write_text(BOARD)
    (tmp_path / "src" / "battery.c").write_text(SOURCE)
    return tmp_path


def spoil(tree: Path) -> None:
    """Makes the full-scale count wrong."""
    (tree / "src" / "battery.c").write_text(SOURCE.replace("1024", "1000"))


def verify(tree: Path, *arguments: str) -> Finished:
    """`bitweight verify` inside the tree."""
    return bitweight("verify", "--board", "board.toml", *arguments, cwd=tree)


class Inside:
    """The program inside this process, where the start of another would only take time."""

    def __init__(self, capsys: pytest.CaptureFixture[str]) -> None:
        self.capsys = capsys

    def verify(self, *arguments: str) -> Finished:
        """`bitweight verify` in the current folder."""
        line = ["verify", "--board", "board.toml", *arguments]
        status = main(line)
        captured = self.capsys.readouterr()
        return Finished(line, status, captured.out, captured.err)


@pytest.fixture
def inside(
    tree: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> Inside:
    """The program in the tree's folder."""
    monkeypatch.chdir(tree)
    return Inside(capsys)


def test_a_sound_tree(tree: Path) -> None:
    """A sound tree gives the counts alone and status 0."""
    run = verify(tree)
    assert (run.returncode, run.stderr) == (0, "")
    assert run.stdout == (
        "1 channel: 1 verified, 0 mismatched, 0 untraced; 0 errors, 0 warnings, 0 notes\n"
    )


def test_a_wrong_constant(tree: Path) -> None:
    """A wrong constant is one line at its definition and status 1."""
    spoil(tree)
    run = verify(tree)
    assert (run.returncode, run.stderr) == (1, "")
    finding, counts = run.stdout.splitlines()
    assert finding.startswith("src/battery.c:1:20: error: ")
    assert finding.endswith("[full-scale]")
    assert counts.startswith("1 channel: 0 verified, 1 mismatched, 0 untraced; 1 error,")


def test_the_mend_of_the_report_mends(tree: Path) -> None:
    """The edit that the report proposes, applied, makes the tree sound."""
    spoil(tree)
    [finding] = json.loads(verify(tree, "--json", "-").stdout)["findings"]
    edit = finding["replacement"]
    path = tree / edit["file"]
    lines = path.read_text().splitlines(keepends=True)
    line = lines[edit["line"] - 1]
    lines[edit["line"] - 1] = (
        line[: edit["column"] - 1] + edit["text"] + line[edit["end_column"] - 1 :]
    )
    path.write_text("".join(lines))
    assert verify(tree).returncode == 0


def test_the_json_report(tree: Path) -> None:
    """The report fits its schema, has no absolute path, and is the same every time."""
    spoil(tree)
    texts = {verify(tree, "--json", "-").stdout for _ in range(2)}
    assert len(texts) == 1
    text = texts.pop()
    report = json.loads(text)
    jsonschema.Draft202012Validator(SCHEMA).validate(report)
    assert str(tree) not in text
    [channel] = report["channels"]
    assert channel["hardware"]["gain"] == pytest.approx(5 * 3.7 / 1024)
    assert channel["firmware"]["gain"] == pytest.approx(5 * 3.7 / 1000, rel=1e-3)
    assert channel["worst_error"]["value"] == pytest.approx(0.383, abs=0.002)
    assert report["board"]["file"] == "board.toml"


def test_json_beside_lines(tree: Path) -> None:
    """With a report in a file, standard output still has the lines."""
    run = verify(tree, "--json", "out.json")
    assert run.stdout.startswith("1 channel: 1 verified")
    assert json.loads((tree / "out.json").read_text())["counts"]["verified"] == 1


@pytest.mark.parametrize(
    ("gate", "status"), [("note", 1), ("warning", 1), ("error", 1), ("never", 0)]
)
def test_gate(tree: Path, inside: Inside, gate: str, status: int) -> None:
    """The gate decides the status, not what is reported."""
    spoil(tree)
    run = inside.verify("--gate", gate)
    assert run.returncode == status
    assert len(run.stdout.splitlines()) == 2


def test_an_untraced_channel_is_never_fine(tree: Path) -> None:
    """A channel that is not found is a warning and closes the gate."""
    (tree / "src" / "battery.c").write_text("int x;\n")
    run = verify(tree)
    assert run.returncode == 1
    assert re.search(r"^board\.toml:16:\d+: warning: .*\[untraced\]$", run.stdout, re.MULTILINE)
    assert "1 untraced" in run.stdout


def test_a_source_on_the_command_line(tree: Path) -> None:
    """Sources given replace those of the board file."""
    (tree / "other").mkdir()
    (tree / "other" / "a.c").write_text(SOURCE.replace("1024", "1000"))
    run = verify(tree, "other")
    assert run.stdout.startswith("other/a.c:1:20: error: ")


def test_a_define_on_the_command_line(tree: Path) -> None:
    """A macro of the command line reaches the code."""
    guarded = SOURCE.replace("#define ADC_COUNTS 1024", "")
    (tree / "src" / "battery.c").write_text(guarded)
    assert verify(tree, "-DADC_COUNTS=1024").returncode == 0
    assert verify(tree, "-DADC_COUNTS=1000").returncode == 1


BAD_BOARDS = {
    "missing": (None, "board.toml"),
    "empty": ("", "board.toml"),
    "not TOML": ("[board\nname = 1\n", "board.toml:1"),
    "unknown key": (BOARD.replace("bits = 10", "bitz = 10"), "bits"),
    "wrong unit": (BOARD.replace('"5 V"', '"5 ohm"'), "board.toml:9"),
    "binary": ("\0\x01\x02\udcff", "board.toml"),
}


@pytest.mark.parametrize(("text", "words"), BAD_BOARDS.values(), ids=BAD_BOARDS.keys())
def test_a_bad_board_file(tree: Path, inside: Inside, text: str | None, words: str) -> None:
    """A board file that cannot be used is told on standard error with status 2."""
    board = tree / "board.toml"
    board.unlink()
    if text is not None:
        board.write_bytes(text.encode("utf-8", "surrogateescape"))
    run = inside.verify()
    assert (run.returncode, run.stdout) == (2, "")
    assert words in run.stderr
    assert "Traceback" not in run.stderr
    assert "internal error" not in run.stderr


NO_RUN = {
    "no such channel": (["--channel", "batery"], "battery"),
    "no such variant": (["--variant", "heavy"], "heavy"),
    "no such source": (["nowhere"], "nowhere"),
    "no such folder": (["--json", "none/out.json"], "none"),
    "a folder for a file": (["--json", "src"], "is a folder"),
}


@pytest.mark.parametrize(("arguments", "words"), NO_RUN.values(), ids=NO_RUN.keys())
def test_a_run_that_cannot_be_done(inside: Inside, arguments: list[str], words: str) -> None:
    """What stops a run is one line on standard error, and the status is 2."""
    run = inside.verify(*arguments)
    assert (run.returncode, run.stdout) == (2, "")
    assert words in run.stderr
    assert len(run.stderr.splitlines()) == 1


@pytest.mark.skipif(os.geteuid() == 0, reason="the superuser may read everything")
def test_an_unreadable_board_file(tree: Path) -> None:
    """A board file without permission is told like any other that cannot be read."""
    (tree / "board.toml").chmod(0)
    assert verify(tree).returncode == 2


HOSTILE_NAMES = ["a b.c", "a\nb.c", "a\x1b[2J.c", "[red].c", "a\u202eb.c", b"caf\xe9.c"]


@pytest.mark.parametrize("name", HOSTILE_NAMES)
def test_hostile_file_names(tree: Path, inside: Inside, name: str | bytes) -> None:
    """A file may have any name: it is read, and shown on one printable line."""
    spoil(tree)
    (tree / "src" / "battery.c").rename(tree / "src" / os.fsdecode(name))
    run = inside.verify()
    assert run.returncode == 1
    lines = run.stdout.splitlines()
    assert len(lines) == 2
    assert lines[0].isprintable()
    report = json.loads(inside.verify("--json", "-").stdout)
    jsonschema.Draft202012Validator(SCHEMA).validate(report)


def test_nothing_is_written_beside_the_report(tree: Path) -> None:
    """A run leaves the tree as it was."""
    before = sorted(tree.rglob("*"))
    verify(tree)
    assert sorted(tree.rglob("*")) == before


def test_why() -> None:
    """Every rule can be asked for, and all are listed."""
    run = bitweight("why")
    assert run.returncode == 0
    names = [line.split()[0] for line in run.stdout.splitlines() if line[0] != " "]
    assert {"full-scale", "untraced", "reference-value"} <= set(names)
    assert names == sorted(names)


def test_why_an_unknown_rule() -> None:
    """An unknown rule is status 2 and names the nearest."""
    run = bitweight("why", "full-scal")
    assert (run.returncode, run.stdout) == (2, "")
    assert "did you mean full-scale" in run.stderr
