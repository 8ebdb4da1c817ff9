"""Every case of the corpus: complete, and its run as expected."""

import json
import re
from collections import Counter

import msgspec
import pytest

from corpus.agreement import contradictions
from corpus.cases import KINDS, ROOT, CorpusCase, Expectation, ExpectedChannel, cases
from corpus.renew import main
from corpus.runs import CaseRun, run_case, stable

FEWEST = {"demo": 2, "hostile": 12, "seeded": 40, "sound": 30, "styles": 15}
"""Cases of each kind that there are at least."""

WITHOUT_BOARD = ("hostile/board-missing",)
"""Cases that are about a board file that is not there."""

ALLOWED_NAMES = {"src", "inc", "board.toml", "expect.toml", "expected.json", "note.md"}


@pytest.fixture(scope="module", params=cases(), ids=str)
def case(request: pytest.FixtureRequest) -> CorpusCase:
    """Each case in turn."""
    chosen: CorpusCase = request.param
    return chosen


@pytest.fixture(scope="module")
def run(case: CorpusCase) -> CaseRun:
    """The case, run once for all tests of this module."""
    return run_case(case.folder)


def test_kinds() -> None:
    """The corpus holds the five kinds and enough cases of each."""
    folders = sorted(one.name for one in ROOT.iterdir() if one.is_dir())
    assert folders == sorted(KINDS)
    count = Counter(case.kind for case in cases())
    assert {kind: n for kind, n in FEWEST.items() if count[kind] < n} == {}


def test_table_of_cases() -> None:
    """The corpus's README lists every case of every kind with the title of its note."""
    text = (ROOT / "README.md").read_text("utf-8")
    listed = [
        f"{kind}/{line}"
        for kind, block in re.findall(r"^### (\w+)\n(.*?)(?=^#|\Z)", text, re.M | re.S)
        for line in re.findall(r"^- `(.*)$", block, re.M)
    ]
    assert sorted(listed) == sorted(f"{case}`: {case.title}" for case in cases())


def test_a_case_is_complete(case: CorpusCase) -> None:
    """A case has sources, a board file, a note, an expectation, and nothing else."""
    names = {one.name for one in case.folder.iterdir()}
    needed = ALLOWED_NAMES - {"inc"} - ({"board.toml"} if str(case) in WITHOUT_BOARD else set())
    assert names - ALLOWED_NAMES == set()
    assert needed - names == set()
    heading, _, rest = (case.folder / "note.md").read_text("utf-8").partition("\n")
    assert heading.startswith("# ")
    assert len(rest.split()) >= 5


def test_agreement_with_the_calculation(case: CorpusCase, run: CaseRun) -> None:
    """The run is what was worked out by hand."""
    assert contradictions(case.expectation(), run) == []


def test_agreement_with_the_record(case: CorpusCase, run: CaseRun) -> None:
    """The stable part of the report is the recorded one."""
    assert stable(run) == json.loads(case.expected_file.read_text("utf-8"))


@pytest.mark.parametrize("case", cases("sound", "styles"), ids=str, indirect=True)
def test_innocent_code_is_silent(case: CorpusCase, run: CaseRun) -> None:
    """Right code gives exit status 0 and not a single finding, however it is written."""
    assert (run.exit, run.findings) == (0, [])


@pytest.mark.parametrize("case", cases("demo")[:1], ids=str, indirect=True)
def test_the_clean_twin_is_silent(case: CorpusCase, run: CaseRun) -> None:
    """The demo board without its faults gives exit status 0 and not a single finding."""
    assert case.folder.name == "clean"
    assert (run.exit, run.findings) == (0, [])


def test_the_twins_differ_by_their_faults_alone() -> None:
    """The two demo trees have the same files and the same board file."""
    clean, faulty = (case.folder for case in cases("demo"))
    names = sorted(one.relative_to(clean) for one in clean.rglob("src/**/*.[ch]"))
    assert names == sorted(one.relative_to(faulty) for one in faulty.rglob("src/**/*.[ch]"))
    assert (clean / "board.toml").read_bytes() == (faulty / "board.toml").read_bytes()


def _run(*, gain: float | None = 0.5, **finding: object) -> CaseRun:
    given = {
        "rule": "full-scale",
        "level": "warning",
        "file": "src/a.h",
        "line": 3,
        "found": "1023",
        "expected": "1.024e3 counts",
        "channels": ["b", "a"],
        "message": "",
    }
    channel = {"name": "a", "status": "verified", "reason": None, "firmware": {"gain": gain}}
    return CaseRun(
        exit=1,
        problems=(),
        report={"channels": [channel], "findings": [given | finding]},
    )


EXPECTED = msgspec.convert(
    {
        "exit": 1,
        "channel": {"a": {"status": "verified", "gain": 0.50004}},
        "finding": [
            {
                "rule": "full-scale",
                "level": "warning",
                "file": "src/a.h",
                "line": 3,
                "found": "1023",
                "expected": "1024",
                "channels": ["a", "b"],
            }
        ],
    },
    Expectation,
)


def test_agreement_is_seen() -> None:
    """Numbers are compared as numbers, channels in any order, gains within 0.01 %."""
    assert contradictions(EXPECTED, _run()) == []


@pytest.mark.parametrize(
    "changed",
    [
        {"rule": "resolution"},
        {"level": "error"},
        {"file": "src/b.h"},
        {"line": 4},
        {"found": "10230"},
        {"expected": "about 1024"},
        {"channels": ["a"]},
    ],
    ids=lambda changed: next(iter(changed)),
)
def test_another_finding_is_seen(changed: dict[str, object]) -> None:
    """A finding that differs in one field is both missing and unexpected."""
    said = contradictions(EXPECTED, _run(**changed))
    assert [one.partition(":")[0] for one in said] == ["missing", "not expected"]


@pytest.mark.parametrize("gain", [None, 0.49998, 0.5001])
def test_another_gain_is_seen(gain: float | None) -> None:
    """A gain that is off by more than 0.01 %, or absent, is a contradiction."""
    said = contradictions(EXPECTED, _run(gain=gain))
    assert [one.partition(" has")[0] for one in said] == ["a"]


def test_an_open_list_takes_notes_alone() -> None:
    """An open expectation admits further notes and nothing that counts."""
    wanted = Expectation(exit=1, open=True, channel={"a": ExpectedChannel(status="verified")})
    assert contradictions(wanted, _run(level="note")) == []
    assert len(contradictions(wanted, _run(level="warning"))) == 1


def test_wrong_mistake_lines_are_seen() -> None:
    """Every line of the board file that is, or is not, reported counts."""
    run = CaseRun(exit=2, report=None, problems=(), mistakes=({"line": 4},))
    assert contradictions(Expectation(exit=2, mistake_lines=(4,)), run) == []
    assert len(contradictions(Expectation(exit=2, mistake_lines=(4, 5)), run)) == 1


def test_renewing_an_unknown_case(capsys: pytest.CaptureFixture[str]) -> None:
    """A name that is no case is refused before anything is written."""
    assert main(["seeded/no-such-case"]) == 2
    assert capsys.readouterr().err == "seeded/no-such-case: no such case\n"
