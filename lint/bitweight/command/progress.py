"""One line of progress on standard error, on a terminal only."""

import os
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager

Report = Callable[[str, int, int], None]
"""What the pipeline calls: stage, how many are done, how many there are (0: not known)."""


@contextmanager
def progress() -> Iterator[Report]:
    """A line that shows the stage while the body runs and is gone afterwards.

    Nothing is written where standard error is no terminal, or one that cannot erase a line.
    """
    if sys.stderr is None or not sys.stderr.isatty() or os.environ.get("TERM") == "dumb":
        yield _silent
        return
    from rich.console import Console

    console = Console(stderr=True, highlight=False, markup=False, emoji=False)
    with console.status("reading") as status:

        def report(stage: str, done: int, total: int) -> None:
            status.update(line(stage, done, total))

        yield report


def line(stage: str, done: int, total: int) -> str:
    """`sources 12 of 34`, or the stage alone where the total is not known."""
    return f"{stage} {done} of {total}" if total else stage


def _silent(stage: str, done: int, total: int) -> None:
    """Takes a report and shows nothing."""
