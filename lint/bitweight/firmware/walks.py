"""The way through a file and what it includes: directives are obeyed, active text is handed out.

Conditionals need no memory: a branch met in active text ends its group, and a script knows where
each group goes on.
"""

from collections.abc import Mapping
from typing import NamedTuple

from bitweight.firmware.directives import Directive, Keyword, Script
from bitweight.firmware.expansions import Expander
from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.macros import Macro
from bitweight.firmware.pieces import Pieces
from bitweight.firmware.questions import HEADER, Questions
from bitweight.firmware.remarks import Remarks
from bitweight.firmware.tokens import spelled
from bitweight.limits import Limits

_SAME_FILE = 8
"""Times a file may stand inside itself before it counts as an include loop."""
_LEAST_COST = 4096
"""Characters that an include is charged for at least, so that empty files end too."""


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
        self._questions = Questions(tree, macros=macros, expander=expander, remarks=remarks)
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
            last = frame.index >= script.count
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
        if index < frame.script.count:
            self._pass(frame, index)
            return
        self._blank(frame.script, frame.position, len(frame.script.text))
        frame.position = len(frame.script.text)
        frame.index = index

    def _choose(self, frame: _Frame, index: int) -> None:
        """Go to the branch of a conditional that is active."""
        script = frame.script
        directives = script.directives
        if script.closing[index] == script.count:
            self._problem(script, directives[index].start, "this conditional has no #endif")
        while index < script.count and not self._questions.holds(script, index):
            index = script.following[index]
        self._skip(frame, index)

    def _include(self, script: Script, directive: Directive) -> None:
        header = HEADER.match(script.text, directive.rest, directive.end)
        if header is None:
            tokens = self._expander.expanded_text(script.tokens(directive.rest, directive.end))
            header = HEADER.match(spelled(tokens))
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
