"""Which selections of the configuration code concern a channel.

Settings as traced enter; those that hold for one channel leave, what was seen at its reading first.
"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from bitweight.judge.cases import Case, Facts
from bitweight.places import Place
from bitweight.trace.settings import Setting


@dataclass(frozen=True, slots=True, kw_only=True)
class Selections:
    """The settings of one subject for one channel.

    `own` hold where the channel's reading is taken, `shared` are made for all channels.
    """

    own: tuple[Setting, ...]
    shared: tuple[Setting, ...]

    @property
    def deciding(self) -> tuple[Setting, ...]:
        """What was seen at the reading, else what is made for all."""
        return self.own or self.shared


def selections(case: Case, facts: Facts, subject: str) -> Selections:
    """The settings that concern a channel.

    Those made for all concern the converters of a known family, or the only one of the board.
    """
    name = case.channel.name
    settings = [one for one in facts.settings if one.subject == subject]
    shared = [one for one in settings if not one.channels] if _configured(case, facts) else []
    return Selections(
        own=tuple(one for one in settings if name in one.channels), shared=tuple(shared)
    )


def contradicting(found: Selections, wanted: str) -> tuple[Setting, ...]:
    """The deciding settings that select something else, if none selects what is wanted.

    Each stands where it is written, if that is known: a selection seen at a reading was made
    somewhere else.
    """
    if any(selected(one) == wanted for one in found.deciding):
        return ()
    return written(found.deciding, found.shared)


def written(settings: Iterable[Setting], writes: Sequence[Setting]) -> tuple[Setting, ...]:
    """Each setting at the write that selects the same, one a place."""
    found: dict[Place, Setting] = {}
    for setting in settings:
        same = [one for one in writes if _same(one, setting)]
        for one in same or [setting]:
            found.setdefault(one.place, one)
    return tuple(found[place] for place in sorted(found))


def selected(setting: Setting) -> str:
    """The kind of what is selected: "internal" of "internal 1.1 V"."""
    return setting.value.split(" ")[0]


def _same(one: Setting, other: Setting) -> bool:
    return (one.target, one.subject, one.value) == (other.target, other.subject, other.value)


def _configured(case: Case, facts: Facts) -> bool:
    converters = {channel.converter.name for channel in facts.board.channels}
    return case.channel.converter.family is not None or len(converters) == 1
