"""What a finding proposes: applied to the sources, it makes the finding go."""

import shutil
from collections.abc import Iterable
from pathlib import Path

import pytest

from bitweight.places import LineIndex
from corpus.cases import CorpusCase, cases
from corpus.runs import CaseRun, Record, run_case

ORDER = "the operations must change their order, over more than one place"
DECODING = "the code must be decoded first, which takes a statement or a cast of its own"
TYPE = "the type is right to change, and with it every declaration and use of the object"
WIRING = "the fault may as well lie in the board: a person decides which side changes"

WITHOUT_REPLACEMENT = {
    "demo/faulty": {
        "early-division": ORDER,
        "narrowing": TYPE,
        "overflow": TYPE,
        "sign": DECODING,
    },
    "seeded/clamp-inside-the-range": {"narrowing": "what the clamp is for, only its author knows"},
    "seeded/conflicting-constant": {"conflicting-constant": "which value is meant is not known"},
    "seeded/count-of-1023-shifted": {"full-scale": "no shift divides by 1023"},
    "seeded/curve-where-the-chain-is-straight": {
        "transfer-curve": "no constant makes a straight line of it"
    },
    "seeded/deviation-matches-nothing": {"deviation": "the comment is the author's to withdraw"},
    "seeded/divided-first": {"early-division": ORDER},
    "seeded/divider-in-integers": {"early-division": ORDER},
    "seeded/input-of-another-channel": {"channel-map": WIRING},
    "seeded/input-past-the-range": {"input-range": WIRING},
    "seeded/narrow-result": {"narrowing": TYPE},
    "seeded/offset-binary-missed": {"sign": DECODING},
    "seeded/offset-forgotten": {"transfer-offset": "there is no constant that could be changed"},
    "seeded/reference-wiring": {"reference-wiring": WIRING},
    "seeded/sign-not-extended": {"sign": DECODING},
    "seeded/two-bits-dropped-tolerated": {"early-division": ORDER},
    "seeded/untraced-gain-from-flash": {"untraced": "the value is not in the sources"},
    "seeded/untraced-no-such-reading": {"untraced": "there is no code to change"},
    "seeded/volts-before-scaling": {"early-division": ORDER},
}
"""Rules that propose no edit at a case, and why."""

FAULTY = [CorpusCase(one.folder) for one in cases("demo", "seeded") if one.folder.name != "clean"]

Key = tuple[str, str, int]


@pytest.fixture(scope="module", params=FAULTY, ids=str)
def case(request: pytest.FixtureRequest) -> CorpusCase:
    """Each case with faults in turn."""
    chosen: CorpusCase = request.param
    return chosen


@pytest.fixture(scope="module")
def run(case: CorpusCase) -> CaseRun:
    """The case as it stands."""
    return run_case(case.folder)


def test_every_finding_proposes_an_edit(case: CorpusCase, run: CaseRun) -> None:
    """A finding carries a replacement, unless it is listed here with the reason."""
    without = {one["rule"] for one in run.findings if one["replacement"] is None}
    assert without == WITHOUT_REPLACEMENT.get(str(case), {}).keys()


def test_listed_cases_exist() -> None:
    """The list of findings without an edit names no case that is gone."""
    assert WITHOUT_REPLACEMENT.keys() - {str(one) for one in FAULTY} == set()


def test_each_edit_makes_its_finding_go(case: CorpusCase, run: CaseRun, tmp_path: Path) -> None:
    """One replacement applied: its finding is gone and no other has come."""
    for number, finding in enumerate(_to_mend(run)):
        after = _mended(case, [finding], tmp_path / str(number))
        assert _key(finding) not in keys(after), finding["message"]
        assert keys(after) - keys(run) == set(), finding["message"]


def test_all_edits_together_leave_nothing(case: CorpusCase, run: CaseRun, tmp_path: Path) -> None:
    """All replacements applied: only what proposes no edit is left; without such, exit status 0."""
    mended = _to_mend(run)
    after = _mended(case, mended, tmp_path)
    left = keys(run) - {_key(one) for one in mended}
    assert keys(after) == left
    assert after.exit == 0 or left


def keys(run: CaseRun) -> set[Key]:
    """What identifies the findings of a run."""
    return {_key(one) for one in run.findings}


def _key(finding: Record) -> Key:
    return finding["rule"], finding["file"], finding["line"]


def _to_mend(run: CaseRun) -> list[Record]:
    """The findings with an edit; one that the author accepted stays as it is."""
    return [
        one for one in run.findings if one["replacement"] is not None and one["deviation"] is None
    ]


def _mended(case: CorpusCase, findings: Iterable[Record], folder: Path) -> CaseRun:
    copy = Path(shutil.copytree(case.folder, folder / "case"))
    edits = {_edit_key(one["replacement"]): one["replacement"] for one in findings}
    # From the end, so that an edit moves nothing that another one names.
    for key in sorted(edits, reverse=True):
        _apply(edits[key], copy)
    return run_case(copy)


def _edit_key(edit: Record) -> tuple[str, int, int, int, str]:
    return edit["file"], edit["line"], edit["column"], edit["end_column"], edit["text"]


def _apply(edit: Record, folder: Path) -> None:
    path = folder / edit["file"]
    text = path.read_bytes().decode("utf-8")
    index = LineIndex(text)
    start, end = (index.offset(edit["line"], edit[key]) for key in ("column", "end_column"))
    path.write_bytes((text[:start] + edit["text"] + text[end:]).encode("utf-8"))
