"""The JSON report, version 1. Its schema is `report.schema.json` beside this module.

An outcome goes in, text comes out: same facts, same bytes. Numbers are shortest decimals that read
back as the same double; what is no number is null.
"""

import json
import math
from fractions import Fraction
from typing import Any

from bitweight.board.hardware import Board
from bitweight.judge.cases import Case, Judgement
from bitweight.judge.findings import Finding, Replacement
from bitweight.judge.outcomes import Outcome
from bitweight.report.sides import hardware_side, result_unit_text
from bitweight.version import VERSION

FORMAT = 1
"""Version of the layout; it changes when a reader of the old one would go wrong."""

Record = dict[str, Any]


def json_report(outcome: Outcome) -> str:
    """The report as JSON text, ASCII only, with a newline at its end."""
    return json.dumps(_plain(record(outcome)), indent=2, allow_nan=False) + "\n"


def record(outcome: Outcome) -> Record:
    """The report as plain data; numbers may still be nan or infinite."""
    board = outcome.facts.board
    variant = {} if board.variant is None else {"variant": board.variant}
    return {
        "format": FORMAT,
        "program": {"name": "bitweight", "version": VERSION},
        "board": _board(board),
        "channels": [_channel(case, outcome) | variant for case in outcome.facts.cases],
        "findings": [_finding(finding) | variant for finding in outcome.findings],
        "counts": {
            name: outcome.counts[name]
            for name in ("error", "warning", "note", "verified", "mismatched", "untraced")
        },
    }


def _board(board: Board) -> Record:
    return {"name": board.name, "revision": board.revision, "file": board.file}


def _channel(case: Case, outcome: Outcome) -> Record:
    name, judgement = case.channel.name, case.judgement
    return {
        "name": name,
        "status": outcome.statuses[name].value,
        "unit": case.channel.unit.text,
        "reason": outcome.reasons.get(name),
        "hardware": _hardware(case),
        "firmware": _firmware(case),
        "worst_error": None if judgement is None else _worst(judgement),
        "allowed_error": None if judgement is None else _allowed(judgement),
        "points": [] if judgement is None else _points(judgement),
        **({"code_step": judgement.stride} if judgement and judgement.stride > 1 else {}),
    }


def _hardware(case: Case) -> Record:
    converter, side = case.channel.converter, hardware_side(case)
    return {
        "gain": side.gain,
        "offset": side.offset,
        "full_scale_count": converter.full_scale,
        "reference_volts": float(converter.reference.voltage.value),
    }


def _firmware(case: Case) -> Record:
    """What the code does; all null where the channel was not traced."""
    judgement = case.judgement
    if judgement is None:
        names = ("gain", "offset", "formula", "file", "line", "result", "unit", "unit_from")
        return dict.fromkeys(names)
    conversion = judgement.conversion
    return {
        "gain": judgement.firmware.gain,
        "offset": judgement.firmware.offset,
        "formula": conversion.formula,
        "file": conversion.place.file,
        "line": conversion.place.line,
        "result": conversion.result,
        "unit": result_unit_text(case.channel, judgement),
        "unit_from": judgement.unit_from,
    }


def _worst(judgement: Judgement) -> Record:
    index, span = judgement.worst_index, float(judgement.ideal.span)
    value = float(judgement.error[index])
    return {
        "value": value,
        "unit": judgement.ideal.channel.unit.text,
        "percent_of_span": 100 * value / span if span else None,
        "at_count": int(judgement.codes[index]),
    }


def _allowed(judgement: Judgement) -> Record:
    return {
        "value": float(judgement.allowed[judgement.worst_index]),
        "unit": judgement.ideal.channel.unit.text,
        "from": judgement.allowed_from,
    }


def _points(judgement: Judgement) -> list[Record]:
    return [
        {
            "at_count": int(point.at_count),
            "hardware": float(point.hardware),
            "firmware": float(point.firmware),
        }
        for point in judgement.points
    ]


def _finding(finding: Finding) -> Record:
    return {
        "rule": finding.rule,
        "level": finding.level.value,
        "channel": finding.channel,
        "channels": list(finding.channels),
        "message": finding.message,
        "file": finding.place.file,
        "line": finding.place.line,
        "column": finding.place.column,
        "found": finding.found,
        "expected": finding.expected,
        "related": [
            {"file": one.place.file, "line": one.place.line, "message": one.message}
            for one in finding.related
        ],
        "replacement": None if finding.replacement is None else _edit(finding.replacement),
        "state": finding.state,
        "deviation": finding.deviation,
    }


def _edit(replacement: Replacement) -> Record:
    return {
        "file": replacement.place.file,
        "line": replacement.place.line,
        "column": replacement.place.column,
        "end_column": replacement.end_column,
        "text": replacement.text,
    }


def _plain(value: Any) -> Any:
    """The data as JSON can hold it: no nan, no infinity, no half of a surrogate pair."""
    match value:
        case dict():
            return {key: _plain(item) for key, item in value.items()}
        case list():
            return [_plain(item) for item in value]
        case Fraction():
            return int(value) if value.denominator == 1 else float(value)
        case float():
            return float(value) if math.isfinite(value) else None
        case str():
            # Names that are no UTF-8 come as lone surrogates, which strict readers refuse.
            return value.encode("utf-8", "backslashreplace").decode("utf-8")
        case _:
            return value
