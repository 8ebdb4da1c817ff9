"""A case run in this process, as `bitweight verify src --board board.toml` in its folder."""

import contextlib
import json
import time
from dataclasses import dataclass
from datetime import date
from pathlib import Path
from typing import Any

from bitweight.command.verify import exit_status
from bitweight.errors import BitweightError, BoardError
from bitweight.pipeline import verify
from bitweight.report.records import json_report
from bitweight.requests import Request

DAY = date(2026, 7, 1)
"""The day on which deviations are judged, so that no case changes with the calendar."""

Record = dict[str, Any]


@dataclass(frozen=True, slots=True, kw_only=True)
class CaseRun:
    """What came of a case: a report, or why there is none. `seconds` is processor time."""

    exit: int
    report: Record | None
    problems: tuple[str, ...]
    mistakes: tuple[Record, ...] = ()
    seconds: float = 0.0

    @property
    def findings(self) -> list[Record]:
        """The findings of the report; none without one."""
        return self.report["findings"] if self.report is not None else []


def run_case(folder: Path) -> CaseRun:
    """Runs a case folder; exit status 2 and no report where the program refuses it."""
    started = time.process_time()
    with contextlib.chdir(folder):
        return _run(Request(board="board.toml", sources=("src",), today=DAY), started)


def _run(request: Request, started: float) -> CaseRun:
    try:
        outcome = verify(request, lambda stage, done, total: None)
    except BoardError as error:
        mistakes = tuple(
            {"line": one.place.line, "column": one.place.column, "message": one.message}
            for one in error.mistakes
        )
        return CaseRun(
            exit=2,
            report=None,
            problems=tuple(str(one) for one in error.mistakes),
            mistakes=mistakes,
            seconds=time.process_time() - started,
        )
    except (BitweightError, OSError) as error:
        return CaseRun(
            exit=2,
            report=None,
            problems=(str(error),),
            seconds=time.process_time() - started,
        )
    return CaseRun(
        exit=exit_status(outcome, "warning"),
        report=json.loads(json_report(outcome)),
        problems=outcome.problems,
        seconds=time.process_time() - started,
    )


def stable(run: CaseRun) -> Record:
    """The part of a run that does not change with wording, layout or the last digits."""
    if run.report is None:
        return {"exit": run.exit, "mistakes": [*run.mistakes]}
    return {
        "exit": run.exit,
        "channels": [_channel(one) for one in run.report["channels"]],
        "findings": [_finding(one) for one in run.report["findings"]],
        "counts": run.report["counts"],
    }


def stable_text(run: CaseRun) -> str:
    """The stable part as it stands in `expected.json`."""
    return json.dumps(stable(run), indent=2) + "\n"


def _channel(channel: Record) -> Record:
    return {
        **{key: channel[key] for key in ("name", "status", "unit", "reason")},
        "hardware_gain": _rounded(channel["hardware"]["gain"]),
        "firmware_gain": _rounded(channel["firmware"]["gain"]),
    }


_FINDING = ("rule", "level", "channels", "file", "line", "column", "found", "expected")


def _finding(finding: Record) -> Record:
    kept = {key: finding[key] for key in (*_FINDING, "replacement")}
    # An accepted departure is no part of most cases: named only where there is one.
    return kept | ({} if finding["deviation"] is None else {"deviation": finding["deviation"]})


def _rounded(gain: float | None) -> float | None:
    """Nine significant digits: more than any expectation, less than two processors differ by."""
    return None if gain is None else float(f"{gain:.9g}")
