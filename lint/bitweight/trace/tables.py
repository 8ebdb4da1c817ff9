"""Reads of a small table at a subscript that is not constant: one entry or another, by equality."""

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Code, Expression, Literal, walk
from bitweight.firmware.objects import ANYWHERE, Arithmetic, Array, Location, ObjectType
from bitweight.firmware.syntax import Expr, Index, Marked, Member
from bitweight.trace.contexts import shown
from bitweight.trace.memory import Address, is_number
from bitweight.trace.operators import Operators

_MOST_ENTRIES = 64


class Tables(Operators):
    """Reads tables."""

    def entry(self, found: tuple[Location, ObjectType], node: Expr) -> Expression | None:
        """What a table holds at a subscript that depends on the code; None where it is none."""
        location, type_ = found
        if location.path.count(ANYWHERE) != 1 or not isinstance(type_, Arithmetic):
            return None
        subscripted = _subscripted(node)
        if subscripted is None or location.root.kind not in ("object", "local"):
            return None
        base = self.unevaluated(subscripted.base)
        step = self.unevaluated(subscripted.index)
        at = location.path.index(ANYWHERE)
        if not isinstance(base, Address) or not is_number(step):
            return None
        if not any(isinstance(one, Code) and one.channels for one in walk(step)):
            # Another subscript is not known for any code.
            return None
        if not step.type.is_integer or base.target.path != (*location.path[:at], 0):
            return None
        return self._by_equality(location, at, type_, step, node)

    def _by_equality(
        self, location: Location, at: int, type_: Arithmetic, step: Expression, node: Expr
    ) -> Expression | None:
        whole = Location(location.root, location.path[:at])
        array = self.type_at(whole)
        if not isinstance(array, Array) or not 0 < (array.length or 0) <= _MOST_ENTRIES:
            return None
        place = self.used(node)
        made: Expression = self.unknown(
            f"{shown(whole)} is a table of {array.length} entries, "
            "read at a subscript that depends on the code",
            node,
            type_.type,
        )
        for number in reversed(range(array.length or 0)):
            path = (*location.path[:at], number, *location.path[at + 1 :])
            value = self.read(Location(location.root, path), type_, node)
            if not is_number(value) or self.context.constant(value) is None:
                return None
            condition = building.binary(
                self.model, "==", step, Literal(value=number, type=self.model.int_), place
            )
            made = building.merge(condition, value, made, place)
        return made


def _subscripted(node: Expr) -> Index | None:
    """The subscript in an expression that reads an entry, or a member of one."""
    while isinstance(node, Member | Marked):
        node = node.base if isinstance(node, Member) else node.operand
    return node if isinstance(node, Index) else None
