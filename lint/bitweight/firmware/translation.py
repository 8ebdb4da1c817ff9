"""One translation unit, preprocessed, every character of it still knowing where it was written.

A tree, a file of it and definitions from outside enter (C11 6.10 is what happens to them); a
`TranslationUnit` leaves. Nothing in the sources makes this fail: what cannot be done as written is
a `Problem`.
"""

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import NamedTuple

from bitweight.firmware.expansions import Entered, Expander
from bitweight.firmware.extensions import EXTENSIONS
from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.macros import Macro, MacrosInForce, MacroTable
from bitweight.firmware.outlines import Outline
from bitweight.firmware.pieces import Expanded, Pieces
from bitweight.firmware.preprocessors import Preprocessor
from bitweight.firmware.remarks import Missing, Problem, Undefined
from bitweight.firmware.tokens import Origin, tokens_of
from bitweight.limits import Limits
from bitweight.places import Place


class Invocation(NamedTuple):
    """A macro use; `start` to `end` are the offsets of its expansion in the unit's text."""

    name: str
    start: int
    end: int
    use: Place
    definition: Macro


@dataclass(frozen=True, kw_only=True, eq=False)
class TranslationUnit:
    """The preprocessed text of one source and what its preprocessing met."""

    path: str
    text: str = field(repr=False)
    macros: MacroTable = field(repr=False)
    included: tuple[str, ...]
    missing: tuple[Missing, ...]
    undefined: tuple[Undefined, ...]
    problems: tuple[Problem, ...]
    pieces: Pieces = field(repr=False)
    entered: tuple[Entered, ...] = field(repr=False)
    limits: Limits = field(repr=False)

    def origin(self, offset: int) -> Origin:
        """Where the character at an offset of `text` was written, and through which macros."""
        return self.pieces.origin(offset)

    def end_column(self, last: int) -> int:
        """The column just behind the character at offset `last`, where that was written."""
        return self.origin(last).place.column + 1

    @cached_property
    def invocations(self) -> tuple[Invocation, ...]:
        """Every macro use, outermost and nested, by start; the outer one first."""

        def order(each: Expanded) -> tuple[int, int, int]:
            return each.start, -each.end, each.number

        return tuple(
            Invocation(macro.name, start, end, name.place, macro)
            for number, start, end in sorted(self.pieces.expansions, key=order)
            for macro, name in (self.entered[number],)
            if EXTENSIONS.get(macro.name) is not macro
        )

    def expand_text(self, source: str, offset: int) -> str:
        """C text from outside the tree, expanded by the macros in force at an offset of `text`."""
        return self._expanded(source, self.macros.at(offset))[0].text()

    def excerpt(self, source: str) -> "TranslationUnit":
        """C text from outside the tree as if it stood at the end of the unit, expanded."""
        final = self.macros.final
        pieces, entered = self._expanded(source, final.at(0))
        return replace(self, text=pieces.text(), macros=final, pieces=pieces, entered=entered)

    def _expanded(
        self, source: str, definitions: MacrosInForce
    ) -> tuple[Pieces, tuple[Entered, ...]]:
        outline = Outline(SourceFile(self.path, source))
        expander = Expander(
            definitions,
            extensions=EXTENSIONS,
            limits=self.limits,
            note=lambda token, message: None,
            builtin=lambda token: None,
        )
        pieces = Pieces(self.limits.unit_bytes)
        pieces.expansion(expander.expanded_text(tokens_of(outline, 0, len(outline.logical))))
        return pieces, tuple(expander.entered)


def translate(
    tree: SourceTree, file: SourceFile, defines: Mapping[str, str | None], limits: Limits
) -> TranslationUnit:
    """Preprocess `file`. A define without value is 1; its key may have parameters: `SQ(x)`."""
    done = Preprocessor(tree, limits)
    done.run(file, defines)
    return TranslationUnit(
        path=file.path,
        text=done.pieces.text(),
        macros=MacroTable(done.changes),
        included=done.included,
        missing=done.remarks.missing,
        undefined=done.remarks.undefined,
        problems=done.remarks.problems,
        pieces=done.pieces,
        entered=tuple(done.expander.entered),
        limits=limits,
    )
