"""Which names a function uses, writes, takes the address of: a look before it is followed."""

from collections.abc import Iterator
from dataclasses import dataclass, fields

from bitweight.firmware.syntax import (
    Assign,
    Call,
    Declarator,
    Declare,
    Increment,
    Index,
    Loop,
    Member,
    Name,
    Node,
    Operation,
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Mentions:
    """Names in one function body; its own locals, static ones aside, are only in `names`.

    `through` are pointers through which is written, `addressed` objects whose address is taken,
    `passes` what stands as an argument. `members` are those that are written, or are part of what
    is, or whose address is taken.
    """

    names: frozenset[str]
    writes: frozenset[str]
    through: frozenset[str]
    addressed: frozenset[str]
    passes: frozenset[str]
    calls: frozenset[str]
    members: frozenset[str]
    loops: bool

    @property
    def changes(self) -> frozenset[str]:
        """Names through which something may be written."""
        return self.writes | self.through | self.addressed | self.passes


def mentions(body: Node, parameters: frozenset[str]) -> Mentions:
    """Look through a body once."""
    names: set[str] = set()
    writes: set[str] = set()
    through: set[str] = set()
    addressed: set[str] = set()
    passes: set[str] = set()
    calls: set[str] = set()
    members: set[str] = set()
    declared: set[str] = set(parameters)
    loops = False
    for node in nodes(body):
        match node:
            case Name():
                names.add(node.text)
            case Member():
                names.add(node.name)
            case Assign() | Increment():
                (through if _is_pointed(node.target) else writes).update(_root(node.target))
                members.update(_members(node.target))
            case Operation(operator="&"):
                addressed |= _root(node.operand)
                members.update(_members(node.operand))
            case Call():
                calls |= _root(node.function)
                for argument in node.arguments:
                    passes |= _root(argument)
            case Declare():
                declared |= {one.name for one in node.declarators if not _is_static(one)}
            case Loop():
                loops = True
            case _:
                pass
    return Mentions(
        names=frozenset(names),
        writes=frozenset(writes - declared),
        through=frozenset(through - declared),
        addressed=frozenset(addressed - declared),
        passes=frozenset(passes - declared),
        calls=frozenset(calls),
        members=frozenset(members),
        loops=loops,
    )


def _is_static(one: Declarator) -> bool:
    return "static" in one.type.specifiers.storage


def addressed(value: Node) -> frozenset[str]:
    """The objects whose address, or whose name alone, stands in an initialiser."""
    return frozenset(node.text for node in nodes(value) if isinstance(node, Name))


def nodes(root: Node) -> Iterator[Node]:
    """Every node of a tree, without recursion."""
    pending: list[object] = [root]
    while pending:
        node = pending.pop()
        if isinstance(node, tuple):
            pending.extend(node)
        elif isinstance(node, Node):
            yield node
            pending.extend(getattr(node, field.name) for field in fields(node))
        elif hasattr(node, "value") and hasattr(node, "designators"):
            pending.extend((node.value, node.designators))


def _is_pointed(node: Node) -> bool:
    """Whether an lvalue leads through a pointer that `*` or `->` follows."""
    while isinstance(node, Member | Index):
        node = node.base
    return isinstance(node, Operation) and node.operator == "*"


def _members(node: Node) -> Iterator[str]:
    """The members on the way to what an lvalue designates."""
    while isinstance(node, Member | Index | Operation):
        if isinstance(node, Member):
            yield node.name
        node = node.operand if isinstance(node, Operation) else node.base


def _root(node: Node) -> set[str]:
    """The object that an lvalue, address or call expression starts from."""
    while True:
        match node:
            case Name():
                return {node.text}
            case Member() | Index():
                node = node.base
            case Operation(operator="*" | "&"):
                node = node.operand
            case _:
                return set()
