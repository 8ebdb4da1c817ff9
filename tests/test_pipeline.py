"""A whole run, from a request to its outcome."""

from datetime import date
from pathlib import Path

import pytest

from bitweight.errors import BoardError, SourceError, UsageError
from bitweight.judge.cases import Status
from bitweight.judge.outcomes import Outcome
from bitweight.pipeline import verify
from bitweight.requests import Request

BOARD = """\
[reference.vref]
voltage = "3 V"
[converter.adc]
bits = 12
[channel.rail]
unit = "V"
[channel.rail.firmware]
reading = "adc_read(1)"
value = "rail_mv"
unit = "1 mV"
[channel.spare]
unit = "V"
[channel.spare.firmware]
reading = "adc_read(2)"
value = "spare_mv"
unit = "1 mV"
"""

SOURCE = """\
extern unsigned adc_read(int input);
unsigned rail_mv, spare_mv;
void poll(void)
{
    rail_mv = adc_read(1) * 3000UL / COUNTS;
    spare_mv = adc_read(2) * 3000UL / 4096;
}
"""

DEVIATION = """\
[[deviation]]
rule = "full-scale"
where = "rail"
reason = "agreed"
until = 2026-07-01
"""


@pytest.fixture(autouse=True)
def _tree(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "src").mkdir()
    (tmp_path / "src" / "poll.c").write_text(SOURCE)
    (tmp_path / "board.toml").write_text(BOARD)
    monkeypatch.chdir(tmp_path)


def _run(**changes: object) -> Outcome:
    given: dict[str, object] = {
        "board": "board.toml",
        "sources": ("src",),
        "defines": ("COUNTS=4096",),
    }
    return verify(Request(**(given | changes)), lambda stage, done, total: None)  # type: ignore[arg-type]


def _rules(outcome: Outcome) -> list[str]:
    return [one.rule for one in outcome.findings]


def test_agreement() -> None:
    """Where both sides agree, all channels are verified and nothing is found."""
    outcome = _run()
    assert set(outcome.statuses.values()) == {Status.VERIFIED}
    assert outcome.findings == ()
    assert outcome.counts["verified"] == 2


def test_a_macro_from_the_request() -> None:
    """A definition of the request is in force, and the line of its finding can be shown."""
    outcome = _run(defines=("COUNTS=4095",))
    assert _rules(outcome) == ["full-scale"]
    assert outcome.statuses["rail"] is Status.MISMATCHED
    assert outcome.statuses["spare"] is Status.VERIFIED
    assert ("src/poll.c", 5) in outcome.source_lines


def test_one_channel_alone() -> None:
    """A channel that is asked for is judged alone."""
    outcome = _run(channel="spare", defines=("COUNTS=4095",))
    assert list(outcome.statuses) == ["spare"]
    assert outcome.findings == ()


def test_a_channel_that_does_not_exist() -> None:
    """A name that is not in the board file is refused with the nearest one."""
    with pytest.raises(UsageError, match="no channel 'rial', did you mean 'rail'"):
        _run(channel="rial")


def test_a_family_that_does_not_exist() -> None:
    """A family that no data file describes is refused with those that are known."""
    Path("board.toml").write_text('[target]\nfamily = "nowhere-99"\n' + BOARD)
    with pytest.raises(BoardError, match=r":2:10: error: no family 'nowhere-99' is known"):
        _run()


def test_an_include_folder_that_does_not_exist() -> None:
    """A folder for headers that is not there is refused before anything is read."""
    with pytest.raises(UsageError, match="-I nowhere: no such folder"):
        _run(includes=("nowhere",))


def test_a_source_with_another_ending() -> None:
    """A file that is named is read whatever its name, and the run says so."""
    Path("src/poll.c").rename("src/poll.inc")
    outcome = _run(sources=("src/poll.inc",))
    assert outcome.counts["verified"] == 2
    assert outcome.problems == (
        "src/poll.inc: note: read as C, although its name ends neither in .c nor in .h",
    )


def test_everything_missing_is_said_at_once() -> None:
    """Paths, families and rules that do not exist are reported in one run, in order."""
    head = '[board]\ninclude = "no"\n[target]\nfamily = "no"\n'
    Path("board.toml").write_text(head + BOARD + DEVIATION.replace("full-scale", "fullscale"))
    with pytest.raises(BoardError) as caught:
        _run()
    assert [one.place.line for one in caught.value.mistakes] == [2, 4, 22]


@pytest.mark.parametrize(
    ("day", "accepted"), [(date(2026, 7, 1), ["agreed"]), (date(2026, 7, 2), [None, None])]
)
def test_the_day_of_the_request(day: date, accepted: list[str | None]) -> None:
    """A deviation holds up to its last day; then the finding counts, and so does the deviation."""
    Path("board.toml").write_text(BOARD + DEVIATION)
    outcome = _run(today=day, defines=("COUNTS=4095",))
    assert [one.deviation for one in outcome.findings] == accepted
    assert outcome.counts["warning"] == accepted.count(None)


def test_sources_of_the_board_file() -> None:
    """Without sources those of the board file are read, relative to it; without any, nothing is."""
    with pytest.raises(SourceError, match="no source is given"):
        _run(sources=())
    Path("board.toml").write_text('[board]\nfirmware = ["src"]\n' + BOARD)
    assert _rules(_run(sources=())) == []


def test_mistakes_of_the_board_file() -> None:
    """A wrong board file is refused with all its mistakes before any source is read."""
    Path("board.toml").write_text(BOARD.replace("12", "0").replace('"3 V"', '"3 A"'))
    with pytest.raises(BoardError) as caught:
        _run(sources=("nowhere",))
    assert [one.place.line for one in caught.value.mistakes] == [2, 4]


def test_progress_is_told() -> None:
    """Each stage names itself; counted ones say how much there is and reach it."""
    told: list[tuple[str, int, int]] = []
    request = Request(board="board.toml", sources=("src",), defines=("COUNTS=4096",))
    verify(request, lambda *stage: told.append(stage))
    assert told[0][0] == "reading sources"
    assert told[-1] == ("judging", 2, 2)


def test_the_same_bytes_for_the_same_input() -> None:
    """Two runs of one request find the same in the same order."""
    first, second = (_run(defines=("COUNTS=1000",)) for _ in range(2))
    assert first.findings == second.findings
