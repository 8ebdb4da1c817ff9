"""Which part of a braced initialiser belongs to which member or element (C11 6.7.9)."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

from bitweight.firmware.objects import Array, ObjectType, Path, Record
from bitweight.firmware.syntax import Braces, Entry, Expr, Text

Subscript = Callable[[Expr], int | None]
Members = Callable[[Record], tuple[tuple[str, ObjectType], ...]]
_DEPTH = 32


@dataclass(frozen=True, slots=True, kw_only=True)
class Reader:
    """What an initialiser's text alone does not say.

    `members` lists a record's, `subscript` evaluates a designator, `is_whole` says whether an
    expression is a struct by itself, which then stands for all its members.
    """

    members: Members
    subscript: Subscript
    is_whole: Callable[[Expr], bool]


Parts = Mapping[Path, Expr]
"""The expressions of a braced list by the path of the scalar (or whole struct) each stands for."""


def parts_of(braces: Braces, type_: ObjectType, reader: Reader) -> Parts | None:
    """Every part that a list names; the others are zero. None where the list is not understood."""
    filling = _Filling(reader)
    filling.fill(braces, type_, (), 0)
    return filling.parts if filling.understood else None


@dataclass(slots=True)
class _Filling:
    """The parts of one list while its entries are given out."""

    reader: Reader
    parts: dict[Path, Expr] = field(default_factory=dict)
    understood: bool = True

    def fill(self, braces: Braces, type_: ObjectType, path: Path, depth: int) -> None:
        """Give the entries of a list to the parts of the object at `path`."""
        if depth > _DEPTH:
            self.understood = False
            return
        if not isinstance(type_, Array | Record):
            for entry in braces.entries[:1]:
                self._place(entry.value, type_, path, depth)
            return
        cursor = _Cursor(self.reader, type_)
        for entry in braces.entries:
            if not cursor.move(entry):
                self.understood = False
                return
            value = entry.value
            braced = isinstance(value, Braces) and value.type is None
            if not braced and not isinstance(value, Text):
                cursor.descend(self.reader.is_whole(value))
            here = (*path, *cursor.path)
            if not cursor.is_unnamed:
                self._drop(here)
            self._place(value, cursor.type, here, depth)

    def _drop(self, path: Path) -> None:
        """Forget earlier initialisers of a part (C11 6.7.9p19)."""
        for known in [one for one in self.parts if one[: len(path)] == path]:
            del self.parts[known]

    def _place(self, value: Expr, type_: ObjectType, path: Path, depth: int) -> None:
        if isinstance(value, Braces) and value.type is None:
            self.fill(value, type_, path, depth + 1)
        else:
            self.parts[path] = value


@dataclass(slots=True)
class _Level:
    """One object on the way to the current part: its type and the position in it."""

    type: Array | Record
    position: int


class _Cursor:
    """The current part of an object whose list is read (C11 6.7.9p17 to p20)."""

    def __init__(self, reader: Reader, type_: Array | Record) -> None:
        self._reader = reader
        self._levels = [_Level(type_, -1)]

    @property
    def type(self) -> ObjectType:
        """The type of the current part."""
        last = self._levels[-1]
        if isinstance(last.type, Array):
            return last.type.of
        return self._members(last)[last.position][1]

    @property
    def path(self) -> Path:
        """The path of the current part; unnamed records are no step of it."""
        steps: list[str | int] = []
        for level in self._levels:
            if isinstance(level.type, Array):
                steps.append(level.position)
            else:
                name = self._members(level)[level.position][0]
                steps.extend([name] if name else [])
        return tuple(steps)

    @property
    def is_unnamed(self) -> bool:
        """Whether the current part is a record without a name, which has no path of its own."""
        last = self._levels[-1]
        return isinstance(last.type, Record) and not self._members(last)[last.position][0]

    def move(self, entry: Entry) -> bool:
        """Go to the part that an entry is for; False where that is not known."""
        if not entry.designators:
            return self._advance()
        del self._levels[1:]
        for index, designator in enumerate(entry.designators):
            if index and not self._enter():
                return False
            if not self._designate(designator):
                return False
        return True

    def descend(self, whole: bool) -> None:
        """Without braces of its own a scalar goes to the first scalar of an aggregate."""
        for _ in range(_DEPTH):
            if isinstance(self.type, Record) and whole:
                return
            if not self._enter():
                return
            self._levels[-1].position = 0

    def _members(self, level: _Level) -> tuple[tuple[str, ObjectType], ...]:
        return self._reader.members(level.type) if isinstance(level.type, Record) else ()

    def _enter(self) -> bool:
        type_ = self.type
        if not isinstance(type_, Array | Record):
            return False
        if isinstance(type_, Record) and not self._reader.members(type_):
            return False
        self._levels.append(_Level(type_, 0))
        return True

    def _advance(self) -> bool:
        while self._levels:
            level = self._levels[-1]
            level.position += 1
            if level.position < self._count(level):
                return True
            self._levels.pop()
        return False

    def _count(self, level: _Level) -> int:
        if isinstance(level.type, Array):
            return level.type.length if level.type.length is not None else level.position + 1
        if level.type.kind == "union":
            return 1
        return len(self._members(level))

    def _designate(self, designator: str | Expr) -> bool:
        level = self._levels[-1]
        if isinstance(designator, str):
            return self._find(designator)
        found = self._reader.subscript(designator) if isinstance(level.type, Array) else None
        level.position = found if found is not None else -1
        return found is not None and found >= 0

    def _find(self, name: str) -> bool:
        """Go to the member of a name, in unnamed inner records too."""
        level = self._levels[-1]
        for position, (known, type_) in enumerate(self._members(level)):
            level.position = position
            if known == name:
                return True
            if not known and isinstance(type_, Record) and len(self._levels) < _DEPTH:
                self._levels.append(_Level(type_, 0))
                if self._find(name):
                    return True
                self._levels.pop()
        return False


def element_count(value: Expr | None, subscript: Subscript) -> int | None:
    """How many elements a braced list gives an array without a written size."""
    if not isinstance(value, Braces):
        return None
    position = highest = 0
    for entry in value.entries:
        if entry.designators and not isinstance(entry.designators[0], str):
            found = subscript(entry.designators[0])
            if found is None:
                return None
            position = found
        position += 1
        highest = max(highest, position)
    return highest
