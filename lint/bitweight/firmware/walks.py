"""The way through a file and what it includes: directives are obeyed, active text is handed out.

Conditionals need no memory: a branch met in active text ends its group, and a script knows where
each group goes on.
"""

import re
from collections.abc import Mapping
from typing import NamedTuple

from bitweight.firmware.conditions import ConditionError, condition_holds
from bitweight.firmware.directives import Directive, Keyword, Script
from bitweight.firmware.expansions import Expander
from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.macros import Macro
from bitweight.firmware.pieces import Pieces
from bitweight.firmware.remarks import Remarks
from bitweight.firmware.tokens import MARKS, Kind, Token, spelled
from bitweight.limits import Limits

_HEADER = re.compile(r'\s*(?:"([^"\n]*)"|<([^>\n]*)>)')
_SAME_FILE = 8
"""Times a file may stand inside itself before it counts as an include loop."""
_LEAST_COST = 1024
"""Characters that an include is charged for at least, so that empty files end too."""
_ASKING = ("__has_attribute", "__has_builtin", "__has_feature", "__has_extension")
"""Operators that ask what a compiler can do: nothing, here."""


class Stretch(NamedTuple):
    """Active text between two directives, as logical offsets."""

    script: Script
    start: int
    end: int


class _Frame:
    """A file on the way: the next directive and the position before it."""

    __slots__ = ("index", "position", "script")

    def __init__(self, script: Script) -> None:
        self.script = script
        self.index = 0
        self.position = 0


class Walk:
    """Obeys directives between one stretch of active text and the next.

    `macros` and `changes` (with offsets of the text put down in `pieces`) follow the definitions.
    Text that is not active is put down blank: in the unit's own file as long as it was, in headers
    as a line end.
    """

    def __init__(
        self,
        tree: SourceTree,
        limits: Limits,
        *,
        macros: dict[str, Macro],
        changes: list[tuple[int, Mapping[str, Macro | None]]],
        expander: Expander,
        pieces: Pieces,
        remarks: Remarks,
    ) -> None:
        self._tree = tree
        self._limits = limits
        self._macros = macros
        self._changes = changes
        self._expander = expander
        self._pieces = pieces
        self._remarks = remarks
        self._frames: list[_Frame] = []
        self._main: Script | None = None
        self._quiet = False
        self._cost = 0
        self._once: set[SourceFile] = set()
        self._operators = {"defined": self._defined, "__has_include": self._has_include}
        self._operators |= dict.fromkeys(_ASKING, self._asks)
        self.included: dict[str, None] = {}

    @property
    def depth(self) -> int:
        """How many includes lead to the present file."""
        return len(self._frames) - 1

    def start(self, file: SourceFile) -> None:
        """Begin with the unit's own file."""
        self._main = file.remembered(Script)
        self._frames = [_Frame(self._main)]

    def advance(self, *, quiet: bool) -> Stretch | None:
        """The next active text that is not blank; None at the end. `quiet` puts nothing down."""
        self._quiet = quiet
        while self._frames and not self._is_over():
            frame = self._frames[-1]
            script = frame.script
            last = frame.index >= len(script.directives)
            start = frame.position
            end = len(script.text) if last else script.directives[frame.index].start
            if start < end:
                frame.position = end
                if not script.text[start:end].isspace():
                    return Stretch(script, start, end)
                self._blank(script, start, end)
            elif last:
                self._frames.pop()
            else:
                self._obey(frame, frame.index, script.directives[frame.index])
        return None

    def _is_over(self) -> bool:
        if self._pieces.length <= self._limits.unit_bytes:
            return False
        frame = self._frames[-1]
        self._problem(frame.script, frame.position, "the unit is too large; its rest is not read")
        self._frames.clear()
        return True

    def _problem(self, script: Script, offset: int, message: str) -> None:
        self._remarks.problem(script.file, script.outline.source(offset), message)

    def _blank(self, script: Script, start: int, end: int) -> None:
        if self._quiet or start >= end:
            return
        if script is self._main:
            self._pieces.copy(script.outline, start, end, blank=True)
        else:
            self._pieces.line_end(script.outline, start)

    def _pass(self, frame: _Frame, index: int) -> None:
        """Go on behind a directive."""
        directive = frame.script.directives[index]
        self._blank(frame.script, frame.position, directive.end)
        frame.position = directive.end
        frame.index = index + 1

    def _obey(self, frame: _Frame, index: int, directive: Directive) -> None:
        match directive.keyword:
            case Keyword.IF | Keyword.IFDEF | Keyword.IFNDEF:
                self._choose(frame, index)
            case Keyword.ELIF | Keyword.ELIFDEF | Keyword.ELIFNDEF | Keyword.ELSE | Keyword.ENDIF:
                self._end_branch(frame, index, directive)
            case Keyword.INCLUDE | Keyword.INCLUDE_NEXT:
                self._pass(frame, index)
                self._include(frame.script, directive)
            case _:
                self._pass(frame, index)
                self._obey_line(frame.script, directive)

    def _obey_line(self, script: Script, directive: Directive) -> None:
        match directive.keyword:
            case Keyword.DEFINE if directive.macros:
                self._define(directive.macros)
            case Keyword.DEFINE:
                self._problem(script, directive.start, "this #define is malformed")
            case Keyword.UNDEF:
                self._undefine(directive.name)
            case Keyword.PRAGMA if directive.name == "once":
                self._once.add(script.file)
            case Keyword.ERROR | Keyword.WARNING:
                words = " ".join(script.text[directive.rest : directive.end].split())
                message = f"#{directive.keyword.value} is active: {words}"
                self._problem(script, directive.start, message)

    def _define(self, macros: Mapping[str, Macro]) -> None:
        self._changes.append((self._pieces.length, macros))
        self._macros.update(macros)

    def _undefine(self, name: str) -> None:
        self._changes.append((self._pieces.length, {name: None}))
        self._macros.pop(name, None)

    def _end_branch(self, frame: _Frame, index: int, directive: Directive) -> None:
        """Leave the group whose active branch ends here."""
        closing = frame.script.closing[index]
        if closing < 0:
            word = directive.keyword.value
            self._problem(frame.script, directive.start, f"#{word} without #if")
            closing = index
        self._skip(frame, closing)

    def _skip(self, frame: _Frame, index: int) -> None:
        """Go on behind a directive further down, or at the end of the file."""
        if index < len(frame.script.directives):
            self._pass(frame, index)
            return
        self._blank(frame.script, frame.position, len(frame.script.text))
        frame.position = len(frame.script.text)
        frame.index = index

    def _choose(self, frame: _Frame, index: int) -> None:
        """Go to the branch of a conditional that is active."""
        script = frame.script
        directives = script.directives
        if script.closing[index] == len(directives):
            self._problem(script, directives[index].start, "this conditional has no #endif")
        while index < len(directives) and not self._holds(script, index):
            index = script.following[index]
        self._skip(frame, index)

    def _holds(self, script: Script, index: int) -> bool:
        directive = script.directives[index]
        match directive.keyword:
            case Keyword.ELSE | Keyword.ENDIF:
                return True
            case Keyword.IFDEF | Keyword.ELIFDEF:
                return self._is_defined(script, index)
            case Keyword.IFNDEF | Keyword.ELIFNDEF:
                return not self._is_defined(script, index)
            case _:
                return self._is_true(script, directive)

    def _is_defined(self, script: Script, index: int) -> bool:
        directive = script.directives[index]
        name = directive.name
        if name in self._macros or name in self._operators:
            return True
        if not name:
            self._problem(script, directive.start, f"#{directive.keyword.value} names no macro")
        elif name != script.guard:
            following = script.directives[index + 1 : index + 2]
            fallback = directive.keyword is Keyword.IFNDEF and any(
                name in each.macros for each in following
            )
            offset = script.outline.source(script.text.index(name, directive.rest))
            self._remarks.test(name, script.file, offset, fallback=fallback)
        return False

    def _is_true(self, script: Script, directive: Directive) -> bool:
        written = script.tokens(directive.rest, directive.end)
        tokens = self._expander.condition(written, self._operators)
        for token in tokens:
            if token.kind is Kind.NAME:
                self._remarks.test(token.text, token.file, token.offset)
        try:
            return condition_holds(tokens)
        except ConditionError as error:
            self._problem(script, directive.start, str(error))
            return False

    def _defined(self, operator: Token, stack: list[Token]) -> Token | None:
        name = _taken(stack)
        if name is not None and name.text == "(":
            name = _taken(stack)
            _taken(stack)
        if name is None or name.kind is not Kind.NAME:
            return None
        known = name.text in self._macros or name.text in self._operators
        script = self._frames[-1].script
        if not known and name.text != script.guard:
            self._remarks.test(name.text, name.file, name.offset)
        return _answer(operator, known)

    def _has_include(self, operator: Token, stack: list[Token]) -> Token | None:
        tokens = _argument(stack)
        if not tokens:
            return None
        if tokens[0].kind is Kind.NAME:
            tokens = self._expander.argument(tokens)
        header = _HEADER.match(spelled(tokens))
        if header is None:
            return None
        name, quoted = header[1] or header[2] or "", header[1] is not None
        found = self._tree.resolve(name, quoted, self._frames[-1].script.file)
        return _answer(operator, found is not None)

    def _asks(self, operator: Token, stack: list[Token]) -> Token | None:
        return _answer(operator, False) if _argument(stack) else None

    def _include(self, script: Script, directive: Directive) -> None:
        header = _HEADER.match(script.text, directive.rest, directive.end)
        if header is None:
            tokens = self._expander.expanded_text(script.tokens(directive.rest, directive.end))
            header = _HEADER.match(spelled(tokens))
        if header is None:
            self._problem(script, directive.start, "this #include names no file")
            return
        name, quoted = header[1] or header[2] or "", header[1] is not None
        file = self._tree.resolve(name, quoted, script.file)
        if file is None or (file is script.file and directive.keyword is Keyword.INCLUDE_NEXT):
            place = script.file.place(script.outline.source(directive.start))
            self._remarks.miss(name, place)
        else:
            self._enter(file, script, directive)

    def _enter(self, file: SourceFile, script: Script, directive: Directive) -> None:
        included = file.remembered(Script)
        self.included[file.path] = None
        if file in self._once or (included.guard and included.guard in self._macros):
            return
        within = sum(frame.script is included for frame in self._frames)
        self._cost += max(len(file.text), _LEAST_COST)
        if within >= _SAME_FILE:
            self._problem(script, directive.start, f"{file.path} includes itself without end")
        elif len(self._frames) > self._limits.include_depth:
            message = f"includes nest more than {self._limits.include_depth} deep"
            self._problem(script, directive.start, message)
        elif self._cost > self._limits.unit_bytes:
            self._problem(script, directive.start, "the unit includes too much; this is left out")
        else:
            self._frames.append(_Frame(included))


def _taken(stack: list[Token]) -> Token | None:
    """The next token of a reversed list; marks before it stay."""
    index = len(stack) - 1
    while index >= 0 and stack[index].kind in MARKS:
        index -= 1
    return stack.pop(index) if index >= 0 else None


def _argument(stack: list[Token]) -> list[Token]:
    """What stands in the parentheses that come next; empty if none do."""
    token = _taken(stack)
    if token is None or token.text != "(":
        return []
    tokens: list[Token] = []
    depth = 1
    while (token := _taken(stack)) is not None:
        depth += (token.text == "(") - (token.text == ")")
        if depth == 0:
            return tokens
        tokens.append(token)
    return []


def _answer(operator: Token, holds: bool) -> Token:
    return operator._replace(kind=Kind.NUMBER, text=str(int(holds)), exact=False)
