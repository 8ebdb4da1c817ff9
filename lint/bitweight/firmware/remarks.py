"""What preprocessing met that somebody should hear of; none of it stops the work."""

from typing import NamedTuple

from bitweight.firmware.files import SourceFile
from bitweight.places import Place

_MOST = 500
"""Problems kept of one unit: hostile text has one a token."""


class Missing(NamedTuple):
    """An include that leads to no file: normal for vendor headers."""

    name: str
    place: Place


class Undefined(NamedTuple):
    """A name first tested without definition at `place`; `fallback`: an #ifndef then defined it."""

    name: str
    place: Place
    fallback: bool


class Problem(NamedTuple):
    """What could not be preprocessed as written, in the user's words."""

    place: Place
    message: str


class Remarks:
    """Remarks as they are made, each once."""

    def __init__(self) -> None:
        self._missing: dict[Missing, None] = {}
        self._undefined: dict[str, Undefined] = {}
        self._problems: dict[Problem, None] = {}

    @property
    def missing(self) -> tuple[Missing, ...]:
        """Includes that were not found, in order."""
        return tuple(self._missing)

    @property
    def undefined(self) -> tuple[Undefined, ...]:
        """Names tested without definition, in order of the first test."""
        return tuple(self._undefined.values())

    @property
    def problems(self) -> tuple[Problem, ...]:
        """Everything else, in order."""
        return tuple(self._problems)

    def miss(self, name: str, place: Place) -> None:
        """An include of `name` was not found."""
        self._missing[Missing(name, place)] = None

    def test(self, name: str, file: SourceFile, offset: int, *, fallback: bool = False) -> None:
        """A conditional asked for `name`, which has no definition."""
        known = self._undefined.get(name)
        if known is None:
            self._undefined[name] = Undefined(name, file.place(offset), fallback)
        elif fallback and not known.fallback:
            self._undefined[name] = known._replace(fallback=True)

    def problem(self, file: SourceFile, offset: int, message: str) -> None:
        """Something could not be done as written."""
        if len(self._problems) < _MOST:
            self._problems[Problem(file.place(offset), message)] = None
