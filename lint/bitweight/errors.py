"""What can go wrong, by who must act.

Only `command/cli.py` turns these into text and exit status.
"""

from dataclasses import dataclass

from bitweight.places import Place


class BitweightError(Exception):
    """Base of every error that the program raises on purpose."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Mistake:
    """One thing that is wrong in a file the user wrote."""

    place: Place
    message: str

    def __str__(self) -> str:
        return f"{self.place}: error: {self.message}"


class BoardError(BitweightError):
    """The board file (or a family file) cannot be used; carries every mistake found in it."""

    def __init__(self, mistakes: tuple[Mistake, ...]) -> None:
        super().__init__(mistakes)
        self.mistakes = mistakes

    def __str__(self) -> str:
        return "\n".join(str(mistake) for mistake in self.mistakes)


class SourceError(BitweightError):
    """The sources cannot be read: nothing there, not readable."""

    def __init__(self, *, path: str, message: str) -> None:
        super().__init__(path, message)
        self.path = path
        self.message = message

    def __str__(self) -> str:
        return f"{self.path}: error: {self.message}"


class UsageError(BitweightError):
    """The command line asks for something that does not exist: a channel, a rule, a variant."""


class RuleError(BitweightError):
    """A rule module is broken; names the distribution that brought it."""


class LimitReached(BitweightError):  # noqa: N818 - a bound met, not a mistake of anybody
    """A bound of `limits.py` was met; the message says which, in the user's words."""
