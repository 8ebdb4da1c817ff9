"""The terminal's screen, compared as a whole (`python -m report.redraw` in tests/ redraws it)."""

import io
from dataclasses import replace
from pathlib import Path

import pytest
from rich.cells import cell_len
from rich.console import Console

from bitweight.judge.findings import Level
from bitweight.judge.outcomes import Outcome
from bitweight.report.drawings import Ink
from bitweight.report.sheets import NARROWEST, Screen
from report import samples

EXPECTED = Path(__file__).with_name("screen.txt")


def text(outcome: Outcome, width: int = 80, ink: Ink = Ink.FINE) -> str:
    """The screen without colour."""
    return "".join(f"{line.plain}\n" for line in Screen(outcome=outcome, ink=ink).lines(width))


def test_whole_screen() -> None:
    """The screen of the sample, at 80 columns and without colour, is the one on file."""
    assert text(samples.outcome()) == EXPECTED.read_text("utf-8")


def test_the_console_shows_the_same() -> None:
    """A console prints the lines of the screen as they are, markup in a source line included."""
    console = Console(file=io.StringIO(), width=80, color_system=None, force_terminal=True)
    console.print(Screen(outcome=samples.outcome()))
    assert isinstance(console.file, io.StringIO)
    shown = "\n".join(line.rstrip() for line in console.file.getvalue().splitlines())
    assert shown + "\n" == text(samples.outcome())
    assert "[red]trimmed[/red]" in shown


@pytest.mark.parametrize("ink", Ink)
@pytest.mark.parametrize("width", [20, 60, 61, 79, 80, 100, 140, 300])
def test_every_width(width: int, ink: Ink) -> None:
    """No line is wider than the terminal, and none than a line that is still read easily."""
    lines = text(samples.outcome(), width, ink).splitlines()
    assert max(map(cell_len, lines)) <= min(max(width, NARROWEST), 120)


def test_plain_characters() -> None:
    """Asked for plain characters, the screen is ASCII."""
    assert text(samples.outcome(), ink=Ink.PLAIN).isascii()


@pytest.mark.parametrize("width", [60, 80])
def test_nothing_is_missed(width: int) -> None:
    """Every channel stands in the overview and on a sheet, and those to settle once more."""
    lines = text(samples.outcome(), width).splitlines()
    for name in ("depth", "battery", "flow"):
        assert sum(name in line for line in lines) >= 2
    end = lines.index("  mismatched  battery")
    assert lines[end + 1] == "  untraced    flow"


def test_findings_are_numbered_down_the_page() -> None:
    """Numbers rise down the page, the worst of a channel first, and the overview refers to them."""
    outcome = samples.outcome(samples.finding(level=Level.NOTE, channels=("depth",)))
    titles = [line for line in text(outcome).splitlines() if line.startswith("  (")]
    assert titles == [
        "  (1) note: full-scale",
        "  (2) error: reference-value",
        "  (3) warning: full-scale",
        "  (4) warning: untraced",
    ]
    assert "error 2, warning 3" in text(outcome)


def test_a_shared_cause_is_drawn_once() -> None:
    """A finding of two channels stands in full on the first sheet; the second refers to it."""
    shown = text(samples.outcome(samples.finding(channels=("depth", "battery"))))
    assert shown.count("shown in full at channel depth") == 1
    assert shown.count("(1) warning: full-scale") == 2


def test_an_accepted_deviation() -> None:
    """An accepted finding is shown as accepted, with its reason, and counted apart."""
    shown = text(samples.outcome(samples.finding(deviation="trimmed in production")))
    assert "accepted warning: full-scale" in shown
    assert "    accepted  trimmed in production" in shown
    assert " ".join(shown.split()).endswith("0 notes, 1 accepted")


def test_findings_outside_the_channels() -> None:
    """A finding that touches no channel has a place of its own."""
    lost = samples.finding("deviation", channels=(), message="this deviation matches nothing")
    lines = text(samples.outcome(lost)).splitlines()
    assert any(line.startswith("━━ outside the channels ━") for line in lines)
    assert "    this deviation matches nothing" in lines


def test_the_safety_text_stands_once() -> None:
    """Where hardware can be harmed, the limits of static checking stand once, at the end."""
    outcome = samples.outcome()
    assert text(outcome).count("no proof") == 1
    harmless = tuple(replace(one, hazard=None) for one in outcome.findings)
    assert "no proof" not in text(replace(outcome, findings=harmless))


def test_a_channel_with_a_hazard_says_so_once() -> None:
    """The channel's own caution stands on its sheet, not at each finding."""
    outcome = samples.outcome()
    words = "a battery read low is overcharged and can vent gas"
    cases = list(outcome.facts.cases)
    cases[1] = replace(cases[1], channel=replace(cases[1].channel, hazard=words))
    shown = text(replace(outcome, facts=replace(outcome.facts, cases=tuple(cases))), 120)
    assert shown.count(words) == 1


HOSTILE = {
    "markup": "[bold]x[/bold]",
    "escape": "a\x1b[2Jb",
    "newline": "a\nb",
    "override": "a\u202eb",
    "very long": "n" * 300,
    "wide": "水位" * 20,
}


@pytest.mark.parametrize("name", HOSTILE.values(), ids=HOSTILE.keys())
def test_hostile_names(name: str) -> None:
    """A name cannot move the cursor, reorder a line or push anything off the sheet."""
    shown = text(samples.with_names(samples.outcome(), name))
    assert all(line.isprintable() for line in shown.splitlines())
    assert "-304 mV" in shown
    assert "mismatched" in shown


def test_a_channel_out_of_its_codes() -> None:
    """A range that holds no code gives a sheet without a drawing."""
    outcome = samples.outcome()
    cases = list(outcome.facts.cases)
    judged = cases[1].judgement
    assert judged is not None
    empty = replace(judged, in_range=judged.in_range & False, points=())
    cases[1] = replace(cases[1], judgement=empty)
    shown = text(replace(outcome, facts=replace(outcome.facts, cases=tuple(cases))))
    assert "code 885" in shown
    assert "╌╌╌ allowed" not in shown


def test_strides_are_told() -> None:
    """Where not every code was looked at, the sheet says so."""
    outcome = samples.outcome()
    cases = list(outcome.facts.cases)
    judged = cases[1].judgement
    assert judged is not None
    cases[1] = replace(cases[1], judgement=replace(judged, stride=1025))
    shown = text(replace(outcome, facts=replace(outcome.facts, cases=tuple(cases))), 120)
    assert "looking at every 1025th code" in shown


def test_rounding_of_the_arithmetic_is_not_shown() -> None:
    """An error of a few attovolts is 0 wherever it stands."""
    outcome = samples.outcome()
    cases = list(outcome.facts.cases)
    judged = cases[0].judgement
    assert judged is not None
    noisy = replace(judged, error=judged.error + 1e-17)
    cases[0] = replace(cases[0], judgement=noisy)
    shown = text(replace(outcome, facts=replace(outcome.facts, cases=tuple(cases))))
    assert "worst, all together: 0 m" in shown


@pytest.mark.parametrize("width", [30, 59])
def test_a_narrow_terminal_has_everything(width: int) -> None:
    """A terminal of 30 columns and more tells channels, levels and values without folded cells."""
    lines = text(samples.outcome(), width).splitlines()
    assert "x battery: mismatched" in lines
    assert "    error 1, warning 2" in lines
    assert max(map(cell_len, lines)) <= width
