"""Types of C objects beyond arithmetic: pointers, arrays, records, functions."""

from dataclasses import dataclass

from bitweight.arithmetic.types import CType


@dataclass(frozen=True, slots=True, kw_only=True)
class Arithmetic:
    """An object that holds a number."""

    type: CType


@dataclass(frozen=True, slots=True, kw_only=True)
class Pointer:
    """A pointer to an object or function."""

    to: "ObjectType"


@dataclass(frozen=True, slots=True, kw_only=True)
class Array:
    """An array; `length` is None where it is not known."""

    of: "ObjectType"
    length: int | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Record:
    """A struct or union by its tag. Its members are looked up in the unit `scope`."""

    kind: str
    tag: str
    scope: str


@dataclass(frozen=True, slots=True, kw_only=True)
class FunctionType:
    """A function."""

    returns: "ObjectType"


@dataclass(frozen=True, slots=True, kw_only=True)
class Strange:
    """A type that is not known here (`name`), or void (empty name)."""

    name: str


ObjectType = Arithmetic | Pointer | Array | Record | FunctionType | Strange


ANYWHERE = "*"
"""The step of a path that stands for a subscript that is not constant."""


Path = tuple[str | int, ...]
"""Member names and subscripts, from an object inwards."""


@dataclass(frozen=True, slots=True)
class Root:
    """Where an object lives. `scope` is empty for external linkage, a file for static objects,
    `function#frame` for locals, and names the unknown pointer or register otherwise.
    """

    kind: str
    name: str
    scope: str = ""


@dataclass(frozen=True, slots=True)
class Location:
    """An object or a part of it: member names and subscripts from the root inwards."""

    root: Root
    path: Path = ()

    @property
    def plain(self) -> "Location":
        """The object without the type it is looked at through a cast pointer."""
        for depth, step in enumerate(self.path):
            if isinstance(step, str) and step.startswith("("):
                return Location(self.root, self.path[:depth])
        return self

    def part(self, step: str | int) -> "Location":
        """A member or element of this object."""
        return Location(self.root, (*self.path, step))

    def at(self, path: Path) -> "Location":
        """A part of a part of this object."""
        return Location(self.root, (*self.path, *path))

    def viewed(self, type_name: str) -> "Location":
        """This object, looked at as another type than its own."""
        return self.part(f"({type_name})")

    def within(self, outer: "Location") -> bool:
        """Whether this is `outer` or a part of it."""
        return self.root == outer.root and self.path[: len(outer.path)] == outer.path

    def may_be_in(self, outer: "Location") -> bool:
        """Whether this may be `outer` or a part of it, unknown subscripts considered."""
        return (
            self.root == outer.root
            and len(outer.path) <= len(self.path)
            and all(
                ANYWHERE in (mine, theirs) or mine == theirs
                for mine, theirs in zip(self.path, outer.path, strict=False)
            )
        )

    def __str__(self) -> str:
        text = self.root.name
        for step in self.path:
            text += f"[{step}]" if isinstance(step, int) else f".{step}"
        return text
