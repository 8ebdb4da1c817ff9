"""From the text of a translation unit to the C tree of `syntax.py`.

The outside of a unit is converted at once, function bodies on demand.
"""

from dataclasses import dataclass, field

from bitweight.firmware.declarators import RECORDS, implicit_int
from bitweight.firmware.grammar import Branch, inner
from bitweight.firmware.statement_trees import StatementTrees
from bitweight.firmware.syntax import (
    Block,
    Declarator,
    Expr,
    FunctionOf,
    FunctionSyntax,
    Specifiers,
    Typedef,
    TypeSyntax,
)

_WRAPPERS = frozenset(
    {"ERROR", "linkage_specification", "declaration_list", "attributed_statement"}
)


@dataclass(frozen=True, slots=True, kw_only=True)
class UnitSyntax:
    """The outside of one unit: what it defines and declares, in order of appearance."""

    functions: tuple[FunctionSyntax, ...]
    prototypes: tuple[Declarator, ...]
    variables: tuple[Declarator, ...]
    typedefs: tuple[Typedef, ...]
    specifiers: tuple[Specifiers, ...]


@dataclass(slots=True)
class _Outside:
    """A `UnitSyntax` while it is collected."""

    functions: list[FunctionSyntax] = field(default_factory=list)
    prototypes: list[Declarator] = field(default_factory=list)
    variables: list[Declarator] = field(default_factory=list)
    typedefs: list[Typedef] = field(default_factory=list)
    specifiers: list[Specifiers] = field(default_factory=list)

    def finished(self) -> UnitSyntax:
        return UnitSyntax(
            functions=tuple(self.functions),
            prototypes=tuple(self.prototypes),
            variables=tuple(self.variables),
            typedefs=tuple(self.typedefs),
            specifiers=tuple(self.specifiers),
        )


class Parser(StatementTrees):
    """Converts one text: its outside, a function's body, or the one expression of a snippet."""

    def unit(self) -> UnitSyntax:
        """All top-level definitions and declarations."""
        nodes = self._top_level()
        outside = _Outside()
        for node, following in zip(nodes, [*nodes[1:], None], strict=True):
            self._add_outside(outside, node, following)
        return outside.finished()

    def body(self, function: FunctionSyntax) -> Block:
        """The statements of a function."""
        node = self.root.descendant_for_byte_range(function.body_start, function.end - 1)
        while node is not None and node.type != "compound_statement":
            node = node.parent
        if node is None:
            return Block(start=function.body_start, end=function.end, items=())
        return self.block(node)

    def expression(self) -> Expr | None:
        """The expression of a text made by `snippet`, or None if it is not one."""
        node = self.root
        if node.has_error:
            return None
        for wanted in ("function_definition", "compound_statement", "expression_statement"):
            found = next((child for child in node.children if child.type == wanted), None)
            if found is None:
                return None
            node = found
        below = inner(node)
        return self.expr(below[0]) if below else None

    def _top_level(self) -> list[Branch]:
        found: list[Branch] = []
        pending = list(reversed(self.root.children))
        while pending:
            node = pending.pop()
            if node.type in _WRAPPERS:
                pending.extend(reversed(node.children))
            elif node.is_named:
                found.append(node)
        return found

    def _add_outside(self, outside: _Outside, node: Branch, following: Branch | None) -> None:
        match node.type:
            case "function_definition":
                _add_function(outside, self._function(node))
            case "expression_statement" if node.named_child_count == 1:
                _add_function(outside, self._untyped_call(node.named_children[0], following))
            case "call_expression":
                _add_function(outside, self._untyped_call(node, following))
            case "type_definition":
                base = self.specifiers(node)
                outside.specifiers.append(base)
                for child in node.children_by_field_name("declarator"):
                    made = self.declarator(child, base)
                    outside.typedefs.append(Typedef(name=made.name, type=made.type))
            case "declaration":
                outside.specifiers.append(self.specifiers(node))
                for one in self.declaration(node):
                    is_function = isinstance(next(iter(one.type.derivations), None), FunctionOf)
                    (outside.prototypes if is_function else outside.variables).append(one)
            case kind if kind in RECORDS:
                outside.specifiers.append(self.specifiers_of([node]))

    # --- functions ----------------------------------------------------------------------------

    def _function(self, node: Branch) -> FunctionSyntax | None:
        declarator = node.child_by_field_name("declarator")
        body = node.child_by_field_name("body")
        if declarator is None or body is None or body.type != "compound_statement":
            return None
        named = node.child_by_field_name("type")
        if declarator.type == "parenthesized_declarator" and named is not None:
            # `name(parameter) { ... }`: the grammar takes the name for a type.
            return self._untyped(named, inner(declarator), body)
        made = self.declarator(declarator, self.specifiers(node))
        head = next(iter(made.type.derivations), None)
        if not isinstance(head, FunctionOf) or not made.name:
            return None
        parameters = head.parameters
        declared = [child for child in node.named_children if child.type == "declaration"]
        names = _identifier_list(declarator)
        if declared or names:
            parameters = self._old_parameters(names, declared)
        return FunctionSyntax(
            start=made.start,
            end=body.end_byte,
            name=made.name,
            type=made.type,
            parameters=parameters,
            body_start=body.start_byte,
        )

    def _old_parameters(
        self, names: list[Branch], declared: list[Branch]
    ) -> tuple[Declarator, ...]:
        """Parameters of an old-style definition (C11 6.9.1p6): names first, types after."""
        types = {one.name: one for node in declared for one in self.declaration(node)}
        texts = [(name, self.text(name)) for name in names]
        return tuple(types.get(text) or implicit_int(name, text) for name, text in texts)

    def _untyped_call(self, call: Branch, following: Branch | None) -> FunctionSyntax | None:
        """`name(...) { ... }` without a type: the grammar sees a call and a block."""
        if following is None or following.type != "compound_statement":
            return None
        name = call.child_by_field_name("function")
        arguments = call.child_by_field_name("arguments")
        if name is None or name.type != "identifier" or arguments is None:
            return None
        return self._untyped(name, inner(arguments), following)

    def _untyped(self, name: Branch, names: list[Branch], body: Branch) -> FunctionSyntax:
        """A function without a type, whose parameters have none either: all are int."""
        parameters = tuple(
            implicit_int(child, self.text(child)) for child in names if child.type == "identifier"
        )
        return FunctionSyntax(
            start=name.start_byte,
            end=body.end_byte,
            name=self.text(name),
            type=TypeSyntax(
                specifiers=Specifiers(words=("int",)),
                derivations=(FunctionOf(parameters=parameters),),
            ),
            parameters=parameters,
            body_start=body.start_byte,
        )


def _add_function(outside: _Outside, function: FunctionSyntax | None) -> None:
    if function is not None:
        outside.functions.append(function)
        outside.specifiers.append(function.type.specifiers)


def _identifier_list(declarator: Branch) -> list[Branch]:
    """The names of an old-style definition's parameters."""
    names = declarator.child_by_field_name("parameters")
    children = names.named_children if names is not None else []
    return [child for child in children if child.type == "identifier"]


def snippet(text: str) -> str:
    """A text whose `Parser.expression` is the expression given."""
    return f"void snippet(void) {{ {text}\n; }}"
