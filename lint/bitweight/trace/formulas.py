"""A traced expression as one line of C, with the names of its constants."""

import re
from collections.abc import Callable

from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Literal,
    Purpose,
    Unary,
    Unknown,
    children,
    walk,
)

_LONGEST = 240
_PRECEDENCE = {
    "*": 10, "/": 10, "%": 10, "+": 9, "-": 9, "<<": 8, ">>": 8, "<": 7, ">": 7, "<=": 7, ">=": 7,
    "==": 6, "!=": 6, "&": 5, "^": 4, "|": 3, "&&": 2, "||": 1,
}  # fmt: skip
_OPERATOR = re.compile(r"(.*) (?:[-+*/%<>&|^=!?:]{1,2}) ", re.DOTALL)
"""A text up to the last operator with spaces around it."""
_CUT = " ..."
_ORDERS = ("<", "<=", ">", ">=")
_UNARY, _CHOICE, _PRIMARY = 11, 0, 12


def formula(root: Expression) -> str:
    """The expression as text; what is longer than a screen line or two ends in `...`.

    A choice between two values by which is larger is written as `min`, `max` or `clamp`.
    """
    texts: dict[int, tuple[str, int]] = {}
    for node in walk(root):
        text, level = _text(node, lambda child: texts[id(child)])
        texts[id(node)] = (_shortened(text), level)
    return texts[id(root)][0]


def _shortened(text: str) -> str:
    """The text, cut before an operator where it is too long."""
    if len(text) <= _LONGEST and _CUT not in text:
        return text
    kept = text[: _LONGEST - 4].partition(_CUT)[0]
    before = _OPERATOR.match(kept)
    return (before[1] if before and _CUT not in text else kept) + _CUT


def _text(node: Expression, of: Callable[[Expression], tuple[str, int]]) -> tuple[str, int]:
    match node:
        case Literal():
            return _constant(node)
        case Code():
            return node.text, _PRIMARY
        case Unknown():
            return "?", _PRIMARY
        case Default():
            return node.name, _PRIMARY
        case Convert():
            inner, level = of(node.operand)
            if node.purpose is Purpose.CAST:
                return f"({node.type.name}){_inside(inner, level, _UNARY)}", _UNARY
            return inner, level
        case Unary():
            inner, level = of(node.operand)
            return f"{node.operator}{_inside(inner, level, _UNARY)}", _UNARY
        case Binary():
            level = _PRECEDENCE[node.operator]
            left = _inside(*of(node.left), level)
            right = _inside(*of(node.right), level + 1)
            return f"{left} {node.operator} {right}", level
        case Choose():
            bounded = _bounded(node, lambda child: of(child)[0])
            if bounded is not None:
                return bounded, _PRIMARY
            parts = [_inside(*of(child), _CHOICE + 1) for child in children(node)]
            return f"{parts[0]} ? {parts[1]} : {parts[2]}", _CHOICE


def _bounded(node: Choose, of: Callable[[Expression], str]) -> str | None:
    """`max(a, low)` for `a < low ? low : a`, and so on; None for any other choice."""
    condition = _bare(node.condition)
    if not isinstance(condition, Binary) or condition.operator not in _ORDERS:
        return None
    left, right = of(condition.left), of(condition.right)
    then, other = of(node.then), of(node.other)
    larger, smaller = ("max", "min") if condition.operator in (">", ">=") else ("min", "max")
    if then == right and other == f"{larger}({left}, {_last(other)})":
        ends = (right, _last(other)) if smaller == "max" else (_last(other), right)
        return f"clamp({left}, {', '.join(ends)})"
    if (then, other) == (left, right):
        return f"{larger}({left}, {right})"
    return f"{smaller}({left}, {right})" if (then, other) == (right, left) else None


def _last(text: str) -> str:
    """The last argument of a `min` or `max`."""
    return text.rpartition(", ")[2].removesuffix(")")


def _bare(node: Expression) -> Expression:
    while isinstance(node, Convert) and node.purpose is not Purpose.CAST:
        node = node.operand
    return node


def _constant(node: Literal) -> tuple[str, int]:
    if node.leaf is not None:
        return node.leaf.name or node.leaf.text, _PRIMARY
    text = f"{node.value:g}" if isinstance(node.value, float) else str(node.value)
    return text, _PRIMARY if node.value >= 0 else _UNARY


def _inside(text: str, level: int, needed: int) -> str:
    return f"({text})" if level < needed else text
