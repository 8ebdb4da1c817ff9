"""A traced expression as one line of C, with the names of its constants."""

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
_UNARY, _CHOICE, _PRIMARY = 11, 0, 12


def formula(root: Expression) -> str:
    """The expression as text; what is longer than a screen line or two ends in `...`."""
    texts: dict[int, tuple[str, int]] = {}
    for node in walk(root):
        text, level = _text(node, lambda child: texts[id(child)])
        texts[id(node)] = (text if len(text) <= _LONGEST else text[: _LONGEST - 3] + "...", level)
    return texts[id(root)][0]


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
            parts = [_inside(*of(child), _CHOICE + 1) for child in children(node)]
            return f"{parts[0]} ? {parts[1]} : {parts[2]}", _CHOICE


def _constant(node: Literal) -> tuple[str, int]:
    if node.leaf is not None:
        return node.leaf.name or node.leaf.text, _PRIMARY
    text = f"{node.value:g}" if isinstance(node.value, float) else str(node.value)
    return text, _PRIMARY if node.value >= 0 else _UNARY


def _inside(text: str, level: int, needed: int) -> str:
    return f"({text})" if level < needed else text
