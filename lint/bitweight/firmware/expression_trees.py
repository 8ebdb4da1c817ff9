"""Expressions of the grammar's tree.

The grammar cannot know which names are types, so `(name)(x)` and `(name) - x` are read again here
with the types that the unit declares.
"""

from collections.abc import Callable, Mapping

from bitweight.firmware.declarators import Declarators
from bitweight.firmware.grammar import (
    AMBIGUOUS_SIGNS,
    Branch,
    broken,
    inner,
    is_broken,
    named,
    operator_at,
    span,
    strange,
)
from bitweight.firmware.syntax import (
    Assign,
    Braces,
    Call,
    Cast,
    Conditional,
    Entry,
    Expr,
    Increment,
    Index,
    Marked,
    Member,
    Number,
    Opaque,
    Operation,
    Pair,
    SizeOf,
    Specifiers,
    StatementExpr,
    Text,
    TypeSyntax,
)


class ExpressionTrees(Declarators):
    """Converts expressions, and names those that are the whole expansion of a marked macro."""

    def expr(self, node: Branch) -> Expr:
        """The expression of a node, `Opaque` where it is not followed."""
        if self.level > self.depth:
            return Opaque(**span(node), kind="an expression nested too deeply")
        self.level += 1
        try:
            convert = _EXPRESSIONS.get(node.type)
            if is_broken(node):
                made: Expr = broken(node)
            else:
                made = convert(self, node) if convert else strange(node)
        finally:
            self.level -= 1
        mark = self.marks.get((node.start_byte, node.end_byte))
        if mark is not None and not (isinstance(made, Marked) and made.name == mark):
            return Marked(**span(node), name=mark, operand=made)
        return made

    def _paren(self, node: Branch) -> Expr:
        below = inner(node)
        if len(below) != 1:
            return broken(node)
        if below[0].type == "compound_statement":
            return StatementExpr(**span(node), body=self.block(below[0]))
        return self.expr(below[0])

    def _name(self, node: Branch) -> Expr:
        return named(node, self.text(node))

    def _number(self, node: Branch) -> Expr:
        text = self.text(node)
        sign = text[0] if text[0] in "+-" else ""
        start = node.start_byte + len(sign)
        number = Number(start=start, end=node.end_byte, text=text[len(sign) :])
        if not sign:
            return number
        return Operation(**span(node), operator=sign, operand=number)

    def _string(self, node: Branch) -> Expr:
        return Text(**span(node), text=self.text(node))

    # --- calls and casts ----------------------------------------------------------------------

    def _call(self, node: Branch) -> Expr:
        function = node.child_by_field_name("function")
        arguments = node.child_by_field_name("arguments")
        if function is None or arguments is None:
            return broken(node)
        if is_broken(arguments):
            return broken(node)
        given = inner(arguments)
        cast = self._type_in_parentheses(function)
        if cast is not None and given:
            return Cast(**span(node), type=cast, operand=self._comma_joined(given))
        return Call(
            **span(node),
            function=self.expr(function),
            arguments=tuple(self.expr(child) for child in given),
        )

    def _comma_joined(self, given: list[Branch]) -> Expr:
        """The operand of a cast that looks like a call: its arguments are a comma expression."""
        operand = self.expr(given[-1])
        for other in reversed(given[:-1]):
            operand = Pair(
                start=other.start_byte,
                end=operand.end,
                operator=",",
                left=self.expr(other),
                right=operand,
                at=other.end_byte,
            )
        return operand

    def _type_in_parentheses(self, node: Branch) -> TypeSyntax | None:
        """The type that `(name)` is, when the grammar took it for an expression."""
        if node.type != "parenthesized_expression" or node.named_child_count != 1:
            return None
        below = node.named_children[0]
        if below.type == "identifier" and self.is_type(self.text(below)):
            return TypeSyntax(specifiers=Specifiers(words=(self.text(below),)))
        return None

    def _cast(self, node: Branch) -> Expr:
        written = node.child_by_field_name("type")
        if written is None:
            return broken(node)
        return Cast(
            **span(node), type=self.type_name(written), operand=self.required(node, "value")
        )

    def _cast_of_sign(self, cast: TypeSyntax, sign: str, node: Branch, right: Branch) -> Expr:
        """`(type) - a * b`, which the grammar reads as a difference, is `((type)(-a)) * b`."""
        made = self.expr(right)
        spine: list[Pair] = []
        follow: Branch | None = right
        while follow is not None and follow.type == "binary_expression" and isinstance(made, Pair):
            spine.append(made)
            made = made.left
            follow = follow.child_by_field_name("left")
        start = node.start_byte
        signed = Operation(start=start, end=made.end, operator=sign, operand=made)
        result: Expr = Cast(start=start, end=made.end, type=cast, operand=signed)
        for pair in reversed(spine):
            result = Pair(
                start=start,
                end=pair.end,
                operator=pair.operator,
                left=result,
                right=pair.right,
                at=pair.at,
            )
        return result

    def _sizeof(self, node: Branch) -> Expr:
        written = node.child_by_field_name("type")
        value = node.child_by_field_name("value")
        type_ = self.type_name(written) if written is not None else None
        if type_ is None and value is not None:
            type_ = self._type_in_parentheses(value)
        operand = self.optional(value) if type_ is None else None
        return SizeOf(**span(node), type=type_, operand=operand)

    # --- operators ----------------------------------------------------------------------------

    def _index(self, node: Branch) -> Expr:
        return Index(
            **span(node), base=self.required(node, "argument"), index=self.required(node, "index")
        )

    def _member(self, node: Branch) -> Expr:
        base = self.required(node, "argument")
        name = node.child_by_field_name("field")
        if self._operator(node) == "->":
            base = Operation(start=base.start, end=base.end, operator="*", operand=base)
        return Member(**span(node), base=base, name=self.text(name) if name else "")

    def _operator(self, node: Branch) -> str:
        operator = node.child_by_field_name("operator")
        return self.text(operator) if operator is not None else "?"

    def _unary(self, node: Branch) -> Expr:
        return Operation(
            **span(node), operator=self._operator(node), operand=self.required(node, "argument")
        )

    def _update(self, node: Branch) -> Expr:
        target = self.required(node, "argument")
        return Increment(
            **span(node),
            operator=self._operator(node),
            target=target,
            prefix=operator_at(node) < target.start,
        )

    def _binary(self, node: Branch) -> Expr:
        left = node.child_by_field_name("left")
        right = node.child_by_field_name("right")
        if left is None or right is None:
            return broken(node)
        sign = self._operator(node)
        cast = self._type_in_parentheses(left) if sign in AMBIGUOUS_SIGNS else None
        if cast is not None:
            return self._cast_of_sign(cast, sign, node, right)
        return Pair(
            **span(node),
            operator=sign,
            left=self.expr(left),
            right=self.expr(right),
            at=operator_at(node),
        )

    def _comma(self, node: Branch) -> Expr:
        left, right = self.required(node, "left"), self.required(node, "right")
        return Pair(**span(node), operator=",", left=left, right=right, at=right.start)

    def _assign(self, node: Branch) -> Expr:
        return Assign(
            **span(node),
            operator=self._operator(node),
            target=self.required(node, "left"),
            value=self.required(node, "right"),
            at=operator_at(node),
        )

    def _conditional(self, node: Branch) -> Expr:
        return Conditional(
            **span(node),
            condition=self.required(node, "condition"),
            then=self.optional(node.child_by_field_name("consequence")),
            other=self.required(node, "alternative"),
        )

    # --- initialisers -------------------------------------------------------------------------

    def _braces(self, node: Branch) -> Expr:
        return Braces(**span(node), entries=tuple(self._entry(child) for child in inner(node)))

    def _entry(self, node: Branch) -> Entry:
        if node.type != "initializer_pair":
            return Entry(designators=(), value=self.expr(node))
        designators: list[str | Expr] = []
        for part in node.named_children:
            if part.type in ("field_designator", "field_identifier"):
                designators.append(self.text(part).lstrip(". \t\r\n"))
            elif part.type == "subscript_designator" and part.named_children:
                designators.append(self.expr(part.named_children[0]))
            elif part.type.endswith("designator"):
                designators.append(strange(part))
        return Entry(designators=tuple(designators), value=self.required(node, "value"))

    def _compound(self, node: Branch) -> Expr:
        written = node.child_by_field_name("type")
        value = node.child_by_field_name("value")
        if written is None or value is None:
            return broken(node)
        entries = tuple(self._entry(child) for child in inner(value))
        return Braces(**span(node), entries=entries, type=self.type_name(written))


_EXPRESSIONS: Mapping[str, Callable[[ExpressionTrees, Branch], Expr]] = {
    "parenthesized_expression": ExpressionTrees._paren,
    "identifier": ExpressionTrees._name,
    "type_identifier": ExpressionTrees._name,
    "true": ExpressionTrees._name,
    "false": ExpressionTrees._name,
    "null": ExpressionTrees._name,
    "number_literal": ExpressionTrees._number,
    "char_literal": ExpressionTrees._number,
    "string_literal": ExpressionTrees._string,
    "concatenated_string": ExpressionTrees._string,
    "call_expression": ExpressionTrees._call,
    "subscript_expression": ExpressionTrees._index,
    "field_expression": ExpressionTrees._member,
    "pointer_expression": ExpressionTrees._unary,
    "unary_expression": ExpressionTrees._unary,
    "update_expression": ExpressionTrees._update,
    "binary_expression": ExpressionTrees._binary,
    "comma_expression": ExpressionTrees._comma,
    "assignment_expression": ExpressionTrees._assign,
    "conditional_expression": ExpressionTrees._conditional,
    "cast_expression": ExpressionTrees._cast,
    "sizeof_expression": ExpressionTrees._sizeof,
    "initializer_list": ExpressionTrees._braces,
    "compound_literal_expression": ExpressionTrees._compound,
}
