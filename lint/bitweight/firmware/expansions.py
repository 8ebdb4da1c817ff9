"""Macro expansion on tokens (C11 6.10.3), each keeping the macro uses it came through.

Tokens of ordinary text enter, expanded tokens leave, with marks where each expansion begins and
ends. A macro is not expanded again until what it expanded to has been read to its end, and a name
met meanwhile is never expanded: where the standard leaves a choice, this is gcc's.
"""

from collections.abc import Callable, Iterable, Mapping
from typing import NamedTuple, Protocol

from bitweight.firmware.extensions import KEPT
from bitweight.firmware.macros import Definitions, Macro
from bitweight.firmware.substitutions import Argument, Substitution, space_first
from bitweight.firmware.tokens import MARKS, Kind, Token, Use
from bitweight.limits import Limits

_NAME = Kind.NAME
_LEAVE = Kind.LEAVE
_ARGUMENT_DEPTH = 60
"""Arguments within arguments that are expanded; seven Python frames each."""
_WORK = 64
"""Characters of a unit's bound that one expanded token is charged for."""
_RETRIES = 16
"""Argument lists without an end that are read again for what else they hold."""


class Following(Protocol):
    """The text behind a macro use, where an argument list may stand."""

    def opens(self) -> bool:
        """Whether the next token is `(`."""

    def take(self) -> Token | None:
        """The next token, None at the end of the unit."""


class Entered(NamedTuple):
    """One expansion: the macro, and the name that was expanded."""

    macro: Macro
    name: Token


class _Nothing:
    def opens(self) -> bool:
        return False

    def take(self) -> Token | None:
        return None


NOTHING: Following = _Nothing()


class Expander:
    """Expands macro uses by the definitions in force.

    `extensions` are consulted after `definitions`. `operator` may answer for a name that is an
    operator of a conditional: it gets the name and a function that yields the tokens behind it.
    `note` is told what could not be expanded as written.
    """

    def __init__(
        self,
        definitions: Definitions,
        *,
        extensions: Mapping[str, Macro],
        limits: Limits,
        note: Callable[[Token, str], None],
        builtin: Callable[[Token], Token | None],
    ) -> None:
        self._definitions = definitions
        self._extensions = extensions
        self._limits = limits
        self.note = note
        self.most_tokens = limits.macro_tokens
        self._builtin = builtin
        self._operators: Mapping[str, Callable[[Token, list[Token]], Token | None]] = {}
        self._disabled: set[str] = set()
        self._spent = 0
        self._depth = 0
        self._retries = _RETRIES
        self.work = 0
        """Tokens read from expansions so far."""
        self.entered: list[Entered] = []
        """Every expansion; `OPEN` and `CLOSE` tokens carry an index into it."""

    def expanded(self, token: Token, following: Following = NOTHING) -> list[Token]:
        """One token of ordinary text expanded, reading on in `following` where it must."""
        return self._all([token], following)

    def expanded_text(self, tokens: Iterable[Token]) -> list[Token]:
        """Tokens of ordinary text expanded, without marks."""
        return [token for token in self._all([*tokens]) if token.kind not in MARKS]

    def condition(
        self,
        tokens: Iterable[Token],
        operators: Mapping[str, Callable[[Token, list[Token]], Token | None]],
    ) -> list[Token]:
        """The tokens of a conditional expanded; `operators` act on the tokens that follow them."""
        self._operators = operators
        extensions, self._extensions = self._extensions, {}
        try:
            return self.expanded_text(tokens)
        finally:
            self._operators = {}
            self._extensions = extensions

    def argument(self, tokens: list[Token]) -> list[Token]:
        """Tokens in the operand of a conditional's operator, expanded."""
        found = self.expand_argument(Argument(tokens))
        return [token for token in found if token.kind not in MARKS]

    def _all(self, tokens: list[Token], following: Following = NOTHING) -> list[Token]:
        self._spent = 0
        self._disabled.clear()
        out: list[Token] = []
        tokens.reverse()
        self._run(tokens, following, out)
        return out

    def _run(self, stack: list[Token], following: Following, out: list[Token]) -> None:
        """Expand the reversed tokens of `stack` into `out`."""
        definitions, extensions, disabled = self._definitions, self._extensions, self._disabled
        while stack:
            token = stack.pop()
            if token.kind is not _NAME:
                if token.kind is _LEAVE:
                    self._leave(token, out)
                else:
                    out.append(token)
                continue
            text = token.text
            if text in self._operators:
                answer = self._operators[text](token, stack)
                out.append(token if answer is None else answer)
                continue
            macro = definitions.get(text) or extensions.get(text)
            if macro is None or token.painted:
                out.append(token)
            elif text in disabled:
                out.append(token._replace(painted=True))
            else:
                self._expand(macro, token, stack, following, out)

    def _leave(self, mark: Token, out: list[Token]) -> None:
        self._disabled.discard(mark.text)
        out.append(mark._replace(kind=Kind.CLOSE))

    def _expand(
        self,
        macro: Macro,
        name: Token,
        stack: list[Token],
        following: Following,
        out: list[Token],
    ) -> None:
        if self._is_over(name):
            out.append(name)
            return
        if macro.builtin:
            out.append(self._builtin(name) or name)
            return
        arguments: list[Argument] | None = []
        if macro.parameters is not None:
            arguments = self._arguments(macro, name, stack, following, out)
        if arguments is None:
            out.append(name)
        else:
            self._enter(macro, name, arguments, stack, out)

    def _is_over(self, name: Token) -> bool:
        """Whether a bound keeps `name` from being expanded."""
        if self.work > self._limits.unit_bytes // _WORK:
            self.note(name, "the macros of the unit expand to too many tokens")
            return True
        if self._spent > self._limits.macro_tokens:
            self.note(name, f"a macro expands to more than {self._limits.macro_tokens} tokens")
            return True
        if len(self._disabled) >= self._limits.macro_depth:
            self.note(name, f"macros nest more than {self._limits.macro_depth} deep")
            return True
        return False

    def _enter(
        self,
        macro: Macro,
        name: Token,
        arguments: list[Argument],
        stack: list[Token],
        out: list[Token],
    ) -> None:
        """Put the expansion of a use on the stack, to be read again (C11 6.10.3.4)."""
        extends = self._extensions.get(macro.name) is macro
        use = name.use if extends else Use(macro.name, name.file, name.offset, name.use)
        body = Substitution(self, macro, name, use, arguments).tokens()
        space_first(body, name.spaced)
        self._spent += len(body) + 1
        self.work += len(body) + 1
        number = len(self.entered)
        self.entered.append(Entered(macro, name))
        out.append(Token(Kind.OPEN, macro.name, name.file, number))
        stack.append(Token(_LEAVE, macro.name, name.file, number))
        self._disabled.add(macro.name)
        body.reverse()
        stack += body

    def _arguments(
        self,
        macro: Macro,
        name: Token,
        stack: list[Token],
        following: Following,
        out: list[Token],
    ) -> list[Argument] | None:
        """The arguments of a use, taken off what follows; None if it has none or the wrong ones."""
        if not self._opens(stack, following, out):
            return None
        taken: list[Token] = []
        lists = self._listed(macro, stack, following, out, taken)
        if lists is None:
            most = self._limits.macro_tokens
            self.note(name, f"the arguments of {name.text} have no end within {most} tokens")
            self._retries -= 1
            if self._retries < 0:
                taken = [token._replace(painted=True) for token in taken]
        else:
            arguments = _matched(macro, lists)
            kept = self._extensions.get(name.text) is macro and _is_kept(taken)
            if arguments is not None and not kept:
                return arguments
            if not kept:
                self.note(name, f"{name.text} is used with {len(lists)} arguments")
        stack += reversed(taken)
        return None

    def _opens(self, stack: list[Token], following: Following, out: list[Token]) -> bool:
        """Whether `(` comes next; leaves the expansions that end before it."""
        index = len(stack) - 1
        while index >= 0 and stack[index].kind in MARKS:
            index -= 1
        opens = stack[index].text == "(" if index >= 0 else following.opens()
        if opens:
            while len(stack) - 1 > index:
                self._pass(stack.pop(), out)
        return opens

    def _pass(self, mark: Token, out: list[Token]) -> None:
        if mark.kind is _LEAVE:
            self._leave(mark, out)
        else:
            out.append(mark)

    def _listed(
        self,
        macro: Macro,
        stack: list[Token],
        following: Following,
        out: list[Token],
        taken: list[Token],
    ) -> list[list[Token]] | None:
        """The tokens between the commas up to the matching `)`; None if the text ends before."""
        last = len(macro.parameters or ()) if macro.variadic else 0
        lists: list[list[Token]] = [[]]
        depth = 0
        while len(taken) <= self._limits.macro_tokens:
            token = stack.pop() if stack else following.take()
            if token is None:
                return None
            kind, text = token.kind, token.text
            if kind is _LEAVE:
                self._leave(token, out)
                continue
            taken.append(token)
            if kind is _NAME:
                if text in self._disabled and not token.painted:
                    token = token._replace(painted=True)
            elif kind is Kind.PUNCTUATOR:
                if text == "(":
                    depth += 1
                    if depth == 1:
                        continue
                elif text == ")":
                    depth -= 1
                    if depth == 0:
                        return lists
                elif text == "," and depth == 1 and len(lists) != last:
                    lists.append([])
                    continue
            lists[-1].append(token)
        return None

    def expand_argument(self, argument: Argument) -> list[Token]:
        """An argument expanded as if it were all the text there is (C11 6.10.3.1)."""
        if argument.expanded is None:
            out: list[Token] = []
            if self._depth < _ARGUMENT_DEPTH:
                self._depth += 1
                self._run(argument.raw[::-1], NOTHING, out)
                self._depth -= 1
            else:
                out = argument.raw
                message = f"arguments of macros nest more than {_ARGUMENT_DEPTH} deep"
                for token in argument.plain[:1]:
                    self.note(token, message)
            argument.expanded = out
        return argument.expanded


def _is_kept(tokens: list[Token]) -> bool:
    return any(token.text in KEPT for token in tokens)


def _matched(macro: Macro, lists: list[list[Token]]) -> list[Argument] | None:
    """An argument for each parameter; None if their numbers differ."""
    wanted = len(macro.parameters or ())
    if wanted == 0 and len(lists) == 1:
        return [] if all(token.kind in MARKS for token in lists[0]) else None
    absent = macro.variadic and len(lists) == wanted - 1
    if absent:
        lists.append([])
    if len(lists) != wanted:
        return None
    arguments = [Argument(tokens) for tokens in lists]
    if absent or (macro.variadic and wanted == 1 and not arguments[0].plain):
        arguments[-1].absent = True
    return arguments
