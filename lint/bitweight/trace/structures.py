"""When two expressions compute the same in the same way."""

from dataclasses import dataclass, field

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


def structure(root: Expression, channel: str | None = None) -> str:
    """A text that two expressions share when they compute the same in the same way.

    With a `channel` they may take its code from different readings, and spell their constants at
    different places.
    """
    texts: dict[int, str] = {}
    numbers: dict[str, str] = {}
    for node in walk(root):
        below = " ".join(texts[id(child)] for child in children(node))
        text = _text(node, below, channel)
        texts[id(node)] = numbers.setdefault(text, f"#{len(numbers)}")
    return ";".join(f"{number}={text}" for text, number in numbers.items())


@dataclass(kw_only=True)
class Structures:
    """Numbers that expressions share when they compute the same in the same way.

    What was numbered once is not looked at again, so that expressions may grow node by node.
    """

    _numbers: dict[str, int] = field(default_factory=dict)
    _known: dict[int, str] = field(default_factory=dict)
    _kept: list[Expression] = field(default_factory=list)
    """Expressions known by identity live as long as their numbers."""

    def number(self, root: Expression) -> int:
        """The number of an expression's structure."""
        if id(root) not in self._known:
            self._kept.append(root)
        for node in walk(root, self._known):
            below = " ".join(self._known[id(child)] for child in children(node))
            text = _text(node, below)
            self._known[id(node)] = f"#{self._numbers.setdefault(text, len(self._numbers))}"
        return int(self._known[id(root)][1:])


def _text(node: Expression, below: str, channel: str | None = None) -> str:
    match node:
        case Literal() if channel is not None:
            return f"{node.value!r}:{node.type.name}"
        case Code() if channel in node.channels:
            return f"code {node.channels}:{node.type.name}"
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
