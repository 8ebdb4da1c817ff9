"""The sheets on this terminal: its width, its colours, its characters."""

import sys

from rich.console import Console

from bitweight.command.outputs import say
from bitweight.judge.outcomes import Outcome
from bitweight.report.drawings import Ink
from bitweight.report.sheets import Screen


def show_sheets(outcome: Outcome) -> None:
    """Shows an outcome on standard output, a terminal; `NO_COLOR` and `TERM` are honoured."""
    console = Console(markup=False, highlight=False, emoji=False)
    with console.capture() as captured:
        console.print(Screen(outcome=outcome, ink=ink_for(sys.stdout.encoding)))
    say(captured.get())


def ink_for(encoding: str | None) -> Ink:
    """Fine characters where the encoding has them."""
    try:
        "▁⠿━▔µ".encode(encoding or "ascii")
    except (UnicodeEncodeError, LookupError):
        return Ink.PLAIN
    return Ink.FINE
