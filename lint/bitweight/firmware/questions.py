"""What conditionals ask: whether names are defined, files are there, expressions are not 0."""

import re
from collections.abc import Mapping

from bitweight.firmware.conditions import ConditionError, condition_holds
from bitweight.firmware.directives import Directive, Keyword, Script
from bitweight.firmware.expansions import Expander
from bitweight.firmware.files import SourceTree
from bitweight.firmware.macros import Macro
from bitweight.firmware.remarks import Remarks
from bitweight.firmware.tokens import MARKS, Kind, Token, spelled

HEADER = re.compile(r'\s*(?:"([^"\n]*)"|<([^>\n]*)>)')
"""A header name, in quotes or angle brackets (C11 6.4.7)."""
_ASKING = ("__has_attribute", "__has_builtin", "__has_feature", "__has_extension")
"""Operators that ask what a compiler can do: nothing, here."""


class Questions:
    """Answers conditionals by the macros in force, and notes names that have no definition."""

    def __init__(
        self, tree: SourceTree, *, macros: Mapping[str, Macro], expander: Expander, remarks: Remarks
    ) -> None:
        self._tree = tree
        self._macros = macros
        self._expander = expander
        self._remarks = remarks
        self._script: Script
        self._operators = {"defined": self._defined, "__has_include": self._has_include}
        self._operators |= dict.fromkeys(_ASKING, self._asks)

    def holds(self, script: Script, index: int) -> bool:
        """Whether the branch that a directive begins is the active one, if none before it is."""
        self._script = script
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
            self._problem(script, directive, f"#{directive.keyword.value} names no macro")
        else:
            self._note_test(script, index)
        return False

    def _note_test(self, script: Script, index: int) -> None:
        """Note a name without definition, unless it only keeps the file from being read twice."""
        directive = script.directives[index]
        name = directive.name
        following = script.directives[index + 1].macros if index + 1 < script.count else {}
        fallback = following.get(name) if directive.keyword is Keyword.IFNDEF else None
        if name != script.guard or (fallback is not None and fallback.body):
            offset = script.outline.source(script.text.index(name, directive.rest))
            self._remarks.test(name, script.file, offset, fallback=fallback is not None)

    def _is_true(self, script: Script, directive: Directive) -> bool:
        written = script.tokens(directive.rest, directive.end)
        tokens = self._expander.condition(written, self._operators)
        for token in tokens:
            if token.kind is Kind.NAME:
                self._remarks.test(token.text, token.file, token.offset)
        try:
            return condition_holds(tokens)
        except ConditionError as error:
            self._problem(script, directive, str(error))
            return False

    def _defined(self, operator: Token, stack: list[Token]) -> Token | None:
        name = _taken(stack)
        if name is not None and name.text == "(":
            name = _taken(stack)
            _taken(stack)
        if name is None or name.kind is not Kind.NAME:
            return None
        known = name.text in self._macros or name.text in self._operators
        if not known and name.text != self._script.guard:
            self._remarks.test(name.text, name.file, name.offset)
        return _answer(operator, known)

    def _has_include(self, operator: Token, stack: list[Token]) -> Token | None:
        tokens = _argument(stack)
        if not tokens:
            return None
        if tokens[0].kind is Kind.NAME:
            tokens = self._expander.argument(tokens)
        header = HEADER.match(spelled(tokens))
        if header is None:
            return None
        name, quoted = header[1] or header[2] or "", header[1] is not None
        found = self._tree.resolve(name, quoted, self._script.file)
        return _answer(operator, found is not None)

    def _asks(self, operator: Token, stack: list[Token]) -> Token | None:
        return _answer(operator, False) if _argument(stack) else None

    def _problem(self, script: Script, directive: Directive, message: str) -> None:
        self._remarks.problem(script.file, script.outline.source(directive.start), message)


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
