"""Whether a member of an object keeps its initialiser although the object's address is handed on.

Every use of the object's name is looked at, then every use of the parameters and local pointers
that get its address. As soon as it goes where it is not followed, anything may be written.
"""

from collections.abc import Iterator
from dataclasses import dataclass, field, fields
from typing import NamedTuple

from bitweight.firmware.objects import Path
from bitweight.firmware.symbols import Program
from bitweight.firmware.syntax import (
    ArrayOf,
    Assign,
    Call,
    Cast,
    Conditional,
    Declarator,
    Entry,
    Evaluate,
    FunctionOf,
    If,
    Increment,
    Index,
    Loop,
    Marked,
    Member,
    Name,
    Node,
    Operation,
    Pair,
    PointerTo,
    SizeOf,
    TypeSyntax,
)
from bitweight.firmware.units import Function, Unit

_MOST_USES = 2_000
"""Uses of one object that are looked at before it counts as written."""
_COPIES = frozenset({"memcpy", "memmove", "memcmp"})
"""C11 7.24: the second argument is only read."""
_MOVING = frozenset({"+", "-", ","})
"""Binary operators whose result may still be a pointer to the object."""


@dataclass(frozen=True, slots=True)
class _Held:
    """A name in a function through which the object is reached.

    `indirect`: the name is that of an object with a pointer to it inside; `pointer`: it is that of
    a parameter or local pointer, whose own value may change.
    """

    function: Function
    name: str
    indirect: bool = False
    pointer: bool = False


class _Tree(NamedTuple):
    """The nodes of a function, and the node above each, by its identity."""

    above: dict[int, Node]
    nodes: list[Node]


@dataclass(kw_only=True)
class Escapes:
    """Follows the addresses of objects through the functions of the tree."""

    program: Program
    _trees: dict[int, tuple[Function, _Tree]] = field(default_factory=dict)

    def keeps(self, path: Path, names: tuple[str, ...], users: tuple[Function, ...]) -> bool:
        """Whether nothing writes the member at `path` of an object.

        `names` are the object's own and, behind it, those of objects that hold its address; `users`
        the functions that use any of them.
        """
        members = [step for step in path if isinstance(step, str)]
        if not members or any(isinstance(step, int) for step in path[path.index(members[0]) :]):
            return False
        pending = [
            _Held(function, name, indirect=name != names[0])
            for function in users
            for name in names
            if name in function.mentions.names
        ]
        seen = {(one.function.identity, one.name): one for one in pending}
        uses = 0
        while pending:
            held = pending.pop()
            for use in self._uses(held):
                uses += 1
                onward = self._onward(held, use) if uses <= _MOST_USES else None
                if onward is None:
                    return False
                for one in onward:
                    key = (one.function.identity, one.name)
                    if key not in seen:
                        seen[key] = one
                        pending.append(one)
        return all(one.function.mentions.members.isdisjoint(members) for one in seen.values())

    def _uses(self, held: _Held) -> Iterator[Node]:
        for node in self._tree(held.function).nodes:
            if isinstance(node, Name) and node.text == held.name:
                yield node

    def _onward(self, held: _Held, use: Node) -> tuple[_Held, ...] | None:
        """Where one use hands the address on; None where it may be written, or is not followed."""
        parents = self._tree(held.function).above
        below, above = use, parents.get(id(use))
        while True:
            match above:
                case Member() if not held.indirect:
                    return ()
                case Operation(operator="!") | SizeOf() | Evaluate() | If() | Loop():
                    return ()
                case Pair(operator=operator) if operator not in _MOVING:
                    return ()
                case Conditional() if above.condition is below:
                    return ()
                case Member() | Operation() | Index() | Marked() | Cast() | Pair() | Conditional():
                    below, above = above, parents.get(id(above))
                case Call() if any(one is below for one in above.arguments):
                    return self._into(held, above, below)
                case Assign(target=Name() as target) if above.value is below:
                    return self._local(held, target.text)
                case Assign() | Increment() if below is use and held.pointer:
                    return ()
                case Declarator() if points_to_const(above.type):
                    return ()
                case Declarator():
                    return self._local(held, above.name)
                case _:
                    return None

    def _local(self, held: _Held, name: str) -> tuple[_Held, ...] | None:
        """A local pointer that gets the address."""
        for node in self._tree(held.function).nodes:
            if isinstance(node, Declarator) and node.name == name:
                if "static" in node.type.specifiers.storage:
                    return None
                pointer = bool(node.type.derivations)
                return (_Held(held.function, name, held.indirect, pointer),)
        return None

    def _into(self, held: _Held, call: Call, given: Node) -> tuple[_Held, ...] | None:
        """The parameter that gets an argument."""
        if not isinstance(call.function, Name):
            return None
        name = call.function.text
        index = next(at for at, one in enumerate(call.arguments) if one is given)
        found = self.program.function(name, held.function.unit)
        if not found:
            reads = name in _COPIES and index == 1
            return () if reads or self._only_reads(name, index, held.function.unit) else None
        if any(index >= len(one.syntax.parameters) for one in found):
            return None
        return tuple(
            _Held(one, one.syntax.parameters[index].name, held.indirect, pointer=True)
            for one in found
            if not points_to_const(one.syntax.parameters[index].type)
        )

    def _only_reads(self, name: str, index: int, unit: Unit) -> bool:
        """Whether a function without a body promises not to write through a parameter."""
        prototype = unit.prototypes.get(name)
        head = next(iter(prototype.type.derivations), None) if prototype is not None else None
        if not isinstance(head, FunctionOf) or index >= len(head.parameters):
            return False
        return points_to_const(head.parameters[index].type)

    def _tree(self, function: Function) -> _Tree:
        if id(function) not in self._trees:
            self._trees[id(function)] = (function, _tree(function.body))
        return self._trees[id(function)][1]


def _tree(root: Node) -> _Tree:
    above: dict[int, Node] = {}
    found: list[Node] = []
    pending: list[object] = [root]
    while pending:
        node = pending.pop()
        if not isinstance(node, Node):
            continue
        found.append(node)
        for below in _below(node):
            above[id(below)] = node
            pending.append(below)
    return _Tree(above, found)


def _below(node: Node) -> Iterator[Node]:
    pending: list[object] = [getattr(node, one.name) for one in fields(node)]
    while pending:
        inner = pending.pop()
        if isinstance(inner, Node):
            yield inner
        elif isinstance(inner, tuple):
            pending.extend(inner)
        elif isinstance(inner, Entry):
            pending.extend((inner.value, inner.designators))


def points_to_const(type_: TypeSyntax) -> bool:
    """Whether a parameter is a pointer to what the function only reads."""
    if not type_.derivations or not isinstance(type_.derivations[0], PointerTo | ArrayOf):
        return False
    return len(type_.derivations) == 1 and "const" in type_.specifiers.qualifiers
