"""Statements of the grammar's tree."""

from collections.abc import Callable, Mapping, Sequence

from bitweight.firmware.expression_trees import ExpressionTrees
from bitweight.firmware.grammar import Branch, broken, inner, is_broken, span, strange
from bitweight.firmware.syntax import (
    Block,
    Case,
    Declare,
    Evaluate,
    Expr,
    If,
    Jump,
    Label,
    Loop,
    Opaque,
    Return,
    Stmt,
    Switch,
)

_CONTROL = frozenset(
    f"{kind}_statement" for kind in ("if", "for", "while", "do", "switch", "labeled")
)
_UNKNOWN_HEAD = "a block behind a macro that is not defined"


class StatementTrees(ExpressionTrees):
    """Converts statements."""

    def block(self, node: Branch) -> Block:
        """The statements of a compound statement."""
        return Block(**span(node), items=self._statements(node.named_children))

    def stmt(self, node: Branch) -> Stmt:
        """The statement of a node, `Opaque` where it is not followed."""
        if self.level > self.depth:
            return Opaque(**span(node), kind="statements nested too deeply")
        self.level += 1
        try:
            if node.type == "function_definition":
                return Opaque(**span(node), kind=_UNKNOWN_HEAD)
            if node.type in _CONTROL and is_broken(node):
                return broken(node)
            convert = _STATEMENTS.get(node.type)
            return convert(self, node) if convert is not None else strange(node)
        finally:
            self.level -= 1

    def _statements(self, nodes: Sequence[Branch]) -> tuple[Stmt, ...]:
        found: list[Stmt] = []
        before: Branch | None = None
        for node in nodes:
            if node.type == "comment":
                continue
            if before is not None and node.type == "compound_statement" and _heads(before):
                found[-1] = Opaque(start=before.start_byte, end=node.end_byte, kind=_UNKNOWN_HEAD)
            else:
                found.append(self.stmt(node))
            before = node
        return tuple(found)

    def _body(self, node: Branch, field: str) -> Stmt:
        child = node.child_by_field_name(field)
        return self.stmt(child) if child is not None else broken(node)

    def _evaluate(self, node: Branch) -> Stmt:
        below = inner(node)
        if is_broken(node):
            return broken(node)
        if not below:
            return _nothing(node)
        return Evaluate(**span(node), expression=self.expr(below[0]))

    def _declare(self, node: Branch) -> Stmt:
        return Declare(
            **span(node), specifiers=self.specifiers(node), declarators=self.declaration(node)
        )

    def _if(self, node: Branch) -> Stmt:
        alternative = node.child_by_field_name("alternative")
        if alternative is not None and alternative.type == "else_clause":
            alternative = next(iter(inner(alternative)), None)
        return If(
            **span(node),
            condition=self.required(node, "condition"),
            then=self._body(node, "consequence"),
            other=self.stmt(alternative) if alternative is not None else None,
        )

    def _for(self, node: Branch) -> Stmt:
        before = node.child_by_field_name("initializer")
        first: Stmt | None = None
        if before is not None and before.type == "declaration":
            first = self._declare(before)
        elif before is not None:
            first = Evaluate(**span(before), expression=self.expr(before))
        return Loop(
            **span(node),
            before=first,
            condition=self.optional(node.child_by_field_name("condition")),
            step=self.optional(node.child_by_field_name("update")),
            body=self._body(node, "body"),
            first=False,
        )

    def _while(self, node: Branch) -> Stmt:
        return Loop(
            **span(node),
            before=None,
            condition=self.required(node, "condition"),
            step=None,
            body=self._body(node, "body"),
            first=node.type == "do_statement",
        )

    def _switch(self, node: Branch) -> Stmt:
        return Switch(
            **span(node),
            subject=self.required(node, "condition"),
            body=self._body(node, "body"),
        )

    def _case(self, node: Branch) -> Stmt:
        value = node.child_by_field_name("value")
        items = [child for child in inner(node) if value is None or child.id != value.id]
        last: Expr | None = None
        if value is not None and items and self._is_before_colon(items[0], node):
            last = self._range_end(items.pop(0))
        return Case(
            **span(node), value=self.optional(value), last=last, items=self._statements(items)
        )

    @staticmethod
    def _is_before_colon(item: Branch, node: Branch) -> bool:
        colon = next((child for child in node.children if child.type == ":"), None)
        return colon is not None and item.start_byte < colon.start_byte

    def _range_end(self, node: Branch) -> Expr:
        """The end of GNU's `case first ... last`, which the grammar does not know."""
        below = inner(node)
        is_range = self.text(node).startswith("...") and len(below) == 1
        return self.expr(below[0]) if is_range else broken(node)

    def _return(self, node: Branch) -> Stmt:
        below = inner(node)
        if is_broken(node):
            return Return(**span(node), value=broken(node))
        return Return(**span(node), value=self.expr(below[0]) if below else None)

    def _jump(self, node: Branch) -> Stmt:
        label = node.child_by_field_name("label")
        return Jump(
            **span(node),
            kind=node.type.removesuffix("_statement"),
            label=self.text(label) if label is not None else "",
        )

    def _label(self, node: Branch) -> Stmt:
        label = node.child_by_field_name("label")
        rest = [child for child in inner(node) if label is None or child.id != label.id]
        return Label(
            **span(node),
            name=self.text(label) if label else "",
            body=self.stmt(rest[0]) if rest else _nothing(node),
        )

    def _attributed(self, node: Branch) -> Stmt:
        below = [one for one in node.named_children if not one.type.startswith("attribute")]
        return self.stmt(below[-1]) if below else _nothing(node)

    def _type_only(self, node: Branch) -> Stmt:
        return Declare(**span(node), specifiers=self.specifiers_of([node]), declarators=())

    def _empty(self, node: Branch) -> Stmt:
        return _nothing(node)


def _heads(node: Branch) -> bool:
    """Whether what stands before a block is no statement: a macro that no header defines."""
    return node.type in ("ERROR", "type_identifier") or (
        node.type == "expression_statement" and any(one.is_missing for one in node.children)
    )


def _nothing(node: Branch) -> Block:
    return Block(**span(node), items=())


_STATEMENTS: Mapping[str, Callable[[StatementTrees, Branch], Stmt]] = {
    "compound_statement": StatementTrees.block,
    "expression_statement": StatementTrees._evaluate,
    "declaration": StatementTrees._declare,
    "if_statement": StatementTrees._if,
    "for_statement": StatementTrees._for,
    "while_statement": StatementTrees._while,
    "do_statement": StatementTrees._while,
    "switch_statement": StatementTrees._switch,
    "case_statement": StatementTrees._case,
    "return_statement": StatementTrees._return,
    "break_statement": StatementTrees._jump,
    "continue_statement": StatementTrees._jump,
    "goto_statement": StatementTrees._jump,
    "labeled_statement": StatementTrees._label,
    "attributed_statement": StatementTrees._attributed,
    "type_definition": StatementTrees._empty,
    "struct_specifier": StatementTrees._type_only,
    "union_specifier": StatementTrees._type_only,
    "enum_specifier": StatementTrees._type_only,
    ";": StatementTrees._empty,
}
