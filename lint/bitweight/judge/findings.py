"""A finding: what is wrong, where, by how much; its level from its effect; merging and order.

Rules yield findings one channel at a time; here findings that share one cause become one.
"""

from dataclasses import dataclass
from enum import Enum

from bitweight.places import Place


class Level(Enum):
    """How much a finding matters, in the words of SARIF 2.1.0 (3.27.10)."""

    NOTE = "note"
    WARNING = "warning"
    ERROR = "error"

    @property
    def weight(self) -> int:
        """0 for a note, 1 for a warning, 2 for an error."""
        return _WEIGHTS[self]

    def raised(self) -> "Level":
        """The next level up, as a channel with a hazard asks for."""
        return Level.WARNING if self is Level.NOTE else Level.ERROR


_WEIGHTS = {Level.NOTE: 0, Level.WARNING: 1, Level.ERROR: 2}


@dataclass(frozen=True, slots=True, kw_only=True)
class Related:
    """A place that helps to understand a finding: where the constant bites, a step of the way."""

    place: Place
    message: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Replacement:
    """An edit of one line: characters from `place.column` up to (not with) `end_column`."""

    place: Place
    end_column: int
    text: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """One cause. `found` and `expected` are short values with units.

    `channels` lists all channels it touches; `hazard` is the channel's own words;
    `deviation` is the accepted reason, if any.
    """

    rule: str
    level: Level
    channels: tuple[str, ...]
    message: str
    place: Place
    found: str = ""
    expected: str = ""
    related: tuple[Related, ...] = ()
    replacement: Replacement | None = None
    hazard: str | None = None
    deviation: str | None = None
    state: str | None = None

    @property
    def channel(self) -> str | None:
        """The channel, where the finding touches exactly one."""
        return self.channels[0] if len(self.channels) == 1 else None
