"""Functions, objects and types of the whole tree, read unit by unit as they are needed.

Nothing is parsed that no wanted name leads to: `Program.load(name)` brings in the units whose text
mentions a name, directly or through macros and headers.
"""

import re
from collections.abc import Mapping
from dataclasses import dataclass, field

from bitweight.arithmetic.types import DataModel
from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.syntax import Expr
from bitweight.firmware.translation import translate
from bitweight.firmware.units import Function, Unit, Variable
from bitweight.limits import Limits
from bitweight.places import Place

_DEFINE = re.compile(r"^[ \t]*#[ \t]*define[ \t]+(\w+)((?:\\\r?\n|[^\n])*)", re.MULTILINE)
_INCLUDE = re.compile(r"^[ \t]*#[ \t]*include[ \t]*[<\"]([^>\"\n]+)[>\"]", re.MULTILINE)
_MOST_MACROS = 10_000
"""Macros followed from one name to the units that use it."""


@dataclass(kw_only=True)
class Program:
    """The tree as a set of names. Units are parsed when a name first asks for them."""

    tree: SourceTree
    model: DataModel
    defines: Mapping[str, str | None]
    limits: Limits
    marks: frozenset[str] = frozenset()
    units: dict[str, Unit] = field(default_factory=dict)
    too_large: set[str] = field(default_factory=set)
    """Paths of units that are not parsed because of their size."""
    plain_trees: dict[str, Expr | None] = field(default_factory=dict)
    """Expressions from outside that mean the same in every unit."""
    _loaded: set[str] = field(default_factory=set)

    def load(self, name: str) -> None:
        """Bring in every unit that mentions the name, through macros and headers as well."""
        if name in self._loaded:
            return
        self._loaded.add(name)
        for file in self._units_for(name):
            self._read(file)

    def defining(self, name: str) -> tuple[Function, ...]:
        """Every function of that name with external linkage, each once, strong ones first."""
        self.load(name)
        found = {
            unit.functions[name].identity: unit.functions[name]
            for unit in self.units.values()
            if name in unit.functions and not unit.functions[name].static
        }
        strong = tuple(one for one in found.values() if not one.weak)
        return strong or tuple(found.values())

    def function(self, name: str, unit: Unit) -> tuple[Function, ...]:
        """The function a call in `unit` reaches; several when the tree defines it so often."""
        own = unit.functions.get(name)
        if own is not None and not own.weak:
            return (own,)
        return self.defining(name)

    def variable(self, name: str, unit: Unit | None) -> Variable | None:
        """The object a name in `unit` means: the unit's own, else the one of external linkage."""
        own = unit.variables.get(name) if unit is not None else None
        if own is not None and (own.location.root.scope or not own.declared_only):
            return own
        self.load(name)
        found = [
            other.variables[name]
            for other in self.units.values()
            if name in other.variables
            and (unit is None or not other.variables[name].location.root.scope)
        ]
        defined = [one for one in found if not one.declared_only]
        valued = [one for one in defined if one.value is not None]
        return next(iter([*valued, *defined, *found]), own)

    def all_functions(self, name: str) -> tuple[Function, ...]:
        """Every function in a loaded unit whose body mentions the name, each once."""
        self.load(name)
        found: dict[tuple[Place, str], Function] = {}
        word = re.compile(rf"(?<![\w$]){re.escape(name)}(?![\w$])")
        for unit in self.units.values():
            if name not in unit.translation.text:
                continue
            text = unit.translation.text
            for one in unit.functions.values():
                if word.search(text, one.syntax.body_start, one.syntax.end):
                    found.setdefault(one.identity, one)
        return tuple(found[key] for key in sorted(found))

    def _read(self, file: SourceFile) -> None:
        """Parse a unit, unless it is too large."""
        if file.path in self.units or file.path in self.too_large:
            return
        most = self.limits.parsed_bytes
        if len(file.text) <= most:
            translation = translate(self.tree, file, self.defines, self.limits)
            if len(translation.text) <= most:
                self.units[file.path] = Unit(translation, self.model, self.marks, self.plain_trees)
                return
        self.too_large.add(file.path)

    def _units_for(self, name: str) -> list[SourceFile]:
        found: dict[str, SourceFile] = {}
        seen = {name}
        pending = [name]
        while pending and len(seen) < _MOST_MACROS:
            wanted = pending.pop()
            for file in self.tree.mentioning(wanted):
                for macro in self._macros_with(file, wanted):
                    if macro not in seen:
                        seen.add(macro)
                        pending.append(macro)
                if not file.path.endswith(".h"):
                    found[file.path] = file
                elif self._outside_defines(file, wanted):
                    for user in self._users(file):
                        found.setdefault(user.path, user)
        return [found[path] for path in sorted(found)]

    @staticmethod
    def _macros_with(file: SourceFile, word: str) -> list[str]:
        pattern = re.compile(rf"(?<![\w$]){re.escape(word)}(?![\w$])")
        return [m[1] for m in file.remembered(_defines) if pattern.search(m[2])]

    @staticmethod
    def _outside_defines(file: SourceFile, word: str) -> bool:
        pattern = re.compile(rf"(?<![\w$]){re.escape(word)}(?![\w$])")
        spans = [match.span() for match in file.remembered(_defines)]
        return any(
            not any(start <= match.start() < end for start, end in spans)
            for match in pattern.finditer(file.text)
        )

    def _users(self, header: SourceFile) -> list[SourceFile]:
        """One unit that includes a header, directly or not; the header itself where none does."""
        already = [u for u in self.units.values() if header.path in u.translation.included]
        if already:
            return []
        names = {header.path.rpartition("/")[2]}
        done: set[str] = set()
        while True:
            fresh: set[str] = set()
            for file in self.tree.files:
                if file.path in done:
                    continue
                if any(one.rpartition("/")[2] in names for one in file.remembered(_includes)):
                    if not file.path.endswith(".h"):
                        return [file]
                    done.add(file.path)
                    fresh.add(file.path.rpartition("/")[2])
            if fresh <= names:
                return [header]
            names |= fresh


def _defines(file: SourceFile) -> tuple[re.Match[str], ...]:
    return tuple(_DEFINE.finditer(file.text))


def _includes(file: SourceFile) -> tuple[str, ...]:
    return tuple(_INCLUDE.findall(file.text))
