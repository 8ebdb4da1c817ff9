"""What a value is made from: the channels whose codes go into it."""

from collections.abc import Mapping

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Code,
    Expression,
    Literal,
    Unary,
    Unknown,
    children,
    walk,
)

_DECISIONS = building.COMPARISONS | building.LOGICAL


def measures(
    root: Expression,
    tainted: Mapping[int, frozenset[str]],
    known: dict[int, frozenset[str]] | None = None,
) -> frozenset[str]:
    """The channels whose code the value is made from; what only decides does not count.

    `tainted` says which unknowns were made from which codes, by identity. `known` is what earlier
    calls found, by identity; what this one finds is added.
    """
    found = {} if known is None else known
    for node in walk(root, found):
        match node:
            case Code():
                here = frozenset(node.channels) | tainted.get(id(node), frozenset())
            case Unknown() | Literal():
                here = tainted.get(id(node), frozenset())
            case Binary(operator=operator) if operator in _DECISIONS:
                here = frozenset()
            case Unary(operator="!"):
                here = frozenset()
            case Choose():
                here = found[id(node.then)] | found[id(node.other)]
            case _:
                here = frozenset().union(*(found[id(child)] for child in children(node)))
        found[id(node)] = here
    return found[id(root)]
