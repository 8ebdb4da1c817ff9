"""The top of the screen."""

from dataclasses import replace

import pytest

from bitweight.judge.outcomes import Outcome
from bitweight.report.drawings import Ink
from bitweight.report.overviews import elsewhere, numbered, overview
from report import samples


def lines(outcome: Outcome, width: int = 80) -> list[str]:
    """The overview as text."""
    return [line.plain.rstrip() for line in overview(outcome, numbered(outcome), width, Ink.PLAIN)]


def test_one_line_a_channel() -> None:
    """Each channel has its mark, status, worst error, what is allowed and its findings."""
    assert lines(samples.outcome()) == [
        "Trout hatchery monitor, revision C",
        "hatchery/board.toml",
        "-" * 80,
        "  channel  status      worst error  allowed     findings",
        "  depth    verified    0 m          5 mm        -",
        "x battery  mismatched  -304 mV      100 mV      error 1, warning 2",
        "? flow     untraced    -            -           warning 3",
    ]


def test_a_narrow_sheet() -> None:
    """A narrow terminal loses the column of what is allowed, and nothing else."""
    assert (
        lines(samples.outcome(), 60)[-2] == "x battery  mismatched  -304 mV      error 1, warning 2"
    )


def test_many_findings_wrap() -> None:
    """Numbers of findings go on below each other where they are many."""
    outcome = samples.outcome(*(samples.finding() for _ in range(30)))
    shown = " ".join(" ".join(lines(outcome)).split())
    assert f"warning {' '.join(map(str, range(2, 33)))} ? flow" in shown


def test_findings_of_no_channel() -> None:
    """What touches none of the channels is announced too."""
    lost = samples.finding("deviation", channels=())
    outcome = samples.outcome(lost, replace(lost, deviation="known"))
    assert elsewhere(outcome) == (3, 4)
    assert lines(outcome)[-1] == "  elsewhere   warning 4, accepted 5"


@pytest.mark.parametrize("name", ["n" * 70, "水" * 30])
def test_a_long_name_has_its_own_line(name: str) -> None:
    """A name too long for its column does not push its status away."""
    shown = lines(samples.with_names(samples.outcome(), name))
    assert any(line.startswith("x " + name) for line in shown)
    assert any(line.split()[:2] == ["x", "mismatched"] for line in shown)


def test_numbers() -> None:
    """Findings are numbered channel by channel in the order of the board, the worst first."""
    assert numbered(samples.outcome()) == {1: 1, 0: 2, 2: 3}
