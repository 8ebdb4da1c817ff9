"""The replacement list of one macro use: arguments put in, `#` and `##` applied (C11 6.10.3.1-3).

A macro, its name where it is used and its arguments enter; the tokens that take their place leave,
to be read again by `expansions.py`.
"""

from collections.abc import Callable, Sequence
from typing import Protocol

from bitweight.firmware.macros import Macro
from bitweight.firmware.tokens import MARKS, Kind, Token, Use, kind_of, spelled

_NAME = Kind.NAME
_EMPTY = Kind.EMPTY
_LONGEST = 1 << 14
"""Characters of a token made by `#` or `##`; C11 5.2.4.1 asks for 4095."""


class Argument:
    """The tokens of one argument, as written and (made when first asked for) expanded."""

    __slots__ = ("absent", "expanded", "raw", "spelling")

    def __init__(self, raw: list[Token], *, absent: bool = False) -> None:
        self.raw = raw
        self.absent = absent
        """Whether variable arguments were left out, not merely empty."""
        self.expanded: list[Token] | None = None
        self.spelling: str | None = None

    @property
    def plain(self) -> list[Token]:
        """The argument as written."""
        return [token for token in self.raw if token.kind not in MARKS]


class ArgumentExpander(Protocol):
    """What expands arguments and hears of what cannot be done."""

    note: Callable[[Token, str], None]
    most_tokens: int

    def expand_argument(self, argument: Argument) -> list[Token]:
        """An argument expanded as if it were all the text there is."""


def space_first(tokens: list[Token], spaced: bool) -> None:
    """Give the first token of a list, marks aside, the white space of what it stands for."""
    for index, token in enumerate(tokens):
        if token.kind not in MARKS:
            if token.spaced != spaced:
                tokens[index] = token._replace(spaced=spaced)
            return


class Substitution:
    """The replacement list of one use, with its arguments put in and its operators applied."""

    def __init__(
        self,
        expander: ArgumentExpander,
        macro: Macro,
        name: Token,
        use: Use | None,
        arguments: Sequence[Argument],
    ) -> None:
        self._expander = expander
        self._macro = macro
        self._name = name
        self._use = use
        self._arguments = arguments
        self._placeless = use is name.use
        self._has_options = macro.variadic
        """Whether `__VA_OPT__` means something here: not inside another one."""

    def tokens(self) -> list[Token]:
        """The replacement list, arguments in place and operators applied; not yet rescanned."""
        body = self._macro.body
        if not self._macro.operates:
            if not self._arguments:
                return [self._own(token) for token in body]
            return self._with_arguments(body)
        return [token for token in self._operated(body) if token.kind is not _EMPTY]

    def _own(self, token: Token) -> Token:
        """A token of the replacement list; an extension's stands where its word is used."""
        kind, text, spaced = token.kind, token.text, token.spaced
        if self._placeless:
            name = self._name
            return Token(kind, text, name.file, name.offset, spaced, self._use, exact=False)
        return Token(kind, text, token.file, token.offset, spaced, self._use)

    def _with_arguments(self, body: Sequence[Token]) -> list[Token]:
        out: list[Token] = []
        positions = self._macro.positions
        for token in body:
            position = positions.get(token.text)
            if position is None:
                out.append(self._own(token))
            else:
                out += self._argument(position, token.spaced)
            if len(out) > self._expander.most_tokens:
                break
        return out

    def _argument(self, position: int, spaced: bool) -> list[Token]:
        tokens = list(self._expander.expand_argument(self._arguments[position]))
        space_first(tokens, spaced)
        return tokens

    def _operated(self, body: Sequence[Token]) -> list[Token]:
        """The list with `#`, `##` and `__VA_OPT__` applied; placemarkers are still there."""
        out: list[Token] = []
        index = 0
        pasting = False
        while index < len(body) and len(out) <= self._expander.most_tokens:
            if body[index].text == "##" and out and not pasting:
                pasting = True
                index += 1
                continue
            end = self._operand_end(body, index)
            raw = pasting or (end < len(body) and body[end].text == "##")
            tokens = self._operand(body, index, end, raw)
            if pasting and not self._is_comma_before_rest(out, body[index]):
                self._paste(out, tokens)
            elif pasting:
                self._join_rest(out, tokens)
            else:
                out += tokens
            pasting = False
            index = end
        return out

    def _operand_end(self, body: Sequence[Token], index: int) -> int:
        token = body[index]
        after = body[index + 1].text if index + 1 < len(body) else ""
        if self._stringizes(token, after):
            return index + 2
        if token.text == "__VA_OPT__" and after == "(" and self._has_options:
            return _closing(body, index + 1) + 1
        return index + 1

    def _stringizes(self, token: Token, after: str) -> bool:
        return token.text == "#" and bool(self._arguments) and after in self._macro.positions

    def _operand(self, body: Sequence[Token], index: int, end: int, raw: bool) -> list[Token]:
        token = body[index]
        if end > index + 2:
            return self._optional(body[index + 2 : end - 1], token)
        if end == index + 2:
            return [self._stringized(token, self._macro.positions[body[index + 1].text])]
        position = self._macro.positions.get(token.text) if token.kind is _NAME else None
        if position is None:
            return [self._own(token)]
        if not raw:
            return self._argument(position, token.spaced)
        tokens = self._arguments[position].plain or [self._empty(token)]
        space_first(tokens, token.spaced)
        return tokens

    def _empty(self, token: Token) -> Token:
        return Token(_EMPTY, "", token.file, token.offset, token.spaced, self._use)

    def _optional(self, content: Sequence[Token], token: Token) -> list[Token]:
        """What `__VA_OPT__(content)` stands for: nothing where the variable arguments are empty."""
        rest = self._expander.expand_argument(self._arguments[-1])
        if all(each.kind in MARKS for each in rest):
            return [self._empty(token)]
        self._has_options = False
        tokens = self._operated(content) or [self._empty(token)]
        self._has_options = True
        space_first(tokens, token.spaced)
        return tokens

    def _stringized(self, sign: Token, position: int) -> Token:
        """The spelling of an argument as a string (C11 6.10.3.2)."""
        argument = self._arguments[position]
        if argument.spelling is None:
            argument.spelling = _string(argument.plain)
        text = argument.spelling
        if len(text) > _LONGEST:
            self._expander.note(sign, f"a string of more than {_LONGEST} characters is left empty")
            text = '""'
        spot = self._name if self._placeless else sign
        return Token(Kind.STRING, text, spot.file, spot.offset, sign.spaced, self._use, exact=False)

    def _is_comma_before_rest(self, out: list[Token], token: Token) -> bool:
        """Whether this is `, ## rest`, which drops the comma when the rest is left out (GNU C)."""
        parameters = self._macro.parameters
        return (
            self._macro.variadic
            and bool(parameters)
            and token.text == (parameters or ("",))[-1]
            and out[-1].text == ","
        )

    def _join_rest(self, out: list[Token], rest: list[Token]) -> None:
        if self._arguments[-1].absent:
            out.pop()
        else:
            out += rest

    def _paste(self, out: list[Token], right: list[Token]) -> None:
        while out and out[-1].kind in MARKS:
            out.pop()
        right = [token for token in right if token.kind not in MARKS]
        left = out.pop() if out else None
        if left is None or not right or left.kind is _EMPTY:
            out += right or ([left] if left else [])
        elif right[0].kind is _EMPTY:
            out += [left, *right[1:]]
        else:
            out += [*self._pasted(left, right[0]), *right[1:]]

    def _pasted(self, left: Token, right: Token) -> list[Token]:
        """Two tokens made one (C11 6.10.3.3), or both if they do not make one."""
        text = left.text + right.text
        kind = kind_of(text) if len(text) <= _LONGEST else None
        if kind is None:
            both = f"{left.text[:40]} and {right.text[:40]}"
            self._expander.note(left, f"{both} do not paste to one token")
            return [left, right]
        return [Token(kind, text, left.file, left.offset, left.spaced, self._use, exact=False)]


def _string(tokens: Sequence[Token]) -> str:
    """The spelling of tokens as one string."""
    parts = [
        token._replace(text=token.text.replace("\\", "\\\\").replace('"', '\\"'))
        if token.kind in (Kind.STRING, Kind.CHARACTER)
        else token
        for token in tokens
    ]
    return f'"{spelled(parts)}"'


def _closing(body: Sequence[Token], index: int) -> int:
    """The index of the `)` that matches the `(` at `index`, or of the last token."""
    depth = 0
    for position in range(index, len(body)):
        depth += (body[position].text == "(") - (body[position].text == ")")
        if depth == 0:
            return position
    return len(body) - 1
