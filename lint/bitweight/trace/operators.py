"""C operators on values of a run: numbers, pointers, structs."""

from bitweight.arithmetic import building
from bitweight.arithmetic.expressions import Binary, Expression, Literal, Purpose
from bitweight.firmware.objects import (
    ANYWHERE,
    Arithmetic,
    Array,
    Location,
    ObjectType,
    Pointer,
    Root,
    Strange,
)
from bitweight.firmware.syntax import (
    Assign,
    Cast,
    Conditional,
    Expr,
    Increment,
    Marked,
    Name,
    Node,
    Operation,
    Pair,
    SizeOf,
    TypeSyntax,
)
from bitweight.trace.lvalues import shifted
from bitweight.trace.matching import Matching
from bitweight.trace.memory import Address, Routine, Value, is_number, value_type

_TRUTHS = building.COMPARISONS | building.LOGICAL
_OWN = frozenset({"local", "object"})
"""Objects of which two are never the same under different names."""


class Operators(Matching):
    """Evaluates operators."""

    # --- unary ----------------------------------------------------------------------------------

    def operation(self, node: Operation) -> Value:
        """A unary operator."""
        match node.operator:
            case "&":
                return self._address_of(node)
            case "*":
                return self._indirection(node)
            case "!":
                operand = self.decision(node.operand)
                return building.unary(self.model, "!", operand, self.spelled(node.start))
            case _:
                operand = self.number(node.operand)
                return building.unary(self.model, node.operator, operand, self.spelled(node.start))

    def decision(self, node: Expr) -> Expression:
        """The value of a condition; a pointer to something known is not null."""
        return self._truth(self.value(node), node)

    def _truth(self, value: Value, node: Expr) -> Expression:
        if isinstance(value, Address | Routine):
            return Literal(value=1, type=self.model.int_)
        return self.as_number(value, node)

    def _address_of(self, node: Operation) -> Value:
        found = self.lvalue(node.operand)
        if found is None:
            return self.unknown("an address of this form is not followed", node)
        location, type_ = found
        if isinstance(node.operand, Name) and location.root.kind == "register":
            routine = self.name(node.operand)
            if isinstance(routine, Routine):
                return routine
        return Address(target=location, type=type_)

    def _indirection(self, node: Operation) -> Value:
        value = self.value(node.operand)
        if isinstance(value, Routine):
            return value
        base = self.pointed(value, node.operand)
        if base is None:
            return self.unknown("a pointer of this form is not followed", node)
        code = self.located(base.target, node)
        return code if code is not None else self.read(base.target, base.type, node)

    def increment(self, node: Increment) -> Value:
        """`++` and `--`."""
        found = self.lvalue(node.target)
        if found is None:
            return self.unknown("an increment of this form is not followed", node)
        before = self.read(*found, node)
        step = 1 if node.operator == "++" else -1
        if isinstance(before, Address):
            moved, type_ = shifted(before, step)
            after: Value = Address(target=moved, type=type_)
        else:
            after = self._stepped(self.as_number(before, node), step, node)
        stored = self.store(*found, after, node)
        return stored if node.prefix else before

    def _stepped(self, number: Expression, step: int, node: Increment) -> Expression:
        fixed = self.context.constant(number)
        if not isinstance(fixed, int):
            one = Literal(value=1, type=self.model.int_)
            sign = "+" if step > 0 else "-"
            return building.binary(self.model, sign, number, one, self.used(node))
        # A plain number keeps loop counters short.
        type_ = self.model.usual(number.type, self.model.int_)
        sum_ = Literal(value=fixed + step, type=type_)
        after = building.convert(sum_, number.type, Purpose.STORE, self.used(node))
        counted = self.context.constant(after)
        return Literal(value=counted if counted is not None else 0, type=number.type)

    # --- binary ---------------------------------------------------------------------------------

    def pair(self, node: Pair) -> Value:
        """A binary operator, the comma included."""
        count = self._element_count(node)
        if count is not None:
            return Literal(value=count, type=self.model.size_t)
        left = self.value(node.left)
        if node.operator == ",":
            return self.value(node.right)
        if node.operator in ("&&", "||"):
            return self._logical(node, self._truth(left, node.left))
        return self._computed(node, left, self.value(node.right))

    def _computed(self, node: Pair, left: Value, right: Value) -> Value:
        if isinstance(left, Address) or isinstance(right, Address):
            return self._pointer_pair(node, left, right)
        return building.binary(
            self.model,
            node.operator,
            self.as_number(left, node.left),
            self.as_number(right, node.right),
            self.spelled(node.at),
        )

    def _logical(self, node: Pair, first: Expression) -> Value:
        known = self.context.constant(first)
        if known is not None:
            if bool(known) == (node.operator == "||"):
                return Literal(value=int(bool(known)), type=self.model.int_)
            return self._as_truth(self.decision(node.right), node)
        before = self.state.copy()
        second = self.decision(node.right)
        if before.values != self.state.values:
            condition = first
            if node.operator == "||":
                condition = building.unary(self.model, "!", first, self.used(node))
            self.state = self.join(condition, self.state, before, node)
        return building.binary(self.model, node.operator, first, second, self.spelled(node.at))

    def _as_truth(self, value: Expression, node: Pair) -> Expression:
        """0 or 1: what `&&` and `||` make of the operand that decides."""
        if isinstance(value, Binary) and value.operator in _TRUTHS:
            return value
        zero = Literal(value=0, type=self.model.int_)
        return building.binary(self.model, "!=", value, zero, self.spelled(node.at))

    def _pointer_pair(self, node: Pair, left: Value, right: Value) -> Value:
        if isinstance(left, Address) and is_number(right) and node.operator in "+-":
            return self._moved(left, right, 1 if node.operator == "+" else -1)
        if isinstance(right, Address) and is_number(left) and node.operator == "+":
            return self._moved(right, left, 1)
        if node.operator in ("==", "!="):
            same = self._same(left, right)
            if same is not None:
                return Literal(value=int(same == (node.operator == "==")), type=self.model.int_)
        elif isinstance(left, Address) and isinstance(right, Address):
            apart = _elements_apart(left.target, right.target)
            if apart is not None:
                return self._distance(node, apart)
        return self.unknown("pointers compared or subtracted", node)

    def _distance(self, node: Pair, apart: int) -> Value:
        """Two pointers into one array compared or subtracted, by the elements between them."""
        number = Literal(value=apart, type=self.model.long)
        if node.operator == "-":
            return number
        zero = Literal(value=0, type=self.model.long)
        return building.binary(self.model, node.operator, number, zero, self.spelled(node.at))

    def _same(self, left: Value, right: Value) -> bool | None:
        """Whether two pointers point to the same object; None where that is not known."""
        if is_number(left) or is_number(right):
            known = [self.fixed(one) for one in (left, right)]
            return False if 0 in known else None
        if not isinstance(left, Address) or not isinstance(right, Address):
            return None
        if ANYWHERE in (*left.target.path, *right.target.path):
            return None
        if left.target == right.target:
            return True
        return False if {left.target.root.kind, right.target.root.kind} <= _OWN else None

    def _moved(self, base: Address, by: Expression, sign: int) -> Address:
        step = self.context.constant(by)
        target, type_ = shifted(base, sign * step if isinstance(step, int) else None)
        return Address(target=target, type=type_)

    def _element_count(self, node: Pair) -> int | None:
        """`sizeof a / sizeof a[0]` whatever an element's size is."""
        left, right = _operand(node.left), _operand(node.right)
        if node.operator != "/" or left is None or right is None:
            return None
        whole, part = self.declared_type(left), self.declared_type(right)
        if isinstance(whole, Array) and part is not None and whole.of == part:
            return whole.length
        return None

    # --- assignment and choice ------------------------------------------------------------------

    def assign(self, node: Assign) -> Value:
        """`=` and the compound assignments."""
        found = self.lvalue(node.target)
        if node.operator == "=":
            value = self.value(node.value)
        else:
            old = self.read(*found, node) if found else self.unknown("an unknown object", node)
            pair = Pair(
                start=node.start,
                end=node.end,
                operator=node.operator[:-1],
                left=node.target,
                right=node.value,
                at=node.at,
            )
            value = self._computed(pair, old, self.value(node.value))
        if found is None or self.is_reading(node.target):
            return value
        return self.store(*found, value, node)

    def conditional(self, node: Conditional) -> Value:
        """`condition ? then : other`, and `condition ?: other`."""
        condition = self.decision(node.condition)
        known = self.context.constant(condition)
        if known is not None:
            if not known:
                return self.value(node.other)
            return self.value(node.then) if node.then is not None else condition
        before = self.state.copy()
        then = self.value(node.then) if node.then is not None else condition
        after = self.state
        self.state = before
        other = self.value(node.other)
        self.state = self.join(condition, after, self.state, node)
        return self.joined(condition, then, other, node)

    # --- types ----------------------------------------------------------------------------------

    def resolved(self, syntax: TypeSyntax) -> ObjectType:
        """As below; a `typeof` has the type of its operand, which is not evaluated."""
        like = syntax.specifiers.like
        if like is None:
            return super().resolved(syntax)
        declared = self.declared_type(like)
        if declared is None or isinstance(declared, Strange):
            declared = value_type(self.unevaluated(like))
        made = self.unit.declarations.derived(declared, syntax.derivations)
        return self.sized(made, syntax, self.unit)

    def cast(self, node: Cast) -> Value:
        """`(type)operand`."""
        type_ = self.resolved(node.type)
        value = self.value(node.operand)
        match type_:
            case Arithmetic() if isinstance(value, Address):
                return self.unknown("an address as a number", node, type_.type)
            case Arithmetic():
                number = self.as_number(value, node.operand)
                place = self.spelled(node.start)
                return building.convert(number, type_.type, Purpose.CAST, place)
            case Pointer() if isinstance(value, Address):
                return self.retyped(value, type_.to)
            case Pointer() if is_number(value):
                return self._address(value, type_.to, node)
            case _:
                return value

    def _address(self, value: Expression, to: ObjectType, node: Node) -> Value:
        fixed = self.context.constant(value)
        if fixed is None:
            return Address(target=Location(Root("pointee", self.text(node))), type=to)
        return Address(target=Location(Root("address", f"0x{int(fixed):X}")), type=to)

    def size_of(self, node: SizeOf) -> Value:
        """`sizeof`."""
        type_: ObjectType | None = None
        if node.type is not None:
            type_ = self.resolved(node.type)
        elif node.operand is not None:
            type_ = self.declared_type(node.operand)
        size = self.size(type_) if type_ is not None else None
        if size is None:
            return self.unknown("the size of a type that is not known", node, self.model.size_t)
        return Literal(value=size, type=self.model.size_t)


def _operand(node: Expr) -> Expr | None:
    """The expression whose size a `sizeof` asks for."""
    while isinstance(node, Marked):
        node = node.operand
    return node.operand if isinstance(node, SizeOf) else None


def _elements_apart(left: Location, right: Location) -> int | None:
    """How many elements of one array lie between two of them."""
    if left.root != right.root or left.path[:-1] != right.path[:-1]:
        return None
    if not left.path or not right.path:
        return 0 if left.path == right.path else None
    first, second = left.path[-1], right.path[-1]
    return first - second if isinstance(first, int) and isinstance(second, int) else None
