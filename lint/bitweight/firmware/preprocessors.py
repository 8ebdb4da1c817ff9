"""The preprocessor: active text is copied, and macro uses in it are expanded, into pieces."""

import re
from collections.abc import Mapping

from bitweight.firmware.directives import Script
from bitweight.firmware.expansions import Expander
from bitweight.firmware.extensions import EXTENSIONS
from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.macros import Macro, builtin_macro
from bitweight.firmware.outlines import Outline
from bitweight.firmware.pieces import Pieces
from bitweight.firmware.remarks import Remarks
from bitweight.firmware.tokens import WORDS, Kind, Token, next_token
from bitweight.firmware.walks import Stretch, Walk
from bitweight.limits import Limits

COMMAND_LINE = "<command line>"
_BUILTINS = (
    "__FILE__",
    "__LINE__",
    "__COUNTER__",
    "__INCLUDE_LEVEL__",
    "__BASE_FILE__",
    "__DATE__",
    "__TIME__",
)
_SPACE = re.compile(r"\s*+")
_NO_DATE = '"Jan  1 1970"'
_NO_TIME = '"00:00:00"'
"""The clock must not change what is reported."""


class Preprocessor:
    """Preprocesses one unit; afterwards its parts hold what was found."""

    def __init__(self, tree: SourceTree, limits: Limits) -> None:
        self.pieces = Pieces(limits.unit_bytes)
        self.remarks = Remarks()
        self.changes: list[tuple[int, Mapping[str, Macro | None]]] = []
        self._macros: dict[str, Macro] = {}
        self._counter = 0
        self._path = ""
        self.expander = Expander(
            self._macros,
            extensions=EXTENSIONS,
            limits=limits,
            note=lambda token, message: self.remarks.problem(token.file, token.offset, message),
            builtin=self._builtin,
        )
        self._walk = Walk(
            tree,
            limits,
            macros=self._macros,
            changes=self.changes,
            expander=self.expander,
            pieces=self.pieces,
            remarks=self.remarks,
        )
        self._stretch: Stretch | None = None
        self._position = 0

    @property
    def included(self) -> tuple[str, ...]:
        """Paths of the files that were included, in order."""
        return tuple(self._walk.included)

    def run(self, file: SourceFile, defines: Mapping[str, str | None]) -> None:
        """Preprocess `file` with definitions from outside."""
        self._path = file.path
        self._define(defines)
        self._walk.start(file)
        while self._advance(quiet=False):
            while self._stretch is not None and self._position < self._stretch.end:
                self._copy(self._stretch)

    def _define(self, defines: Mapping[str, str | None]) -> None:
        nowhere = Outline(SourceFile("<builtin>", ""))
        self._macros |= {name: builtin_macro(nowhere, name) for name in _BUILTINS}
        pairs = ((name, "1" if value is None else value) for name, value in defines.items())
        lines = [" ".join(f"#define {name} {value}".split()) for name, value in pairs]
        script = Script(SourceFile(COMMAND_LINE, "\n".join(lines)))
        for directive in script.directives:
            self._macros |= directive.macros
            if not directive.macros:
                self.remarks.problem(script.file, directive.start, "this define is malformed")
        self.changes.append((0, dict(self._macros)))

    def _advance(self, *, quiet: bool) -> bool:
        self._stretch = self._walk.advance(quiet=quiet)
        self._position = self._stretch.start if self._stretch else 0
        return self._stretch is not None

    def _copy(self, stretch: Stretch) -> None:
        """Copy a stretch up to its first macro use, and expand that."""
        script = stretch.script
        macros = self._macros
        names = script.names(stretch.start, stretch.end)
        live = {name for name in names if name in macros or name in EXTENSIONS}
        while live and self._stretch is stretch:
            use = self._next_use(stretch, live)
            if use is None:
                break
            start, end = use
            self.pieces.copy(script.outline, self._position, start)
            self._position = end
            offset = script.outline.source(start)
            name = Token(Kind.NAME, script.text[start:end], script.file, offset)
            self.pieces.expansion(self.expander.expanded(name, self))
        if self._stretch is stretch:
            self.pieces.copy(script.outline, self._position, stretch.end)
            self._position = stretch.end

    def _next_use(self, stretch: Stretch, live: set[str]) -> tuple[int, int] | None:
        text, limit = stretch.script.text, stretch.end
        for match in WORDS.finditer(text, self._position, limit):
            name = match[1]
            if name in live:
                macro = self._macros.get(name) or EXTENSIONS[name]
                behind = _SPACE.match(text, match.end(), limit)
                after = behind.end() if behind else limit
                if macro.parameters is None or text.startswith("(", after, limit):
                    return match.span()
        return None

    def opens(self) -> bool:
        """Whether the next token is `(`; it is not looked for behind a directive."""
        if self._stretch is None:
            return False
        text, end = self._stretch.script.text, self._stretch.end
        behind = _SPACE.match(text, self._position, end)
        return behind is not None and text.startswith("(", behind.end(), end)

    def take(self) -> Token | None:
        """The next token of the unit; directives before it are obeyed."""
        crossed = False
        while self._stretch is not None:
            outline, end = self._stretch.script.outline, self._stretch.end
            token, self._position = next_token(outline, self._position, end)
            if token is not None:
                return token._replace(spaced=True) if crossed else token
            self._advance(quiet=True)
            crossed = True
        return None

    def _builtin(self, name: Token) -> Token | None:
        """What a built-in macro stands for where it is used."""
        file, offset, use = name.file, name.offset, name.use
        while use is not None:
            file, offset, use = use.file, use.offset, use.within
        match name.text:
            case "__LINE__":
                text = str(file.place(offset).line)
            case "__FILE__":
                text = _quoted(file.path)
            case "__BASE_FILE__":
                text = _quoted(self._path)
            case "__INCLUDE_LEVEL__":
                text = str(self._walk.depth)
            case "__COUNTER__":
                text = str(self._counter)
                self._counter += 1
            case "__DATE__":
                text = _NO_DATE
            case "__TIME__":
                text = _NO_TIME
            case _:
                return None
        kind = Kind.STRING if text.startswith('"') else Kind.NUMBER
        return name._replace(kind=kind, text=text, exact=False)


def _quoted(text: str) -> str:
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return f'"{escaped}"'
