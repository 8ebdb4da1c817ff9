"""`typeof(expression)` in a form that the grammar knows, as long as it was.

The grammar takes `typeof` for a function. An enum whose one enumerator has the expression for its
value is a type specifier wherever one may stand, and keeps the expression at its offset.
"""

import re

_MARKS = re.compile(
    rb'"(?:[^"\\\n]|\\.)*"?|'
    rb"'(?:[^'\\\n]|\\.)*'?|"
    rb"\b(?:__typeof__|__typeof|typeof|__typeof_unqual__|typeof_unqual)\s*\(|[()]"
)
_TYPE_WORDS = frozenset(
    b"struct union enum const volatile unsigned signed char short int long float double".split()
)
_HEAD, _TAIL = b"enum", b"{a="


def rewritten(source: bytes) -> tuple[bytes, frozenset[int]]:
    """A text of equal length without `typeof`, and where the enums start that stand for them."""
    if b"typeof" not in source:
        return source, frozenset()
    made = bytearray(source)
    starts: set[int] = set()
    open_: list[tuple[int, int] | None] = []
    for mark in _MARKS.finditer(source):
        if mark[0].endswith(b"("):
            open_.append(mark.span() if len(mark[0]) > 1 else None)
        elif mark[0] == b")" and open_:
            head = open_.pop()
            if head is not None and _replaced(made, head, mark.start()):
                starts.add(head[0])
    return bytes(made), frozenset(starts)


def _replaced(made: bytearray, head: tuple[int, int], closing: int) -> bool:
    """Replace one `typeof`; whether by an enum: a type name stands for itself."""
    start, end = head
    length = end - start
    if _is_type_name(bytes(made[end:closing])):
        made[start:end] = b" " * length
        made[closing] = ord(" ")
        return False
    made[start:end] = _HEAD + b" " * (length - len(_HEAD) - len(_TAIL)) + _TAIL
    made[closing] = ord("}")
    return True


def _is_type_name(operand: bytes) -> bool:
    words = operand.split(None, 1)
    return bool(words) and words[0].rstrip(b"*") in _TYPE_WORDS
