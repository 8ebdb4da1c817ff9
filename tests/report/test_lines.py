"""The plain report."""

import re
from dataclasses import replace

import pytest

from bitweight.judge.findings import Finding
from bitweight.places import Place
from bitweight.report.lines import finding_line, plain_report
from report import samples

GNU = re.compile(r"[^:]+:[1-9]\d*:[1-9]\d*: (error|warning|note): .+[^.] \[[a-z-]+\]")


def test_report() -> None:
    """Findings stand in order, one a line, before a last line of counts."""
    assert plain_report(samples.outcome()) == (
        "hatchery/src/adc_cfg.h:3:18: warning: ADC_MAX is 1023, but 1024 counts stand for the "
        "reference [full-scale]\n"
        "hatchery/src/adc_cfg.h:4:18: error: VREF_MV is 4900 mV, but reference vref is 5 V; "
        "found 4900 mV, expected 5000 mV; "
        "caution: a battery read low is overcharged and can vent gas [reference-value]\n"
        "hatchery/board.toml:40:1: warning: flow is untraced: adc_read(7) is not called anywhere "
        "[untraced]\n"
        "3 channels: 1 verified, 1 mismatched, 1 untraced; 1 error, 2 warnings, 0 notes\n"
    )


def test_a_sound_tree_gives_the_counts_alone() -> None:
    """Without findings, the counts are all there is."""
    sound = replace(samples.outcome(), findings=())
    assert len(plain_report(sound).splitlines()) == 1


def test_an_accepted_deviation_is_listed_with_its_reason() -> None:
    """An accepted finding keeps its line, says so and is counted apart."""
    accepted = samples.finding(deviation="trimmed in production")
    lines = plain_report(samples.outcome(accepted)).splitlines()
    assert "; accepted: trimmed in production [full-scale]" in lines[3]
    assert lines[-1].endswith("1 error, 2 warnings, 0 notes, 1 accepted")


FORMS = {
    "full stop": samples.finding(message="the count is 1023, not 1024."),
    "several channels": samples.finding(channels=("battery", "depth")),
    "newline in message": samples.finding(message="two\nlines 1023 1024"),
    "newline in caution": samples.finding(hazard="one\r\ntwo"),
    "newline in reason": samples.finding(deviation="one\ntwo"),
    "newline in file": samples.finding(place=Place("a\nb.c", 3, 4)),
    "space in file": samples.finding(place=Place("my dir/a b.c", 3, 4)),
    "bidirectional override": samples.finding(found="\u202e1", expected="2\u2066"),
    "no values": samples.finding(found="", expected=""),
}


@pytest.mark.parametrize("finding", FORMS.values(), ids=FORMS.keys())
def test_every_finding_is_one_line_of_the_form(finding: Finding) -> None:
    """Whatever a finding holds, it is one printable line of the GNU form."""
    line = finding_line(finding)
    assert GNU.fullmatch(line)
    assert line.isprintable()


def test_several_channels_are_named() -> None:
    """A cause that spoils more than one channel names them all."""
    line = finding_line(samples.finding(channels=("battery", "depth")))
    assert "; channels battery, depth [" in line
