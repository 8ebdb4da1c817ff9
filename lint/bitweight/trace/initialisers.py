"""Which part of a braced initialiser belongs to which member or element (C11 6.7.9)."""

from collections.abc import Callable

from bitweight.firmware.objects import Array, ObjectType, Record
from bitweight.firmware.syntax import Braces, Expr

Subscript = Callable[[Expr], int | None]
Members = Callable[[Record], tuple[tuple[str, ObjectType], ...]]
_DEPTH = 32


def component(
    value: Expr | None,
    path: tuple[str | int, ...],
    type_: ObjectType,
    members: Members,
    subscript: Subscript,
) -> Expr | None:
    """The expression that initialises the part at `path`; None where the text gives none.

    `members` lists a record's, `subscript` evaluates a designator.
    """
    for step in path[:_DEPTH]:
        if not isinstance(value, Braces):
            return None
        value = _entry(value, step, type_, members, subscript)
        type_ = _inner(type_, step, members)
    if isinstance(value, Braces) and value.type is None and len(value.entries) == 1:
        # C allows braces around a scalar.
        only = value.entries[0]
        if not only.designators and not isinstance(type_, Array | Record):
            return only.value
    return value


def _entry(
    braces: Braces, step: str | int, type_: ObjectType, members: Members, subscript: Subscript
) -> Expr | None:
    names = [name for name, _ in members(type_)] if isinstance(type_, Record) else []
    position = 0
    found: Expr | None = None
    for entry in braces.entries:
        if entry.designators:
            first = entry.designators[0]
            if isinstance(first, str):
                position = names.index(first) if first in names else -1
                here: str | int = first
            else:
                found_at = subscript(first)
                position = found_at if found_at is not None else -1
                here = position
        else:
            here = names[position] if names and position < len(names) else position
        if here == step:
            found = entry.value if len(entry.designators) < 2 else None
        position += 1
    return found


def _inner(type_: ObjectType, step: str | int, members: Members) -> ObjectType:
    if isinstance(type_, Array):
        return type_.of
    if isinstance(type_, Record):
        return dict(members(type_)).get(str(step), type_)
    return type_


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
