"""Whether the C expressions of the board file are C, and whether their places exist.

Their texts enter with the sources; mistakes leave. An expression that is no C by itself may still
be one once the macros of the sources are expanded (a type name as an argument, say).
"""

import re
from collections.abc import Iterator

from bitweight.board.decoding.tables import Mistakes, near, shortened
from bitweight.board.hardware import Board
from bitweight.errors import Mistake
from bitweight.firmware.parsing import Parser, snippet
from bitweight.firmware.symbols import Program
from bitweight.trace.patterns import Pattern, parsed, pattern, spelled

_PLACEHOLDER = re.compile(r"\$\w*")
_PLACEHOLDERS = ("$any", "$code")
_IDENTIFIER = re.compile(r"[A-Za-z_]\w*", re.ASCII)
_LITERAL = re.compile(r'"(?:\\.|[^"\\])*"|\'(?:\\.|[^\'\\])*\'')
_CLOSING = {"(": ")", "[": "]", "{": "}"}


def wrong_expressions(board: Board, program: Program) -> tuple[Mistake, ...]:
    """Every mistake in the C expressions of a board file, in the order of the file."""
    mistakes = Mistakes()
    for what, one in _given(board):
        complaint = _complaint(one, program) or _elsewhere(one, program)
        if complaint is not None:
            mistakes.add(one.place, f"{what}: {complaint}")
    return tuple(mistakes.found[key] for key in sorted(mistakes.found))


def _given(board: Board) -> Iterator[tuple[str, Pattern]]:
    """Each expression with the key that it belongs to."""
    for channel in board.channels:
        firmware = channel.firmware
        for text in channel.reading:
            yield "reading", pattern(text, firmware.reading_place)
        for text in channel.value:
            yield "value", pattern(text, firmware.value_place)
        for limit in channel.limits:
            yield "constant", pattern(limit.constant, limit.constant_place)
    for fact in board.constants:
        yield "constants", Pattern(text=fact.expression, where=fact.where, place=fact.place)


def _complaint(one: Pattern, program: Program) -> str | None:
    """What keeps a text from being a C expression."""
    text = _LITERAL.sub('""', one.text)
    for placeholder in _PLACEHOLDER.findall(text):
        if placeholder not in _PLACEHOLDERS:
            known = ", ".join(_PLACEHOLDERS)
            return f"unknown placeholder {shortened(placeholder)}, known: {known}"
    if "/*" in text or "//" in text:
        return f'a comment has no place in an expression, found "{shortened(one.text)}"'
    unbalanced = _unbalanced(text)
    if not unbalanced and _is_expression(one, program):
        return None
    return f'expected a C expression, found "{shortened(one.text)}"{unbalanced}'


def _is_expression(one: Pattern, program: Program) -> bool:
    """Whether a text with balanced brackets is one C expression."""
    text = _LITERAL.sub('""', spelled(one.text))
    if "#" in text or ";" in text or not text.strip():
        return False
    alone = Parser(snippet(spelled(one.text)), is_type=lambda name: False)
    if alone.expression() is not None:
        return True
    for name in sorted(one.names):
        program.load(name)
    return any(parsed(one.text, unit) is not None for unit in program.units.values())


def _unbalanced(text: str) -> str:
    """', "(" is not closed' for the first bracket without its other."""
    open_brackets: list[str] = []
    for character in text:
        if character in _CLOSING:
            open_brackets.append(character)
        elif character in _CLOSING.values():
            before = open_brackets.pop() if open_brackets else ""
            if _CLOSING.get(before) != character:
                return f', "{character}" closes nothing'
    return f', "{open_brackets[-1]}" is not closed' if open_brackets else ""


def _elsewhere(one: Pattern, program: Program) -> str | None:
    """What is wrong with the function or file after `@`."""
    if one.where is None:
        return None
    if not one.where:
        return "expected a function or a file after @"
    tree = program.tree
    is_file = tree.resolve(one.where, True, tree.files[0]) is not None
    if is_file or _is_named(one.where, program):
        return None
    close = near(one.where, [file.path.rpartition("/")[2] for file in tree.files])
    hint = f", did you mean '{close}'?" if close is not None else ""
    return f"no file or function '{shortened(one.where)}' is in the sources{hint}"


def _is_named(where: str, program: Program) -> bool:
    """Whether the sources mention a function of this name."""
    if _IDENTIFIER.fullmatch(where) is None:
        return False
    if program.tree.mentioning(where):
        return True
    return any(where in unit.functions for unit in program.units.values())
