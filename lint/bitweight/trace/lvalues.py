"""The object that an expression designates, and where pointers point."""

from bitweight.firmware.objects import ANYWHERE, Location, ObjectType, Record, Root, Strange
from bitweight.firmware.syntax import Braces, Expr, Index, Marked, Member, Name, Node, Operation
from bitweight.trace.contexts import shown
from bitweight.trace.memory import Address, Copy, Value, is_number
from bitweight.trace.names import Names


class Lvalues(Names):
    """Finds objects by expression."""

    def lvalue(self, node: Expr) -> tuple[Location, ObjectType] | None:
        """The object an expression designates, or None if it designates none that is known."""
        match node:
            case Name():
                return self.designated(node)
            case Marked():
                return self.lvalue(node.operand)
            case Member():
                return self._member(node)
            case Index():
                return self._element(node)
            case Operation(operator="*"):
                return self.pointee(node.operand)
            case Braces():
                made = self.value(node)
                return (made.source, made.type) if isinstance(made, Copy) else None
            case _:
                return None

    def _member(self, node: Member) -> tuple[Location, ObjectType] | None:
        base = self.lvalue(node.base)
        if base is None:
            value = self.value(node.base)
            if not isinstance(value, Copy):
                return None
            base = (self._temporary(value, node), value.type)
        location, type_ = base
        part = location.part(node.name)
        if isinstance(type_, Record):
            others = self.sharing(type_, node.name)
            if others:
                self.context.sharing[part] = tuple(location.part(other) for other in others)
        inner = self.member_type(type_, node.name)
        if inner is None:
            inner = type_ if isinstance(type_, Strange) else Strange(name="")
        return part, inner

    def _temporary(self, value: Copy, node: Node) -> Location:
        location = self.fresh("temporary")
        self.put(location, value.type, value, node)
        return location

    def fresh(self, name: str) -> Location:
        """A local object that no declaration names."""
        self.frame_count += 1
        return Location(Root("local", name, f"#{self.frame_count}"))

    def _element(self, node: Index) -> tuple[Location, ObjectType] | None:
        step = self.value(node.index)
        value = self.value(node.base)
        if isinstance(step, Address) and is_number(value):
            # C11 6.5.2.1p2: a[1] and 1[a] are the same.
            step, value = value, step
        base = self.pointed(value, node.base)
        if base is None:
            return None
        by = self.fixed(step)
        return shifted(base, by if isinstance(by, int) else None)

    def pointee(self, node: Expr) -> tuple[Location, ObjectType] | None:
        """What `*node` designates."""
        base = self.pointer(node)
        return (base.target, base.type) if base is not None else None

    def pointer(self, node: Expr) -> Address | None:
        """An expression as a pointer; what points nowhere known gets a place of its own name."""
        return self.pointed(self.value(node), node)

    def pointed(self, value: Value, node: Expr) -> Address | None:
        """A value as a pointer; None for functions and structs."""
        if isinstance(value, Address):
            return value
        if not is_number(value):
            return None
        fixed = self.context.constant(value)
        if fixed is not None:
            root = Root("address", f"0x{int(fixed):X}")
            return Address(target=Location(root), type=Strange(name=""))
        known = self.context.inputs.get(id(value))
        text = self.text(node)
        if known is not None and known.location is not None:
            text = shown(known.location)
        return Address(target=Location(Root("pointee", text)), type=Strange(name=""))


def shifted(base: Address, step: int | None) -> tuple[Location, ObjectType]:
    """The element `step` elements from where a pointer points; None stands for any element."""
    path = base.target.path
    if step == 0:
        return base.target, base.type
    if path and (isinstance(path[-1], int) or path[-1] == ANYWHERE):
        last = path[-1]
        moved = ANYWHERE if step is None or isinstance(last, str) else last + step
        return Location(base.target.root, (*path[:-1], moved)), base.type
    return base.target.part(ANYWHERE if step is None else step), base.type
