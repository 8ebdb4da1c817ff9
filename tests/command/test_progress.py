"""The line of progress."""

import io
import sys

import pytest

from bitweight.command.progress import line, progress


class Terminal(io.StringIO):
    """A stream that says it is a terminal."""

    def isatty(self) -> bool:
        """Yes."""
        return True


def shown(monkeypatch: pytest.MonkeyPatch, stream: io.StringIO | None) -> str:
    """What a run with progress leaves on standard error."""
    monkeypatch.setattr(sys, "stderr", stream)
    with progress() as report:
        report("sources", 12, 34)
    return "" if stream is None else stream.getvalue()


def test_silent_without_a_terminal(monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing is written to a file, a pipe, or no stream at all."""
    assert shown(monkeypatch, io.StringIO()) == ""
    assert shown(monkeypatch, None) == ""


def test_silent_on_a_dumb_terminal(monkeypatch: pytest.MonkeyPatch) -> None:
    """A terminal that cannot erase a line gets none."""
    monkeypatch.setenv("TERM", "dumb")
    assert shown(monkeypatch, Terminal()) == ""


def test_a_terminal_gets_a_line_that_goes_away(monkeypatch: pytest.MonkeyPatch) -> None:
    """On a terminal the stage is shown, and erased at the end."""
    monkeypatch.setenv("TERM", "xterm")
    text = shown(monkeypatch, Terminal())
    assert "12 of 34" in text
    assert "\x1b[2K" in text[text.rindex("12 of 34") :]


def test_no_colour(monkeypatch: pytest.MonkeyPatch) -> None:
    """`NO_COLOR` is honoured: no colour is set."""
    monkeypatch.setenv("TERM", "xterm-256color")
    monkeypatch.setenv("NO_COLOR", "1")
    assert "\x1b[3" not in shown(monkeypatch, Terminal())


def test_line() -> None:
    """The total stands where it is known."""
    assert line("sources", 12, 34) == "sources 12 of 34"
    assert line("tracing", 0, 0) == "tracing"
