"""Declarations of the grammar's tree: specifiers, declarators, members, enumerators, parameters."""

from dataclasses import dataclass, field, replace

from bitweight.firmware.grammar import Branch, Grammar, broken, declarator_below, is_broken, span
from bitweight.firmware.syntax import (
    ArrayOf,
    Declarator,
    Derivation,
    Enumerator,
    Expr,
    Field,
    FunctionOf,
    PointerTo,
    Specifiers,
    TypeSyntax,
)

RECORDS = {"struct_specifier": "struct", "union_specifier": "union", "enum_specifier": "enum"}
"""Tagged types by the kind of their node."""
_TYPE_WORDS = frozenset({"primitive_type", "type_identifier", "sized_type_specifier"})
_NAMES = frozenset({"identifier", "field_identifier", "type_identifier"})
_POINTERS = frozenset({"pointer_declarator", "abstract_pointer_declarator"})
_ARRAYS = frozenset({"array_declarator", "abstract_array_declarator"})
_FUNCTIONS = frozenset({"function_declarator", "abstract_function_declarator"})


@dataclass(slots=True)
class _Parts:
    """The specifiers of one declaration while they are collected."""

    words: list[str] = field(default_factory=list)
    storage: set[str] = field(default_factory=set)
    qualifiers: set[str] = field(default_factory=set)
    record: str | None = None
    tag: str | None = None
    fields: tuple[Field, ...] | None = None
    enumerators: tuple[Enumerator, ...] | None = None
    like: Expr | None = None


class Declarators(Grammar):
    """Converts declarations and type names."""

    def declaration(self, node: Branch) -> tuple[Declarator, ...]:
        """What one declaration declares; no value is trusted beside what is no C."""
        base = self.specifiers(node)
        declarators = node.children_by_field_name("declarator")
        made = tuple(self.declarator(child, base) for child in declarators)
        if not made or not _is_broken_after(node, declarators[0]):
            return made
        return tuple(replace(one, value=broken(node)) for one in made)

    def type_name(self, node: Branch) -> TypeSyntax:
        """A type name, as in a cast."""
        base = self.specifiers(node)
        declarator = node.child_by_field_name("declarator")
        if declarator is None:
            return TypeSyntax(specifiers=base)
        return self.declarator(declarator, base).type

    # --- specifiers ---------------------------------------------------------------------------

    def specifiers(self, node: Branch) -> Specifiers:
        """The first part of a declaration, up to its declarators."""
        declarators = {child.id for child in node.children_by_field_name("declarator")}
        parts: list[Branch] = []
        for child in node.children:
            if child.id in declarators or child.type == "compound_statement":
                break
            parts.append(child)
        return self.specifiers_of(parts)

    def specifiers_of(self, nodes: list[Branch]) -> Specifiers:
        """The specifiers that some nodes make up."""
        parts = _Parts()
        for node in nodes:
            self._add(parts, node)
        words = parts.words
        known = [word for word in words if self.is_type(word)]
        if len(words) > 1 and known and len(known) < len(words):
            # Beside a type an unknown word is some compiler's extension.
            words = known
        return Specifiers(
            words=tuple(words),
            record=parts.record,
            tag=parts.tag,
            fields=parts.fields,
            enumerators=parts.enumerators,
            storage=frozenset(parts.storage),
            qualifiers=frozenset(parts.qualifiers),
            like=parts.like,
        )

    def _add(self, parts: _Parts, node: Branch) -> None:
        if node.type in _TYPE_WORDS:
            parts.words.extend(self.text(node).split())
        elif node.type == "macro_type_specifier":
            parts.words.append("".join(self.text(node).split()))
        elif node.type == "ERROR":
            parts.words.extend(word for word in self.text(node).split() if self.is_type(word))
        elif node.type == "storage_class_specifier":
            parts.storage.add(self.text(node))
        elif node.type == "type_qualifier":
            parts.qualifiers.add(self.text(node))
        elif node.start_byte in self.typeofs:
            self._add_typeof(parts, node)
        elif node.type in RECORDS:
            self._add_record(parts, node)

    def _add_typeof(self, parts: _Parts, node: Branch) -> None:
        """The type of an expression, or of a typedef's name that the grammar took for one."""
        body = node.child_by_field_name("body")
        only = body.named_children[0] if body is not None and body.named_children else None
        operand = only.child_by_field_name("value") if only is not None else None
        if operand is None or is_broken(node):
            parts.words.append("typeof")
        elif self.is_type(self.text(operand)):
            parts.words.append(self.text(operand))
        else:
            parts.words.append("typeof")
            parts.like = self.expr(operand)

    def _add_record(self, parts: _Parts, node: Branch) -> None:
        name = node.child_by_field_name("name")
        body = node.child_by_field_name("body")
        parts.record = RECORDS[node.type]
        parts.tag = self.text(name) if name else f"{parts.record} at {node.start_byte}"
        if body is not None and parts.record == "enum":
            parts.enumerators = self._enumerators(body)
        elif body is not None:
            parts.fields = self._fields(body)

    def _enumerators(self, body: Branch) -> tuple[Enumerator, ...]:
        found = []
        for child in body.named_children:
            name = child.child_by_field_name("name") if child.type == "enumerator" else None
            if name is not None:
                value = self.optional(child.child_by_field_name("value"))
                found.append(Enumerator(**span(name), name=self.text(name), value=value))
        return tuple(found)

    def _fields(self, body: Branch) -> tuple[Field, ...]:
        if self.level > self.depth:
            return ()
        self.level += 1
        try:
            declarations = [one for one in body.named_children if one.type == "field_declaration"]
            return tuple(member for one in declarations for member in self._members(one))
        finally:
            self.level -= 1

    def _members(self, node: Branch) -> list[Field]:
        """The members that one declaration adds to a record."""
        base = self.specifiers(node)
        width = next((c for c in node.named_children if c.type == "bitfield_clause"), None)
        bits = self.expr(width.named_children[0]) if width and width.named_children else None
        declarators = node.children_by_field_name("declarator")
        if not declarators and base.fields is not None:
            return [Field(name="", type=TypeSyntax(specifiers=base))]
        made = [self.declarator(one, base) for one in declarators]
        return [Field(name=one.name, start=one.start, type=one.type, bits=bits) for one in made]

    # --- declarators --------------------------------------------------------------------------

    def declarator(self, node: Branch, base: Specifiers) -> Declarator:
        """One declared name, its derivations and its initialiser."""
        value = None
        if node.type == "init_declarator":
            value = self.optional(node.child_by_field_name("value"))
            if _is_broken_value(node):
                value = broken(node)
            node = node.child_by_field_name("declarator") or node
        outer: list[Derivation] = []
        found: Branch | None = node
        named = node
        while found is not None and found.type not in _NAMES:
            derivation = self._derivation(found)
            if derivation is not None:
                outer.append(derivation)
            found = declarator_below(found)
        if found is not None:
            named = found
        return Declarator(
            **span(named),
            name=self.text(found) if found is not None else "",
            type=TypeSyntax(specifiers=base, derivations=tuple(reversed(outer))),
            value=value,
        )

    def _derivation(self, node: Branch) -> Derivation | None:
        if node.type in _POINTERS:
            qualifiers = [self.text(c) for c in node.children if c.type == "type_qualifier"]
            return PointerTo(qualifiers=frozenset(qualifiers))
        if node.type in _ARRAYS:
            return ArrayOf(size=self.optional(node.child_by_field_name("size")))
        if node.type in _FUNCTIONS:
            return self._parameters(node.child_by_field_name("parameters"))
        return None

    def _parameters(self, node: Branch | None) -> FunctionOf:
        if node is None:
            return FunctionOf(parameters=())
        given = [child for child in node.named_children if child.type == "parameter_declaration"]
        made = [self._parameter(child) for child in given]
        variadic = any(child.type == "variadic_parameter" for child in node.children)
        return FunctionOf(parameters=tuple(one for one in made if one), variadic=variadic)

    def _parameter(self, node: Branch) -> Declarator | None:
        base = self.specifiers(node)
        declarator = node.child_by_field_name("declarator")
        if declarator is not None:
            return self.declarator(declarator, base)
        if base.words == ("void",):
            return None
        return Declarator(**span(node), name="", type=TypeSyntax(specifiers=base))


def implicit_int(node: Branch, name: str) -> Declarator:
    """A name declared without a type, as in old-style definitions."""
    return Declarator(
        **span(node), name=name, type=TypeSyntax(specifiers=Specifiers(words=("int",)))
    )


def _is_broken_value(node: Branch) -> bool:
    """Whether something that is no C stands behind the `=` of an initialiser."""
    if not node.has_error:
        return False
    kinds = [child.type for child in node.children]
    return "=" in kinds and "ERROR" in kinds[kinds.index("=") :]


def _is_broken_after(node: Branch, first: Branch) -> bool:
    """Whether something that is no C stands behind the first declarator."""
    return node.has_error and any(
        child.type == "ERROR" and child.start_byte >= first.end_byte for child in node.children
    )
