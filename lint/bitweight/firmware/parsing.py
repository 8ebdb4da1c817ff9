"""From the text of a translation unit to the C tree of `syntax.py`.

The only importer of the C grammar. Function bodies are converted on demand, the outside of a unit at
once. The grammar cannot know which names are types, so `(name)(x)` and `(name) - x` are read again here with
the types that the unit declares. Recursion is bounded: what nests deeper becomes `Opaque`.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import tree_sitter
import tree_sitter_c

from bitweight.firmware.syntax import (
    ArrayOf,
    Assign,
    Block,
    Braces,
    Call,
    Case,
    Cast,
    Conditional,
    Declarator,
    Declare,
    Derivation,
    Entry,
    Enumerator,
    Evaluate,
    Expr,
    Field,
    FunctionOf,
    FunctionSyntax,
    If,
    Increment,
    Index,
    Jump,
    Label,
    Loop,
    Marked,
    Member,
    Name,
    Number,
    Opaque,
    Operation,
    Pair,
    PointerTo,
    Return,
    SizeOf,
    Specifiers,
    StatementExpr,
    Stmt,
    Switch,
    Text,
    Typedef,
    TypeSyntax,
)

_LANGUAGE = tree_sitter.Language(tree_sitter_c.language())
_SKIPPED = frozenset({"comment", ";", "{", "}", "(", ")", ","})
_WRAPPERS = frozenset(
    {"ERROR", "linkage_specification", "declaration_list", "attributed_statement"}
)
_TYPE_WORDS = frozenset({"primitive_type", "type_identifier", "sized_type_specifier"})
_RECORDS = {"struct_specifier": "struct", "union_specifier": "union", "enum_specifier": "enum"}
_SIGN_OR_ADDRESS = frozenset({"-", "+", "*", "&"})

type_node = tree_sitter.Node


@dataclass(frozen=True, slots=True, kw_only=True)
class UnitSyntax:
    """The outside of one unit: what it defines and declares, in order of appearance."""

    functions: tuple[FunctionSyntax, ...]
    prototypes: tuple[Declarator, ...]
    variables: tuple[Declarator, ...]
    typedefs: tuple[Typedef, ...]
    specifiers: tuple[Specifiers, ...]


class Parser:
    """Converts one text. `is_type` answers for names; `marks` are macro expansions to be named."""

    def __init__(
        self,
        text: str,
        *,
        is_type: Callable[[str], bool],
        marks: Mapping[tuple[int, int], str] | None = None,
        depth: int = 200,
    ) -> None:
        # One byte a character keeps every offset: what is not ASCII stands in comments and strings.
        self._bytes = text.encode("ascii", "replace")
        self._known = is_type
        self._types: set[str] = set()
        self._marks = marks or {}
        self._depth = depth
        self._level = 0
        self._tree = tree_sitter.Parser(_LANGUAGE).parse(self._bytes)

    def is_type(self, name: str) -> bool:
        """Whether the name is a type here: declared by the unit or known to the target."""
        return name in self._types or self._known(name)

    # --- outside ---------------------------------------------------------------------------

    def unit(self) -> UnitSyntax:
        """All top-level definitions and declarations."""
        nodes = self._top_level()
        for node in nodes:
            if node.type == "type_definition":
                self._types.update(
                    self._name_of(child) for child in node.children_by_field_name("declarator")
                )
        functions: list[FunctionSyntax] = []
        prototypes: list[Declarator] = []
        variables: list[Declarator] = []
        typedefs: list[Typedef] = []
        specifiers: list[Specifiers] = []
        for node, following in zip(nodes, [*nodes[1:], None], strict=True):
            if node.type in ("function_definition", "expression_statement"):
                function = (
                    self._function(node)
                    if node.type == "function_definition"
                    else self._untyped_function(node, following)
                )
                if function is not None:
                    functions.append(function)
                    specifiers.append(function.type.specifiers)
            elif node.type == "type_definition":
                base = self._specifiers(node)
                specifiers.append(base)
                for child in node.children_by_field_name("declarator"):
                    made = self._declarator(child, base)
                    typedefs.append(Typedef(name=made.name, type=made.type))
            elif node.type == "declaration":
                declared = self._declaration(node)
                specifiers.append(self._specifiers(node))
                for one in declared:
                    derived = one.type.derivations
                    is_function = bool(derived) and isinstance(derived[0], FunctionOf)
                    (prototypes if is_function else variables).append(one)
            elif node.type in _RECORDS:
                specifiers.append(self._specifier_of([node]))
        return UnitSyntax(
            functions=tuple(functions),
            prototypes=tuple(prototypes),
            variables=tuple(variables),
            typedefs=tuple(typedefs),
            specifiers=tuple(specifiers),
        )

    def body(self, function: FunctionSyntax) -> Block:
        """The statements of a function."""
        node = self._tree.root_node.descendant_for_byte_range(function.body_start, function.end - 1)
        while node is not None and node.type != "compound_statement":
            node = node.parent
        if node is None:
            return Block(start=function.body_start, end=function.end, items=())
        return self._block(node)

    def expression(self) -> Expr | None:
        """The expression of a text made by `snippet`, or None if it is not one."""
        node = self._tree.root_node
        if node.has_error:
            return None
        for wanted in ("function_definition", "compound_statement", "expression_statement"):
            found = [child for child in node.children if child.type == wanted]
            if not found:
                return None
            node = found[0]
        children = [child for child in node.named_children if child.type != "comment"]
        return self._expr(children[0]) if children else None

    def _top_level(self) -> list[type_node]:
        found: list[type_node] = []
        pending = list(reversed(self._tree.root_node.children))
        while pending:
            node = pending.pop()
            if node.type in _WRAPPERS:
                pending.extend(reversed(node.children))
            elif node.is_named:
                found.append(node)
        return found

    def _function(self, node: type_node) -> FunctionSyntax | None:
        declarator = node.child_by_field_name("declarator")
        body = node.child_by_field_name("body")
        if declarator is None or body is None or body.type != "compound_statement":
            return None
        made = self._declarator(declarator, self._specifiers(node))
        derived = made.type.derivations
        if not derived or not isinstance(derived[0], FunctionOf) or not made.name:
            return None
        declared = [child for child in node.named_children if child.type == "declaration"]
        parameters = derived[0].parameters
        if declared or self._is_identifier_list(declarator):
            parameters = self._old_parameters(declarator, declared)
        return FunctionSyntax(
            start=made.start,
            end=body.end_byte,
            name=made.name,
            type=made.type,
            parameters=parameters,
            body_start=body.start_byte,
        )

    @staticmethod
    def _is_identifier_list(declarator: type_node) -> bool:
        names = declarator.child_by_field_name("parameters")
        return names is not None and any(c.type == "identifier" for c in names.named_children)

    def _old_parameters(
        self, declarator: type_node, declared: list[type_node]
    ) -> tuple[Declarator, ...]:
        """Parameters of an old-style definition (C11 6.9.1p6): names first, types after."""
        types = {one.name: one for node in declared for one in self._declaration(node)}
        names = declarator.child_by_field_name("parameters")
        found = []
        for child in names.named_children if names is not None else []:
            if child.type != "identifier":
                continue
            name = self._text(child)
            found.append(types.get(name) or self._implicit_int(name, child))
        return tuple(found)

    @staticmethod
    def _implicit_int(name: str, node: type_node) -> Declarator:
        specifiers = Specifiers(words=("int",))
        return Declarator(
            start=node.start_byte,
            end=node.end_byte,
            name=name,
            type=TypeSyntax(specifiers=specifiers),
        )

    def _untyped_function(
        self, node: type_node, following: type_node | None
    ) -> FunctionSyntax | None:
        """`name(...) { ... }` without a type: the grammar sees a call and a block."""
        call = node.named_children[0] if node.named_child_count == 1 else None
        if call is None or following is None or following.type != "compound_statement":
            return None
        name = call.child_by_field_name("function")
        arguments = call.child_by_field_name("arguments")
        if name is None or name.type != "identifier" or arguments is None:
            return None
        parameters = tuple(
            self._implicit_int(self._text(child), child)
            for child in arguments.named_children
            if child.type == "identifier"
        )
        return FunctionSyntax(
            start=name.start_byte,
            end=following.end_byte,
            name=self._text(name),
            type=TypeSyntax(
                specifiers=Specifiers(words=("int",)),
                derivations=(FunctionOf(parameters=parameters),),
            ),
            parameters=parameters,
            body_start=following.start_byte,
        )

    # --- declarations ----------------------------------------------------------------------

    def _declaration(self, node: type_node) -> tuple[Declarator, ...]:
        base = self._specifiers(node)
        return tuple(
            self._declarator(child, base) for child in node.children_by_field_name("declarator")
        )

    def _specifiers(self, node: type_node) -> Specifiers:
        declarators = {child.id for child in node.children_by_field_name("declarator")}
        parts: list[type_node] = []
        for child in node.children:
            if child.id in declarators or child.type == "compound_statement":
                break
            parts.append(child)
        return self._specifier_of(parts)

    def _specifier_of(self, parts: list[type_node]) -> Specifiers:
        words: list[str] = []
        storage: set[str] = set()
        qualifiers: set[str] = set()
        record = tag = None
        fields: tuple[Field, ...] | None = None
        enumerators: tuple[Enumerator, ...] | None = None
        for part in parts:
            if part.type in _TYPE_WORDS:
                words.extend(self._text(part).split())
            elif part.type == "ERROR":
                words.extend(word for word in self._text(part).split() if self.is_type(word))
            elif part.type == "storage_class_specifier":
                storage.add(self._text(part))
            elif part.type == "type_qualifier":
                qualifiers.add(self._text(part))
            elif part.type in _RECORDS:
                record = _RECORDS[part.type]
                name = part.child_by_field_name("name")
                tag = self._text(name) if name else f"{record} at {part.start_byte}"
                body = part.child_by_field_name("body")
                if body is not None and record == "enum":
                    enumerators = self._enumerators(body)
                elif body is not None:
                    fields = self._fields(body)
        known = [word for word in words if self.is_type(word)]
        if len(words) > 1 and known and len(known) < len(words):
            words = known
        return Specifiers(
            words=tuple(words),
            record=record,
            tag=tag,
            fields=fields,
            enumerators=enumerators,
            storage=frozenset(storage),
            qualifiers=frozenset(qualifiers),
        )

    def _enumerators(self, body: type_node) -> tuple[Enumerator, ...]:
        found = []
        for child in body.named_children:
            name = child.child_by_field_name("name") if child.type == "enumerator" else None
            if name is None:
                continue
            value = child.child_by_field_name("value")
            found.append(
                Enumerator(
                    start=name.start_byte,
                    end=name.end_byte,
                    name=self._text(name),
                    value=self._expr(value) if value else None,
                )
            )
        return tuple(found)

    def _fields(self, body: type_node) -> tuple[Field, ...]:
        if self._level > self._depth:
            return ()
        self._level += 1
        fields: list[Field] = []
        for child in body.named_children:
            if child.type != "field_declaration":
                continue
            base = self._specifiers(child)
            width = next((c for c in child.named_children if c.type == "bitfield_clause"), None)
            bits = self._expr(width.named_children[0]) if width and width.named_children else None
            declarators = child.children_by_field_name("declarator")
            for declarator in declarators:
                made = self._declarator(declarator, base)
                fields.append(Field(name=made.name, type=made.type, bits=bits))
            if not declarators and base.fields is not None:
                fields.append(Field(name="", type=TypeSyntax(specifiers=base)))
        self._level -= 1
        return tuple(fields)

    def _declarator(self, node: type_node, base: Specifiers) -> Declarator:
        value: Expr | None = None
        if node.type == "init_declarator":
            written = node.child_by_field_name("value")
            value = self._expr(written) if written else None
            inner = node.child_by_field_name("declarator")
            node = inner if inner is not None else node
        outer: list[Derivation] = []
        found: type_node | None = node
        name = ""
        start, end = node.start_byte, node.end_byte
        while found is not None:
            if found.type in ("identifier", "field_identifier", "type_identifier"):
                name, start, end = self._text(found), found.start_byte, found.end_byte
                break
            if found.type in ("pointer_declarator", "abstract_pointer_declarator"):
                outer.append(PointerTo(qualifiers=self._qualifiers(found)))
            elif found.type in ("array_declarator", "abstract_array_declarator"):
                size = found.child_by_field_name("size")
                outer.append(ArrayOf(size=self._expr(size) if size else None))
            elif found.type in ("function_declarator", "abstract_function_declarator"):
                outer.append(self._parameters(found.child_by_field_name("parameters")))
            found = self._inner_declarator(found)
        return Declarator(
            start=start,
            end=end,
            name=name,
            type=TypeSyntax(specifiers=base, derivations=tuple(reversed(outer))),
            value=value,
        )

    @staticmethod
    def _inner_declarator(node: type_node) -> type_node | None:
        inner = node.child_by_field_name("declarator")
        if inner is None:
            inner = next(
                (
                    child
                    for child in node.named_children
                    if child.type.endswith("declarator") or child.type == "identifier"
                ),
                None,
            )
        return inner

    def _parameters(self, node: type_node | None) -> FunctionOf:
        if node is None:
            return FunctionOf(parameters=())
        made: list[Declarator] = []
        for child in node.named_children:
            if child.type != "parameter_declaration":
                continue
            base = self._specifiers(child)
            declarator = child.child_by_field_name("declarator")
            if declarator is not None:
                made.append(self._declarator(declarator, base))
            elif base.words != ("void",):
                made.append(
                    Declarator(
                        start=child.start_byte,
                        end=child.end_byte,
                        name="",
                        type=TypeSyntax(specifiers=base),
                    )
                )
        variadic = any(child.type == "variadic_parameter" for child in node.children)
        return FunctionOf(parameters=tuple(made), variadic=variadic)

    def _qualifiers(self, node: type_node) -> frozenset[str]:
        return frozenset(self._text(c) for c in node.children if c.type == "type_qualifier")

    def _type(self, node: type_node) -> TypeSyntax:
        """A type name, as in a cast."""
        base = self._specifiers(node)
        declarator = node.child_by_field_name("declarator")
        if declarator is None:
            return TypeSyntax(specifiers=base)
        return self._declarator(declarator, base).type

    # --- statements ------------------------------------------------------------------------

    def _block(self, node: type_node) -> Block:
        return Block(
            start=node.start_byte, end=node.end_byte, items=self._statements(node.named_children)
        )

    def _statements(self, nodes: list[type_node]) -> tuple[Stmt, ...]:
        return tuple(self._stmt(node) for node in nodes if node.type != "comment")

    def _stmt(self, node: type_node) -> Stmt:
        if self._level > self._depth:
            return self._opaque(node, "statements nested too deeply")
        self._level += 1
        try:
            convert = _STATEMENTS.get(node.type)
            if convert is not None:
                return convert(self, node)
            return self._opaque(node, _plain(node.type))
        finally:
            self._level -= 1

    def _optional_stmt(self, node: type_node | None) -> Stmt | None:
        return self._stmt(node) if node is not None else None

    def _optional_expr(self, node: type_node | None) -> Expr | None:
        return self._expr(node) if node is not None else None

    def _evaluate(self, node: type_node) -> Stmt:
        inner = [child for child in node.named_children if child.type != "comment"]
        if not inner:
            return Block(start=node.start_byte, end=node.end_byte, items=())
        return Evaluate(start=node.start_byte, end=node.end_byte, expression=self._expr(inner[0]))

    def _declare(self, node: type_node) -> Stmt:
        return Declare(
            start=node.start_byte, end=node.end_byte, declarators=self._declaration(node)
        )

    def _if(self, node: type_node) -> Stmt:
        alternative = node.child_by_field_name("alternative")
        if alternative is not None and alternative.type == "else_clause":
            alternative = next((c for c in alternative.named_children if c.type != "comment"), None)
        return If(
            start=node.start_byte,
            end=node.end_byte,
            condition=self._required(node, "condition"),
            then=self._inner_stmt(node, "consequence"),
            other=self._optional_stmt(alternative),
        )

    def _required(self, node: type_node, field: str) -> Expr:
        child = node.child_by_field_name(field)
        return self._expr(child) if child is not None else self._opaque(node, "broken C")

    def _inner_stmt(self, node: type_node, field: str) -> Stmt:
        child = node.child_by_field_name(field)
        return self._stmt(child) if child is not None else self._opaque(node, "broken C")

    def _for(self, node: type_node) -> Stmt:
        before = node.child_by_field_name("initializer")
        first: Stmt | None = None
        if before is not None and before.type == "declaration":
            first = self._declare(before)
        elif before is not None:
            first = Evaluate(
                start=before.start_byte, end=before.end_byte, expression=self._expr(before)
            )
        return Loop(
            start=node.start_byte,
            end=node.end_byte,
            before=first,
            condition=self._optional_expr(node.child_by_field_name("condition")),
            step=self._optional_expr(node.child_by_field_name("update")),
            body=self._inner_stmt(node, "body"),
            first=False,
        )

    def _while(self, node: type_node) -> Stmt:
        return Loop(
            start=node.start_byte,
            end=node.end_byte,
            before=None,
            condition=self._required(node, "condition"),
            step=None,
            body=self._inner_stmt(node, "body"),
            first=node.type == "do_statement",
        )

    def _switch(self, node: type_node) -> Stmt:
        return Switch(
            start=node.start_byte,
            end=node.end_byte,
            subject=self._required(node, "condition"),
            body=self._inner_stmt(node, "body"),
        )

    def _case(self, node: type_node) -> Stmt:
        value = node.child_by_field_name("value")
        items = [
            child
            for child in node.named_children
            if child.type != "comment" and (value is None or child.id != value.id)
        ]
        last = None
        if items and any(child.type == "..." for child in node.children):
            last = self._expr(items.pop(0))
        return Case(
            start=node.start_byte,
            end=node.end_byte,
            value=self._optional_expr(value),
            last=last,
            items=self._statements(items),
        )

    def _return(self, node: type_node) -> Stmt:
        inner = [child for child in node.named_children if child.type != "comment"]
        return Return(
            start=node.start_byte,
            end=node.end_byte,
            value=self._expr(inner[0]) if inner else None,
        )

    def _jump(self, node: type_node) -> Stmt:
        return Jump(start=node.start_byte, end=node.end_byte, kind=node.type.split("_")[0])

    def _label(self, node: type_node) -> Stmt:
        label = node.child_by_field_name("label")
        rest = [
            child
            for child in node.named_children
            if child.type != "comment" and (label is None or child.id != label.id)
        ]
        body = (
            self._stmt(rest[0])
            if rest
            else Block(start=node.start_byte, end=node.end_byte, items=())
        )
        return Label(
            start=node.start_byte,
            end=node.end_byte,
            name=self._text(label) if label else "",
            body=body,
        )

    def _attributed(self, node: type_node) -> Stmt:
        inner = [c for c in node.named_children if not c.type.startswith("attribute")]
        return (
            self._stmt(inner[-1])
            if inner
            else Block(start=node.start_byte, end=node.end_byte, items=())
        )

    def _nothing(self, node: type_node) -> Stmt:
        return Block(start=node.start_byte, end=node.end_byte, items=())

    # --- expressions -----------------------------------------------------------------------

    def _expr(self, node: type_node) -> Expr:
        if self._level > self._depth:
            return self._opaque(node, "an expression nested too deeply")
        self._level += 1
        try:
            convert = _EXPRESSIONS.get(node.type)
            made = convert(self, node) if convert else self._opaque(node, _plain(node.type))
        finally:
            self._level -= 1
        mark = self._marks.get((node.start_byte, node.end_byte))
        if mark is not None and not (isinstance(made, Marked) and made.name == mark):
            return Marked(start=node.start_byte, end=node.end_byte, name=mark, operand=made)
        return made

    def _paren(self, node: type_node) -> Expr:
        inner = [child for child in node.named_children if child.type != "comment"]
        if len(inner) != 1:
            return self._opaque(node, "broken C")
        if inner[0].type == "compound_statement":
            return StatementExpr(
                start=node.start_byte, end=node.end_byte, body=self._block(inner[0])
            )
        return self._expr(inner[0])

    def _name(self, node: type_node) -> Expr:
        return Name(start=node.start_byte, end=node.end_byte, text=self._text(node))

    def _number(self, node: type_node) -> Expr:
        text = self._text(node)
        sign = text[0] if text[0] in "+-" else ""
        number = Number(
            start=node.start_byte + len(sign), end=node.end_byte, text=text[len(sign) :]
        )
        if not sign:
            return number
        return Operation(start=node.start_byte, end=node.end_byte, operator=sign, operand=number)

    def _string(self, node: type_node) -> Expr:
        return Text(start=node.start_byte, end=node.end_byte, text=self._text(node))

    def _call(self, node: type_node) -> Expr:
        function = node.child_by_field_name("function")
        arguments = node.child_by_field_name("arguments")
        if function is None or arguments is None:
            return self._opaque(node, "broken C")
        given = [child for child in arguments.named_children if child.type != "comment"]
        cast = self._type_in_parentheses(function)
        if cast is not None and given:
            operand = self._expr(given[-1])
            for other in reversed(given[:-1]):
                operand = Pair(
                    start=other.start_byte,
                    end=operand.end,
                    operator=",",
                    left=self._expr(other),
                    right=operand,
                    at=other.end_byte,
                )
            return Cast(start=node.start_byte, end=node.end_byte, type=cast, operand=operand)
        return Call(
            start=node.start_byte,
            end=node.end_byte,
            function=self._expr(function),
            arguments=tuple(self._expr(child) for child in given),
        )

    def _type_in_parentheses(self, node: type_node) -> TypeSyntax | None:
        """The type that `(name)` is, when the grammar took it for an expression."""
        if node.type != "parenthesized_expression" or node.named_child_count != 1:
            return None
        inner = node.named_children[0]
        if inner.type == "identifier" and self.is_type(self._text(inner)):
            return TypeSyntax(specifiers=Specifiers(words=(self._text(inner),)))
        return None

    def _index(self, node: type_node) -> Expr:
        return Index(
            start=node.start_byte,
            end=node.end_byte,
            base=self._required(node, "argument"),
            index=self._required(node, "index"),
        )

    def _member(self, node: type_node) -> Expr:
        base = self._required(node, "argument")
        name = node.child_by_field_name("field")
        operator = node.child_by_field_name("operator")
        if operator is not None and self._text(operator) == "->":
            base = Operation(start=base.start, end=base.end, operator="*", operand=base)
        return Member(
            start=node.start_byte,
            end=node.end_byte,
            base=base,
            name=self._text(name) if name else "",
        )

    def _unary(self, node: type_node) -> Expr:
        operator = node.child_by_field_name("operator")
        return Operation(
            start=node.start_byte,
            end=node.end_byte,
            operator=self._text(operator) if operator else "?",
            operand=self._required(node, "argument"),
        )

    def _update(self, node: type_node) -> Expr:
        operator = node.child_by_field_name("operator")
        target = node.child_by_field_name("argument")
        if operator is None or target is None:
            return self._opaque(node, "broken C")
        return Increment(
            start=node.start_byte,
            end=node.end_byte,
            operator=self._text(operator),
            target=self._expr(target),
            prefix=operator.start_byte < target.start_byte,
        )

    def _binary(self, node: type_node) -> Expr:
        left = node.child_by_field_name("left")
        right = node.child_by_field_name("right")
        operator = node.child_by_field_name("operator")
        if left is None or right is None or operator is None:
            return self._opaque(node, "broken C")
        sign = self._text(operator)
        cast = self._type_in_parentheses(left) if sign in _SIGN_OR_ADDRESS else None
        if cast is not None:
            return self._cast_of_sign(cast, sign, node, right)
        return Pair(
            start=node.start_byte,
            end=node.end_byte,
            operator=sign,
            left=self._expr(left),
            right=self._expr(right),
            at=operator.start_byte,
        )

    def _cast_of_sign(self, cast: TypeSyntax, sign: str, node: type_node, right: type_node) -> Expr:
        """`(type) - a * b`, which the grammar reads as a difference, is `((type)(-a)) * b`."""
        made = self._expr(right)
        spine: list[Pair] = []
        follow = right
        while follow.type == "binary_expression" and isinstance(made, Pair):
            spine.append(made)
            made = made.left
            left = follow.child_by_field_name("left")
            if left is None:
                break
            follow = left
        start = node.start_byte
        result: Expr = Cast(
            start=start,
            end=made.end,
            type=cast,
            operand=Operation(start=start, end=made.end, operator=sign, operand=made),
        )
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

    def _comma(self, node: type_node) -> Expr:
        right = self._required(node, "right")
        return Pair(
            start=node.start_byte,
            end=node.end_byte,
            operator=",",
            left=self._required(node, "left"),
            right=right,
            at=right.start,
        )

    def _assign(self, node: type_node) -> Expr:
        operator = node.child_by_field_name("operator")
        return Assign(
            start=node.start_byte,
            end=node.end_byte,
            operator=self._text(operator) if operator else "=",
            target=self._required(node, "left"),
            value=self._required(node, "right"),
            at=operator.start_byte if operator else node.start_byte,
        )

    def _conditional(self, node: type_node) -> Expr:
        return Conditional(
            start=node.start_byte,
            end=node.end_byte,
            condition=self._required(node, "condition"),
            then=self._optional_expr(node.child_by_field_name("consequence")),
            other=self._required(node, "alternative"),
        )

    def _cast(self, node: type_node) -> Expr:
        written = node.child_by_field_name("type")
        if written is None:
            return self._opaque(node, "broken C")
        return Cast(
            start=node.start_byte,
            end=node.end_byte,
            type=self._type(written),
            operand=self._required(node, "value"),
        )

    def _sizeof(self, node: type_node) -> Expr:
        written = node.child_by_field_name("type")
        value = node.child_by_field_name("value")
        type_ = self._type(written) if written is not None else None
        if type_ is None and value is not None:
            type_ = self._type_in_parentheses(value)
        return SizeOf(
            start=node.start_byte,
            end=node.end_byte,
            type=type_,
            operand=self._expr(value) if value is not None and type_ is None else None,
        )

    def _braces(self, node: type_node) -> Expr:
        entries: list[Entry] = []
        for child in node.named_children:
            if child.type == "comment":
                continue
            if child.type != "initializer_pair":
                entries.append(Entry(designators=(), value=self._expr(child)))
                continue
            designators: list[str | Expr] = []
            for part in child.named_children:
                if part.type in ("field_designator", "field_identifier"):
                    designators.append(self._text(part).lstrip(". \t\r\n"))
                elif part.type == "subscript_designator" and part.named_children:
                    designators.append(self._expr(part.named_children[0]))
            entries.append(
                Entry(designators=tuple(designators), value=self._required(child, "value"))
            )
        return Braces(start=node.start_byte, end=node.end_byte, entries=tuple(entries))

    def _compound(self, node: type_node) -> Expr:
        written = node.child_by_field_name("type")
        value = node.child_by_field_name("value")
        made = self._braces(value) if value is not None else None
        if written is None or not isinstance(made, Braces):
            return self._opaque(node, "broken C")
        return Braces(
            start=node.start_byte,
            end=node.end_byte,
            entries=made.entries,
            type=self._type(written),
        )

    # --- leaves ----------------------------------------------------------------------------

    def _opaque(self, node: type_node, kind: str) -> Opaque:
        return Opaque(start=node.start_byte, end=node.end_byte, kind=kind)

    def _text(self, node: type_node) -> str:
        return self._bytes[node.start_byte : node.end_byte].decode("ascii")

    def _name_of(self, node: type_node) -> str:
        return self._declarator(node, Specifiers()).name


def snippet(text: str) -> str:
    """A text whose `Parser.expression` is the expression given."""
    return f"void snippet(void) {{ {text}\n; }}"


def _plain(kind: str) -> str:
    return "broken C" if kind == "ERROR" else kind.replace("_", " ")


_STATEMENTS: Mapping[str, Callable[[Parser, type_node], Stmt]] = {
    "compound_statement": Parser._block,
    "expression_statement": Parser._evaluate,
    "declaration": Parser._declare,
    "if_statement": Parser._if,
    "for_statement": Parser._for,
    "while_statement": Parser._while,
    "do_statement": Parser._while,
    "switch_statement": Parser._switch,
    "case_statement": Parser._case,
    "return_statement": Parser._return,
    "break_statement": Parser._jump,
    "continue_statement": Parser._jump,
    "goto_statement": Parser._jump,
    "labeled_statement": Parser._label,
    "attributed_statement": Parser._attributed,
    "type_definition": Parser._nothing,
    "struct_specifier": Parser._nothing,
    "union_specifier": Parser._nothing,
    "enum_specifier": Parser._nothing,
    ";": Parser._nothing,
}

_EXPRESSIONS: Mapping[str, Callable[[Parser, type_node], Expr]] = {
    "parenthesized_expression": Parser._paren,
    "identifier": Parser._name,
    "type_identifier": Parser._name,
    "true": Parser._name,
    "false": Parser._name,
    "null": Parser._name,
    "number_literal": Parser._number,
    "char_literal": Parser._number,
    "string_literal": Parser._string,
    "concatenated_string": Parser._string,
    "call_expression": Parser._call,
    "subscript_expression": Parser._index,
    "field_expression": Parser._member,
    "pointer_expression": Parser._unary,
    "unary_expression": Parser._unary,
    "update_expression": Parser._update,
    "binary_expression": Parser._binary,
    "comma_expression": Parser._comma,
    "assignment_expression": Parser._assign,
    "conditional_expression": Parser._conditional,
    "cast_expression": Parser._cast,
    "sizeof_expression": Parser._sizeof,
    "initializer_list": Parser._braces,
    "compound_literal_expression": Parser._compound,
}
