"""When two expressions compute the same in the same way."""

from bitweight.arithmetic.expressions import (
    Binary,
    Choose,
    Code,
    Convert,
    Default,
    Expression,
    Literal,
    Unary,
    Unknown,
    children,
    walk,
)


def structure(root: Expression) -> str:
    """A text that two expressions share when they compute the same in the same way."""
    texts: dict[int, str] = {}
    numbers: dict[str, str] = {}
    for node in walk(root):
        below = " ".join(texts[id(child)] for child in children(node))
        text = _text(node, below)
        texts[id(node)] = numbers.setdefault(text, f"#{len(numbers)}")
    return ";".join(f"{number}={text}" for text, number in numbers.items())


def _text(node: Expression, below: str) -> str:
    match node:
        case Literal():
            return f"{node.value!r}:{node.type.name}@{node.leaf.place if node.leaf else ''}"
        case Code():
            return f"code {node.channels} {node.text}:{node.type.name}"
        case Unknown():
            return f"unknown {node.reason}"
        case Default():
            return f"default {node.name} {below}"
        case Convert():
            return f"to {node.type.name} {below}"
        case Unary() | Binary():
            return f"{node.operator}:{node.type.name} {below}"
        case Choose():
            return f"choose:{node.type.name} {below}"
