"""`bitweight verify`: outputs and exit status."""

import io
import json
import sys
from dataclasses import replace
from datetime import date
from pathlib import Path

import pytest

from bitweight.command import verify as command
from bitweight.command.options import VerifyOptions, parse_options
from bitweight.errors import UsageError
from bitweight.judge.findings import Level
from bitweight.judge.outcomes import Outcome
from bitweight.report.lines import plain_report
from bitweight.report.records import json_report
from bitweight.requests import Request
from report import samples


class Pipeline:
    """Stands in for the pipeline and remembers what it was asked."""

    def __init__(self, outcome: Outcome) -> None:
        self.outcome = outcome
        self.asked: list[Request] = []

    def __call__(self, request: Request, report: object) -> Outcome:
        self.asked.append(request)
        return self.outcome


@pytest.fixture
def pipeline(monkeypatch: pytest.MonkeyPatch) -> Pipeline:
    """A pipeline that yields the sample."""
    given = Pipeline(samples.outcome())
    monkeypatch.setattr(command, "verify", given)
    return given


def run(*arguments: str) -> int:
    """The exit status of a `verify` line."""
    options = parse_options(["verify", "--board", "b.toml", *arguments])
    assert isinstance(options, VerifyOptions)
    return command.run_verify(options)


def test_a_pipe_gets_lines(pipeline: Pipeline, capsys: pytest.CaptureFixture[str]) -> None:
    """Where standard output is no terminal, findings are lines; standard error stays empty."""
    assert run() == 1
    captured = capsys.readouterr()
    assert captured.out == plain_report(pipeline.outcome)
    assert captured.err == ""


def test_a_terminal_gets_sheets(pipeline: Pipeline, monkeypatch: pytest.MonkeyPatch) -> None:
    """A terminal gets the sheets, unless lines are asked for."""

    class Terminal(io.StringIO):
        def isatty(self) -> bool:
            return True

    for arguments, start in (((), "Trout hatchery monitor"), (("--plain",), "hatchery/src/adc")):
        stream = Terminal()
        monkeypatch.setattr(sys, "stdout", stream)
        monkeypatch.setenv("NO_COLOR", "1")
        monkeypatch.setenv("TERM", "dumb")
        run(*arguments)
        assert stream.getvalue().startswith(start)


def test_json_on_standard_output_stands_alone(
    pipeline: Pipeline, capsys: pytest.CaptureFixture[str]
) -> None:
    """With `--json -` standard output holds the report and nothing else."""
    assert run("--json", "-") == 1
    assert capsys.readouterr().out == json_report(pipeline.outcome)


def test_json_in_a_file(
    pipeline: Pipeline, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """A report in a file leaves standard output as it is."""
    assert run("--json", str(tmp_path / "r.json")) == 1
    assert json.loads((tmp_path / "r.json").read_text())["format"] == 1
    assert capsys.readouterr().out == plain_report(pipeline.outcome)


def test_a_bad_target_is_told_before_the_work(pipeline: Pipeline, tmp_path: Path) -> None:
    """A report that could not be written stops the run before it starts."""
    with pytest.raises(UsageError, match="does not exist"):
        run("--json", str(tmp_path / "none" / "r.json"))
    assert pipeline.asked == []


def test_problems_go_to_standard_error(
    pipeline: Pipeline, capsys: pytest.CaptureFixture[str]
) -> None:
    """Remarks on the sources are lines on standard error, escaped."""
    pipeline.outcome = replace(pipeline.outcome, problems=("a\x1b.c: skipped", "b.c: skipped"))
    run()
    assert capsys.readouterr().err == "a\\x1b.c: skipped\nb.c: skipped\n"


def test_the_request(pipeline: Pipeline) -> None:
    """Everything asked on the command line reaches the pipeline."""
    run("src", "-DA=1", "-Iinc", "--variant", "v", "--channel", "c", "--today", "2027-01-02")
    assert pipeline.asked == [
        Request(
            board="b.toml",
            sources=("src",),
            defines=("A=1",),
            includes=("inc",),
            variant="v",
            channel="c",
            today=date(2027, 1, 2),
        )
    ]


GATES = [
    (Level.NOTE, {"note": 1, "warning": 0, "error": 0, "never": 0}),
    (Level.WARNING, {"note": 1, "warning": 1, "error": 0, "never": 0}),
    (Level.ERROR, {"note": 1, "warning": 1, "error": 1, "never": 0}),
]


@pytest.mark.parametrize(
    ("level", "gate", "status"),
    [(level, gate, status) for level, row in GATES for gate, status in row.items()],
)
def test_gate(level: Level, gate: str, status: int) -> None:
    """The status is 1 where a finding stands at or above the gate."""
    outcome = replace(samples.outcome(), findings=(samples.finding(level=level),))
    assert command.exit_status(outcome, gate) == status


def test_accepted_deviations_do_not_count() -> None:
    """An accepted finding does not close the gate, nor do no findings at all."""
    accepted = samples.finding(level=Level.ERROR, deviation="trimmed in production")
    for findings in ((accepted,), ()):
        assert command.exit_status(replace(samples.outcome(), findings=findings), "note") == 0
