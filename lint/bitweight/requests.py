"""What a run of `verify` is asked for."""

from dataclasses import dataclass, field
from datetime import date

from bitweight.limits import Limits


@dataclass(frozen=True, slots=True, kw_only=True)
class Request:
    """One question to the pipeline, as the command line states it.

    `board` is the path of the board file; `sources` files and folders (none: those of the board
    file); `defines` raw `NAME` or `NAME=VALUE`; `includes` folders searched for headers. `variant`
    and `channel` are names of the board file. `today` is the day on which deviations are judged
    (None: the clock's).
    """

    board: str
    sources: tuple[str, ...] = ()
    defines: tuple[str, ...] = ()
    includes: tuple[str, ...] = ()
    variant: str | None = None
    channel: str | None = None
    today: date | None = None
    limits: Limits = field(default_factory=Limits)
