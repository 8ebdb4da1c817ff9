"""The JSON report against its schema and the contract."""

import json
import math
from dataclasses import replace
from importlib.resources import files
from typing import Any

import jsonschema
import pytest

from bitweight.judge.outcomes import Outcome
from bitweight.places import Place
from bitweight.report.records import json_report
from report import samples

SCHEMA = json.loads(files("bitweight.report").joinpath("report.schema.json").read_text("utf-8"))


def read(outcome: Outcome) -> dict[str, Any]:
    """The report, read back and checked against the schema."""
    report: dict[str, Any] = json.loads(json_report(outcome))
    jsonschema.Draft202012Validator(SCHEMA).validate(report)
    return report


def with_judgement(**changes: object) -> Outcome:
    """The sample with its battery judged otherwise."""
    outcome = samples.outcome()
    cases = list(outcome.facts.cases)
    judged = cases[1].judgement
    assert judged is not None
    cases[1] = replace(cases[1], judgement=replace(judged, **changes))
    return replace(outcome, facts=replace(outcome.facts, cases=tuple(cases)))


def test_the_schema_is_one() -> None:
    """The schema is valid Draft 2020-12."""
    jsonschema.Draft202012Validator.check_schema(SCHEMA)


def test_top_level() -> None:
    """The report names its format, the program, the board, and counts as the outcome does."""
    report = read(samples.outcome())
    assert list(report) == ["format", "program", "board", "channels", "findings", "counts"]
    assert report["format"] == 1
    assert report["board"] == {
        "name": "Trout hatchery monitor",
        "revision": "C",
        "file": "hatchery/board.toml",
    }
    assert report["counts"] == {
        "error": 1,
        "warning": 2,
        "note": 0,
        "verified": 1,
        "mismatched": 1,
        "untraced": 1,
    }


def test_a_judged_channel() -> None:
    """A traced channel has both sides, its worst error, what is allowed and three points."""
    channel = read(samples.outcome())["channels"][1]
    assert (channel["name"], channel["status"], channel["unit"]) == ("battery", "mismatched", "V")
    assert channel["reason"] is None
    assert channel["hardware"] == {
        "gain": 5 * 3.7 / 1024,
        "offset": 0.0,
        "full_scale_count": 1024,
        "reference_volts": 5.0,
    }
    firmware = channel["firmware"]
    assert firmware["gain"] == pytest.approx(4.9 * 3.7 / 1023)
    assert (firmware["file"], firmware["line"]) == ("hatchery/src/battery.c", 12)
    assert (firmware["result"], firmware["unit"]) == ("battery_mv", "1 mV")
    assert firmware["unit_from"] == "board"
    worst = channel["worst_error"]
    assert worst["at_count"] == 885
    assert worst["value"] == pytest.approx(885 * (4.9 * 3.7 / 1023 - 5 * 3.7 / 1024))
    assert worst["percent_of_span"] == pytest.approx(100 * worst["value"] / 16)
    assert channel["allowed_error"] == {"value": 0.1, "unit": "V", "from": "budget"}
    assert [point["at_count"] for point in channel["points"]] == [0, 443, 885]


def test_an_untraced_channel() -> None:
    """What does not apply is null; the board's side and the reason are there."""
    channel = read(samples.outcome())["channels"][2]
    assert channel["status"] == "untraced"
    assert channel["reason"] == "adc_read(7) is not called anywhere"
    assert channel["hardware"]["gain"] == 5 / 1024
    assert set(channel["firmware"].values()) == {None}
    assert channel["worst_error"] is None
    assert channel["allowed_error"] is None
    assert channel["points"] == []


def test_a_finding() -> None:
    """A finding carries its place, its values, where it bites and the edit that mends it."""
    assert read(samples.outcome())["findings"][0] == {
        "rule": "full-scale",
        "level": "warning",
        "channel": "battery",
        "channels": ["battery"],
        "message": "ADC_MAX is 1023, but 1024 counts stand for the reference",
        "file": "hatchery/src/adc_cfg.h",
        "line": 3,
        "column": 18,
        "found": "1023",
        "expected": "1024",
        "related": [{"file": "hatchery/src/battery.c", "line": 12, "message": "used here"}],
        "replacement": {
            "file": "hatchery/src/adc_cfg.h",
            "line": 3,
            "column": 18,
            "end_column": 22,
            "text": "1024",
        },
        "state": None,
        "deviation": None,
    }


def test_a_finding_of_several_channels() -> None:
    """A cause that touches several channels has no single one."""
    report = read(samples.outcome(samples.finding(channels=("battery", "depth"))))
    assert report["findings"][-1]["channel"] is None
    assert report["findings"][-1]["channels"] == ["battery", "depth"]


def test_a_variant_is_named() -> None:
    """With an assembly asked for, channels and findings carry its name."""
    outcome = samples.outcome()
    board = replace(outcome.facts.board, variant="heavy")
    report = read(replace(outcome, facts=replace(outcome.facts, board=board)))
    assert {entry["variant"] for entry in report["channels"] + report["findings"]} == {"heavy"}


def test_what_is_no_number_is_null() -> None:
    """nan and infinity become null, as JSON has neither."""
    outcome = samples.outcome()
    judged = outcome.facts.cases[1].judgement
    assert judged is not None
    error = judged.error.copy()
    error[judged.worst_index] = math.inf
    points = tuple(replace(point, firmware=math.nan) for point in judged.points)
    channel = read(with_judgement(error=error, points=points))["channels"][1]
    assert channel["worst_error"]["value"] is None
    assert channel["worst_error"]["percent_of_span"] is None
    assert [point["firmware"] for point in channel["points"]] == [None] * 3


def test_an_inferred_unit_is_spelled_out() -> None:
    """A unit that the board file does not state is the scale in the channel's unit."""
    channel = read(with_judgement(unit_from="inferred", scale=0.01))["channels"][1]
    assert channel["firmware"]["unit"] == "0.01 V"


def test_a_stride_is_told_where_there_is_one() -> None:
    """Where not every code was looked at the channel says so, elsewhere nothing."""
    assert read(with_judgement(stride=1025))["channels"][1]["code_step"] == 1025
    assert "code_step" not in read(samples.outcome())["channels"][1]


def test_bytes() -> None:
    """Same facts, same bytes: ASCII, nothing invisible, a newline at the end."""
    place = Place("caf\udce9\u202e\n.c", 1, 1)
    texts = {json_report(samples.outcome(samples.finding(place=place))) for _ in range(3)}
    assert len(texts) == 1
    text = texts.pop()
    assert text.isascii()
    assert text.endswith("}\n")
    assert json.loads(text)["findings"][-1]["file"] == "caf\\udce9\u202e\n.c"


def test_numbers_read_back_as_the_same() -> None:
    """A number is written with as many digits as it takes to read it back."""
    report = read(with_judgement(lsb=0.1, allowed_from="board"))
    assert report["channels"][1]["hardware"]["gain"].hex() == (5 * 3.7 / 1024).hex()
