"""The preprocessing directives of one source, read once and obeyed by every unit that includes it.

An outline enters; a `Script` leaves: its directives in order, each conditional knowing where its
next branch stands, neighbouring definitions joined so that they come into force in one step.
"""

import re
from collections.abc import Mapping
from enum import Enum
from typing import NamedTuple

from bitweight.firmware.files import SourceFile
from bitweight.firmware.macros import Macro, macro_defined
from bitweight.firmware.outlines import Outline
from bitweight.firmware.tokens import NAME, WORDS, Token, tokens_of

_KEYWORD = re.compile(rf"\#\s*({NAME})?\s*({NAME})?")


class Keyword(Enum):
    """The directives that are obeyed; all others are blanked."""

    DEFINE = "define"
    UNDEF = "undef"
    INCLUDE = "include"
    INCLUDE_NEXT = "include_next"
    IF = "if"
    IFDEF = "ifdef"
    IFNDEF = "ifndef"
    ELIF = "elif"
    ELIFDEF = "elifdef"
    ELIFNDEF = "elifndef"
    ELSE = "else"
    ENDIF = "endif"
    PRAGMA = "pragma"
    ERROR = "error"
    WARNING = "warning"
    OTHER = ""


_KEYWORDS = {keyword.value: keyword for keyword in Keyword} | {"import": Keyword.INCLUDE}
_OPENERS = (Keyword.IF, Keyword.IFDEF, Keyword.IFNDEF)
_BRANCHES = (Keyword.ELIF, Keyword.ELIFDEF, Keyword.ELIFNDEF, Keyword.ELSE)


class Directive(NamedTuple):
    """A directive, or a run of definitions with nothing between them.

    Offsets are logical: `start` of the `#`, `end`, `rest` of what follows the keyword. `name` is
    the identifier there, if any. `macros` are what a run defines; a malformed definition is `name`
    alone with none.
    """

    keyword: Keyword
    start: int
    end: int
    rest: int
    name: str
    macros: Mapping[str, Macro]


class Script:
    """A file's directives and how its conditionals hang together.

    `following[i]` is the index of the conditional's next branch or `#endif`, `closing[i]` of its
    `#endif`: the number of directives if there is none, -1 for a branch without its `#if`. `guard`
    is the macro that keeps the whole file from being read twice.
    """

    def __init__(self, file: SourceFile) -> None:
        self.file = file
        self.outline = file.remembered(Outline)
        self.text = self.outline.logical
        self.directives = _joined_runs(self.outline)
        self.count = len(self.directives)
        self.following, self.closing = _branches(self.directives)
        self.guard = self._guard()
        self._names: dict[tuple[int, int], frozenset[str]] = {}
        self._tokens: dict[tuple[int, int], tuple[Token, ...]] = {}

    def names(self, start: int, end: int) -> frozenset[str]:
        """The identifiers of a stretch between two directives."""
        key = (start, end)
        if key not in self._names:
            self._names[key] = frozenset(WORDS.findall(self.text, start, end))
        return self._names[key]

    def tokens(self, start: int, end: int) -> tuple[Token, ...]:
        """The tokens of a condition."""
        key = (start, end)
        if key not in self._tokens:
            self._tokens[key] = tuple(tokens_of(self.outline, start, end))
        return self._tokens[key]

    def _guard(self) -> str | None:
        """The macro that a conditional around all of the file asks to be undefined."""
        directives = self.directives
        if not directives or not self._is_blank(0, directives[0].start):
            return None
        last = len(directives) - 1
        if not (self.following[0] == self.closing[0] == last):
            return None
        behind = self._is_blank(directives[last].end, len(self.text))
        return _guarding(directives[0], self.text) if behind else None

    def _is_blank(self, start: int, end: int) -> bool:
        return start >= end or self.text[start:end].isspace()


_UNDEFINED = re.compile(rf"\s*!\s*defined\s*\(?\s*({NAME})\s*\)?\s*")


def _guarding(opener: Directive, text: str) -> str | None:
    """The macro whose absence a conditional asks for."""
    if opener.keyword is Keyword.IFNDEF:
        return opener.name
    match = opener.keyword is Keyword.IF and _UNDEFINED.fullmatch(text, opener.rest, opener.end)
    return match[1] if match else None


def _joined_runs(outline: Outline) -> tuple[Directive, ...]:
    """The directives of a file, definitions that follow each other as one."""
    directives: list[Directive] = []
    text = outline.logical
    run: dict[str, Macro] = {}
    first = last = 0
    for start, end in outline.directives:
        macro = macro_defined(outline, start, end)
        if run and (macro is None or not text[last:start].isspace()):
            directives.append(Directive(Keyword.DEFINE, first, last, last, "", run))
            run = {}
        if macro is None:
            directives.append(_directive(text, start, end))
        else:
            first = first if run else start
            run[macro.name] = macro
            last = end
    if run:
        directives.append(Directive(Keyword.DEFINE, first, last, last, "", run))
    return tuple(directives)


def _directive(text: str, start: int, end: int) -> Directive:
    match = _KEYWORD.match(text, start, end)
    word, name = (match[1] or "", match[2] or "") if match else ("", "")
    rest = match.end(1) if match and word else start + 1
    return Directive(_KEYWORDS.get(word, Keyword.OTHER), start, end, rest, name, {})


def _branches(directives: tuple[Directive, ...]) -> tuple[list[int], list[int]]:
    count = len(directives)
    following = [count] * count
    closing = [count] * count
    groups: list[list[int]] = []
    for index, directive in enumerate(directives):
        if directive.keyword in _OPENERS:
            groups.append([index])
        elif directive.keyword in _BRANCHES or directive.keyword is Keyword.ENDIF:
            if not groups:
                following[index] = closing[index] = -1
                continue
            following[groups[-1][-1]] = index
            groups[-1].append(index)
            if directive.keyword is Keyword.ENDIF:
                for member in groups.pop():
                    closing[member] = index
    return following, closing
