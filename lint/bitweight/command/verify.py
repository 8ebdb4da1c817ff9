"""`bitweight verify`: options to a request, the pipeline, reports, exit status."""

import sys

from bitweight.command.options import STDOUT, VerifyOptions
from bitweight.command.outputs import check_target, complain, say, write_report
from bitweight.command.progress import progress
from bitweight.judge.findings import Level
from bitweight.judge.outcomes import Outcome
from bitweight.pipeline import verify
from bitweight.report.lines import plain_report
from bitweight.report.records import json_report
from bitweight.requests import Request

_NEVER = "never"


def run_verify(options: VerifyOptions) -> int:
    """Runs `verify` and writes its reports; 1 where something stands at or above the gate, else 0.

    Raises the pipeline's errors, and `UsageError` for a report that cannot be written.
    """
    check_target(options.json)
    with progress() as report:
        outcome = verify(_request(options), report)
    for problem in outcome.problems:
        complain(problem)
    if options.json is not None:
        write_report(options.json, json_report(outcome))
    status = exit_status(outcome, options.gate)
    if options.json != STDOUT:
        _show(outcome, plain=options.plain)
    return status


def exit_status(outcome: Outcome, gate: str) -> int:
    """1 if a finding that is not accepted has the level `gate` or a higher one."""
    if gate == _NEVER:
        return 0
    least = Level(gate).weight
    return int(
        any(
            finding.deviation is None and finding.level.weight >= least
            for finding in outcome.findings
        )
    )


def _request(options: VerifyOptions) -> Request:
    return Request(
        board=options.board,
        sources=options.sources,
        defines=options.defines,
        includes=options.includes,
        variant=options.variant,
        channel=options.channel,
        today=options.today,
    )


def _show(outcome: Outcome, *, plain: bool) -> None:
    if plain or sys.stdout is None or not sys.stdout.isatty():
        say(plain_report(outcome))
        return
    from bitweight.command.terminal import show_sheets

    show_sheets(outcome)
