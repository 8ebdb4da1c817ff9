"""The sheets on a terminal."""

import io
import sys

import pytest

from bitweight.command.terminal import ink_for, show_sheets
from bitweight.report.drawings import Ink
from report import samples


class Terminal(io.TextIOWrapper):
    """A stream that says it is a terminal."""

    def isatty(self) -> bool:
        """Yes."""
        return True


def shown(monkeypatch: pytest.MonkeyPatch, encoding: str = "utf-8") -> str:
    """What the sheets write to a terminal of this encoding."""
    raw = io.BytesIO()
    monkeypatch.setattr(sys, "stdout", Terminal(raw, encoding=encoding))
    show_sheets(samples.outcome())
    return raw.getvalue().decode(encoding)


def test_no_colour(monkeypatch: pytest.MonkeyPatch) -> None:
    """With `NO_COLOR` no colour is set and every word is there."""
    monkeypatch.setenv("TERM", "xterm-256color")
    monkeypatch.setenv("NO_COLOR", "1")
    text = shown(monkeypatch)
    assert not any(f"\x1b[3{colour}" in text for colour in range(8))
    assert "mismatched" in text
    assert "untraced" in text


def test_colour(monkeypatch: pytest.MonkeyPatch) -> None:
    """Without it, a mismatched channel is red."""
    monkeypatch.setenv("TERM", "xterm-256color")
    monkeypatch.delenv("NO_COLOR", raising=False)
    assert "\x1b[1;31m━━ battery" in shown(monkeypatch)


def test_width(monkeypatch: pytest.MonkeyPatch) -> None:
    """The sheets take the terminal's width."""
    monkeypatch.setenv("COLUMNS", "72")
    monkeypatch.setenv("NO_COLOR", "1")
    monkeypatch.setenv("TERM", "xterm")
    rules = [line for line in shown(monkeypatch).splitlines() if "───" in line]
    assert {len(line) for line in rules if "\x1b" not in line} == {72}


def test_a_terminal_without_fine_characters(monkeypatch: pytest.MonkeyPatch) -> None:
    """A terminal of another encoding gets characters that it has."""
    monkeypatch.setenv("TERM", "dumb")
    assert shown(monkeypatch, "ascii").isascii()


def test_ink_for() -> None:
    """The characters follow the encoding; one that is not known gets the plain ones."""
    assert ink_for("utf-8") is Ink.FINE
    assert {ink_for(name) for name in ("ascii", "latin-1", "no-such", None)} == {Ink.PLAIN}
