"""Names that hold a constant, and those that hold more than one at once."""

import re
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass

from bitweight.firmware.macros import Macro
from bitweight.firmware.symbols import Program
from bitweight.firmware.units import Unit
from bitweight.places import Place

Evaluate = Callable[[Unit, str], int | float | None]


@dataclass(frozen=True, slots=True, kw_only=True)
class Definition:
    """One definition of a constant: its text and, where it could be evaluated, its value."""

    place: Place
    text: str
    value: int | float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Conflict:
    """A name with definitions of different value that are live at once for this board.

    `channels` are those whose conversion uses the name.
    """

    name: str
    definitions: tuple[Definition, ...]
    channels: tuple[str, ...]


def conflicts(
    program: Program, users: Iterable[tuple[str, tuple[str, ...]]], evaluate: Evaluate
) -> tuple[Conflict, ...]:
    """The names among `users` (name, channels) that headers in force define with different values.

    A name that is local to one source file is no conflict (C11 6.10.3.5: a definition ends with its
    translation unit).
    """
    found = []
    for name, channels in users:
        definitions = _live(program, name, evaluate)
        values = {one.value for one in definitions}
        if len(values) > 1 and None not in values:
            found.append(Conflict(name=name, definitions=definitions, channels=channels))
    return tuple(found)


def _live(program: Program, name: str, evaluate: Evaluate) -> tuple[Definition, ...]:
    for file in program.tree.mentioning(name):
        if re.search(rf"#[ \t]*define[ \t]+{re.escape(name)}(?!\w)", file.text):
            program.load(name)
            break
    found: dict[Place, Definition] = {}
    for unit in tuple(program.units.values()):
        for macro in _definitions(unit, name):
            shared = macro.place.file.endswith(".h") or not macro.place.file.endswith(".c")
            if shared and macro.parameters is None and macro.place not in found:
                text = " ".join(token.text for token in macro.body)
                found[macro.place] = Definition(
                    place=macro.place, text=text, value=evaluate(unit, text)
                )
    return tuple(found[place] for place in sorted(found))


def _definitions(unit: Unit, name: str) -> Iterator[Macro]:
    for _, macro in unit.translation.macros.history(name):
        if macro is not None:
            yield macro
