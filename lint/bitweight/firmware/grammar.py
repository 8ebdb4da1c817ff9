"""The C grammar's own tree of one text, and what every part of its conversion shares.

With `documents.py` the only importer of tree-sitter. Recursion is bounded: what nests deeper
becomes `Opaque`.
"""

import re
from collections.abc import Callable, Iterator, Mapping
from typing import TypedDict

import tree_sitter
import tree_sitter_c

from bitweight.firmware.syntax import Block, Expr, Name, Opaque
from bitweight.firmware.typeofs import rewritten

Branch = tree_sitter.Node
"""A node of the grammar's tree."""
Marks = Mapping[tuple[int, int], str]
"""Stretches of text that are a macro's whole expansion, with the macro's name."""

_LANGUAGE = tree_sitter.Language(tree_sitter_c.language())
_CASTS = tree_sitter.Query(_LANGUAGE, "(cast_expression type: (type_descriptor) @type)")
_TYPEDEFS = tree_sitter.Query(_LANGUAGE, "(type_definition declarator: (_) @name)")
_MAY_LOOK_LIKE_A_CAST = re.compile(rb"[)\]\w]\s*\)\s*[-+*&(]")
_NAMES = frozenset({"identifier", "type_identifier", "primitive_type"})
_SPACE = ord(" ")
AMBIGUOUS_SIGNS = frozenset({"-", "+", "*", "&"})
"""Operators with one operand or two."""
_ABSTRACT = ("abstract_function_declarator", "abstract_array_declarator")


class Span(TypedDict):
    """The stretch of text that a node covers, as keywords for a `syntax.Node`."""

    start: int
    end: int


class Grammar:
    """The tree of one text. `is_type` answers for names, `marks` are expansions to be named."""

    def __init__(
        self,
        text: str,
        *,
        is_type: Callable[[str], bool],
        marks: Marks | None = None,
        depth: int = 200,
    ) -> None:
        # One byte a character keeps every offset: what is not ASCII stands in comments and strings.
        self.bytes, self.typeofs = rewritten(text.encode("ascii", "replace"))
        self.marks = marks or {}
        self.depth = depth
        self.level = 0
        self._known = is_type
        root = tree_sitter.Parser(_LANGUAGE).parse(self.bytes).root_node
        self.types = frozenset(map(self.text, _typedef_names(root)))
        self.root = self._without_mistaken_casts(root)

    def is_type(self, name: str) -> bool:
        """Whether the name is a type here: declared by the unit or known to the target."""
        return name in self.types or self._known(name)

    def text(self, node: Branch) -> str:
        """The source of a node."""
        return self.bytes[node.start_byte : node.end_byte].decode("ascii")

    # --- converted by the classes built on this one -------------------------------------------

    def expr(self, node: Branch) -> Expr:
        """The expression of a node."""
        raise NotImplementedError

    def block(self, node: Branch) -> Block:
        """The statements of a compound statement."""
        raise NotImplementedError

    # --- shared -------------------------------------------------------------------------------

    def optional(self, node: Branch | None) -> Expr | None:
        """The expression of a node that may be absent."""
        return self.expr(node) if node is not None else None

    def required(self, node: Branch, field: str) -> Expr:
        """The expression in a field that C asks for."""
        child = node.child_by_field_name(field)
        return self.expr(child) if child is not None else broken(node)

    def _without_mistaken_casts(self, root: Branch) -> Branch:
        """The tree of the text without parentheses that the grammar took for those of a cast.

        It reads `(f()) * x` as a cast to the type `f()`, `(a) - b * c` as one to the type `a`. No
        cast leads to a function or an array (C11 6.5.4p2), nor to a name that is no type; a call
        and a name mean the same without parentheses.
        """
        if _MAY_LOOK_LIKE_A_CAST.search(self.bytes) is None:
            return root
        bare = bytearray(self.bytes)
        for written in tree_sitter.QueryCursor(_CASTS).captures(root).get("type", []):
            opening, closing = written.prev_sibling, written.next_sibling
            mistaken = _is_call(written) or self._is_operand(written)
            if mistaken and opening is not None and closing is not None:
                bare[opening.start_byte] = bare[closing.start_byte] = _SPACE
        if bare == self.bytes:
            return root
        return tree_sitter.Parser(_LANGUAGE).parse(bytes(bare)).root_node

    def _is_operand(self, written: Branch) -> bool:
        """Whether the type of a cast is a name that is no type, before what may be an operator."""
        names = written.named_children
        if len(names) != 1 or names[0].type != "type_identifier":
            return False
        cast = written.parent
        value = cast.child_by_field_name("value") if cast is not None else None
        operator = value.child_by_field_name("operator") if value is not None else None
        if operator is None or self.text(operator) not in AMBIGUOUS_SIGNS:
            return False
        return not self.is_type(self.text(names[0]))


def _is_call(written: Branch) -> bool:
    """Whether the type of a cast is a function or an array."""
    declarator = written.child_by_field_name("declarator")
    while declarator is not None and declarator.type in _ABSTRACT:
        below = declarator.child_by_field_name("declarator")
        if below is None:
            return True
        declarator = below
    return False


def _typedef_names(root: Branch) -> Iterator[Branch]:
    """The names that the typedefs of a text declare."""
    for declarator in tree_sitter.QueryCursor(_TYPEDEFS).captures(root).get("name", []):
        found: Branch | None = declarator
        while found is not None and found.type not in _NAMES:
            found = declarator_below(found)
        if found is not None:
            yield found


def declarator_below(node: Branch) -> Branch | None:
    """The next declarator inside a declarator, towards the name."""
    field = node.child_by_field_name("declarator")
    if field is not None:
        return field
    return next(
        (
            child
            for child in node.named_children
            if child.type.endswith("declarator") or child.type in _NAMES
        ),
        None,
    )


def span(node: Branch) -> Span:
    """Where a node starts and ends."""
    return {"start": node.start_byte, "end": node.end_byte}


def inner(node: Branch) -> list[Branch]:
    """The named nodes directly below, comments left out."""
    return [child for child in node.named_children if child.type != "comment"]


def broken(node: Branch) -> Opaque:
    """What is no C."""
    return Opaque(**span(node), kind="broken C")


def is_broken(node: Branch) -> bool:
    """Whether something stands in a node that C has no place for, or lacks what C asks for."""
    return node.is_missing or (
        node.has_error and any(child.type == "ERROR" for child in node.children)
    )


def strange(node: Branch) -> Opaque:
    """What is C, or an extension of it, but is not followed."""
    return broken(node) if node.type == "ERROR" else Opaque(**span(node), kind=plain(node.type))


def plain(kind: str) -> str:
    """A kind of node in plain words."""
    return kind.replace("_", " ")


def operator_at(node: Branch) -> int:
    """The offset of a node's operator."""
    operator = node.child_by_field_name("operator")
    return operator.start_byte if operator is not None else node.start_byte


def named(node: Branch, text: str) -> Name:
    """A name that stands at a node."""
    return Name(**span(node), text=text)
