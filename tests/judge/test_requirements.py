"""Names of the board file that stand for something outside it."""

from pathlib import Path

import pytest

from bitweight.board.decoding.boards import board_from_text
from bitweight.judge.requirements import unused_keys, wrong_names
from bitweight.trace.families import load_families

BOARD = """\
[reference.vref]
voltage = "3 V"
[channel.rail]
[converter.adc]
bits = 12
"""


def _wrong(text: str, folder: Path, *, sources_given: bool = False) -> list[tuple[int, str]]:
    board = board_from_text(BOARD + text, file="board.toml")
    found = wrong_names(
        board,
        folder,
        sources_given=sources_given,
        families=load_families(),
        rules=("full-scale", "overflow"),
    )
    return [(one.place.line, one.message) for one in found]


@pytest.mark.parametrize(
    ("text", "line", "message"),
    [
        ('[board]\nfirmware = "no"\n', 7, "firmware: no such file or folder: 'no'"),
        ('[board]\ninclude = ["no"]\n', 7, "include: no such file or folder: 'no'"),
        (f'[board]\ninclude = "{"x" * 5000}"\n', 7, "include: no such file or folder: 'xxx"),
        ('[board]\ninclude = "a\\u0000b"\n', 7, "include: no such file or folder: 'a"),
        ('[board]\ninclude = "file"\n', 7, "include: expected a folder, found the file 'file'"),
        ('[board]\nbuild = "no.json"\n', 7, "build: no such file or folder: 'no.json'"),
        ('[target]\nfamilies = ["no"]\n', 7, "families: no such file or folder: 'no'"),
        ('family = "nowhere"\n', 6, "no family 'nowhere' is known; known: "),
        ('[target]\nfamily = "avr-clasic"\n', 7, "no family 'avr-clasic' is known, did you mean"),
        (
            '[[deviation]]\nrule = "fullscale"\nwhere = "rail"\n',
            7,
            "no rule 'fullscale' exists, did you mean 'full-scale'?",
        ),
    ],
)
def test_a_name_that_stands_for_nothing(text: str, line: int, message: str, tmp_path: Path) -> None:
    """It is a mistake at the value of its key."""
    (tmp_path / "file").write_text("")
    ((found_line, found),) = _wrong(text, tmp_path)
    assert found_line == line
    assert found.startswith(message)


@pytest.mark.parametrize(
    "text",
    [
        '[board]\ninclude = "inc"\nfirmware = ["file", "inc"]\nbuild = "file"\n',
        '[target]\nfamily = "avr-classic"\n',
        '[[deviation]]\nrule = "house-rule"\nwhere = "rail"\n',
    ],
)
def test_a_name_that_exists(text: str, tmp_path: Path) -> None:
    """It is no mistake, nor is a rule like no other, which a plug-in may bring."""
    (tmp_path / "file").write_text("")
    (tmp_path / "inc").mkdir()
    assert _wrong(text, tmp_path) == []


def test_firmware_is_not_needed_beside_sources(tmp_path: Path) -> None:
    """Where the command line names the sources, those of the board file are not looked at."""
    assert _wrong('[board]\nfirmware = "no"\n', tmp_path, sources_given=True) == []


def test_what_nothing_reads_yet_is_said() -> None:
    """A key that changes nothing gives a line with its place."""
    text = '[board]\nbuild = "x"\ninclude = "y"\n[target]\nfamilies = "z"\n'
    build, families = unused_keys(board_from_text(BOARD + text, file="board.toml"))
    assert build.startswith("board.toml:7:9: note: build is not read yet")
    assert families.startswith("board.toml:10:12: note: families are not read yet")
