"""memcpy(), memmove() and memset() on known objects: copied element by element (C11 7.24)."""

from bitweight.arithmetic.expressions import Literal
from bitweight.firmware.objects import ANYWHERE, Arithmetic, Array, Location, ObjectType, Record
from bitweight.firmware.syntax import Call, Expr, SizeOf
from bitweight.trace.functions import Functions
from bitweight.trace.lvalues import shifted
from bitweight.trace.memory import Address, Value

_COPIES = frozenset({"memcpy", "memmove"})
BLOCKS = _COPIES | {"memset"}
_MOST_ELEMENTS = 256
_DEPTH = 8


class Blocks(Functions):
    """Follows the block functions of the C library."""

    def block(self, name: str, node: Call, values: list[Value]) -> Value | None:
        """What a block function returns, its work done; None where it cannot be followed."""
        if len(values) != 3:
            return None
        target, source = values[0], values[1]
        if not isinstance(target, Address) or ANYWHERE in target.target.path:
            return None
        count = self._count_of(target.type, values[2], node.arguments[2])
        if count is None:
            return None
        if name == "memset":
            done = self._cleared(target, source, count, node)
        else:
            done = isinstance(source, Address) and self._copied(target, source, count, node)
        return target if done else None

    def _count_of(self, type_: ObjectType, size: Value, written: Expr) -> int | None:
        """How many elements of a type a size stands for."""
        if isinstance(written, SizeOf) and isinstance(type_, Record):
            asked = self.resolved(written.type) if written.type is not None else None
            if asked is None and written.operand is not None:
                asked = self.declared_type(written.operand)
            return 1 if asked == type_ else None
        total, one = self.fixed(size), self.size(type_)
        if not isinstance(type_, Arithmetic) or not isinstance(total, int) or not one:
            return None
        count, rest = divmod(total, one)
        return count if not rest and 0 < count <= _MOST_ELEMENTS else None

    def _copied(self, target: Address, source: Address, count: int, node: Call) -> bool:
        if source.type != target.type or ANYWHERE in source.target.path:
            return False
        read = [self._copied_element(source, index, node) for index in range(count)]
        for index, value in enumerate(read):
            self.store(*shifted(target, index), value, node)
        return True

    def _copied_element(self, source: Address, index: int, node: Call) -> Value:
        location, type_ = shifted(source, index)
        code = self.located(location, node)
        return code if code is not None else self.read(location, type_, node)

    def _cleared(self, target: Address, by: Value, count: int, node: Call) -> bool:
        if self.fixed(by) != 0:
            return False
        if isinstance(target.type, Record):
            return self._cleared_record(target.target, target.type, node)
        zero = Literal(value=0, type=self.model.int_)
        for index in range(count):
            self.store(*shifted(target, index), zero, node)
        return True

    def _is_plain(self, type_: ObjectType, depth: int = 0) -> bool:
        """Whether an object is made of numbers alone, no two of which share their storage."""
        match type_:
            case Arithmetic():
                return True
            case Array(length=int() as length):
                return length <= _MOST_ELEMENTS and self._is_plain(type_.of, depth + 1)
            case Record(kind="struct") if depth < _DEPTH:
                members = self.field_names(type_)
                return bool(members) and all(
                    self._is_plain(inner, depth + 1) for _, inner in members
                )
            case _:
                return False

    def _cleared_record(self, location: Location, type_: Record, node: Call) -> bool:
        if not self._is_plain(type_):
            return False
        for path, inner in self.leaves(type_):
            self.store(location.at(path), inner, Literal(value=0, type=self.model.int_), node)
        return True
