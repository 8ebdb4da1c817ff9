"""What is known of the objects at one point of a run: values by location, merged at joins."""

from dataclasses import dataclass, field
from typing import TypeGuard

from bitweight.arithmetic.expressions import Expression
from bitweight.firmware.objects import (
    ANYWHERE,
    Arithmetic,
    Location,
    ObjectType,
    Pointer,
    Strange,
)
from bitweight.firmware.units import Function
from bitweight.places import Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Address:
    """A pointer to a known object."""

    target: Location
    type: ObjectType


@dataclass(frozen=True, slots=True, kw_only=True)
class Routine:
    """A pointer to a function."""

    name: str
    function: Function | None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Copy:
    """A struct by value: the parts known when it was copied; other parts are those of `source`."""

    parts: tuple[tuple[tuple[str | int, ...], "Value"], ...]
    source: Location
    type: ObjectType


Value = Expression | Address | Routine | Copy


def is_number(value: Value) -> TypeGuard[Expression]:
    """Whether a value is an expression rather than a pointer or a struct."""
    return isinstance(value, Expression)


def value_type(value: Value) -> ObjectType:
    """The type of a value, which is no array or function any more (C11 6.3.2.1p3)."""
    match value:
        case Address():
            return Pointer(to=value.type)
        case Routine():
            return Pointer(to=Strange(name=""))
        case Copy():
            return value.type
        case _:
            return Arithmetic(type=value.type)


@dataclass(slots=True)
class State:
    """Values by location at one point of a run. Copied where the run forks."""

    values: dict[Location, Value] = field(default_factory=dict)

    def copy(self) -> "State":
        """A state that changes on its own."""
        return State(dict(self.values))

    def write(self, location: Location, value: Value) -> None:
        """Store a value; what was known of its parts, and of what it may be, is gone."""
        for known in [one for one in self.values if one != location and _replaced(one, location)]:
            del self.values[known]
        self.values[location] = value
        if isinstance(value, Copy):
            for path, part in value.parts:
                self.values[Location(location.root, (*location.path, *path))] = part

    def holds(self, location: Location) -> bool:
        """Whether an object, or a part of it, was written."""
        return any(known.within(location) for known in self.values)

    def forget(self, location: Location) -> None:
        """Drop what is known of an object and its parts."""
        for known in [one for one in self.values if one.within(location)]:
            del self.values[known]

    def parts(self, location: Location) -> tuple[tuple[tuple[str | int, ...], Value], ...]:
        """What is known of the parts of an object, by the path from it."""
        depth = len(location.path)
        return tuple(
            (known.path[depth:], value)
            for known, value in self.values.items()
            if known != location and known.within(location)
        )


def _replaced(known: Location, written: Location) -> bool:
    """Whether a write says anew what an object holds, for certain or perhaps."""
    return known.within(written) or (ANYWHERE in written.path and known.may_be_in(written))


@dataclass(frozen=True, slots=True, kw_only=True)
class Input:
    """What a placeholder in an expression stands for until the whole tree is known.

    `kind` is "object" (its value when the function starts), "parameter", or "unknown", whose
    `reason` is for the user. `function` is the parameter's.
    """

    kind: str
    reason: str
    location: Location | None = None
    type: ObjectType | None = None
    function: Function | None = None
    index: int = 0
    place: Place | None = None
