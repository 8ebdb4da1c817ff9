"""The skeleton of one source: what C11 5.1.1.2 does before directives, done once for each file.

A `SourceFile` enters. Out comes its `logical` text, as long as the source and with as many lines:
line ends are `\\n`, spliced lines are joined (the splices stand, blank, behind the joined line),
comments are blank. With it come the stretches that are preprocessing directives.
"""

import bisect
import re
from collections.abc import Iterator
from functools import cached_property

from bitweight.firmware.files import SourceFile

_SPLICE = re.compile(r"\\[ \t\f\v]*(?:\n|\Z)")
_COMMENT = r"/\*[^*]*+(?:\*(?!/)[^*]*+)*(?:\*/)?|//[^\n]*+"
_QUOTED = r'"[^"\\\n]*+(?:\\.[^"\\\n]*+)*"?|' + r"'[^'\\\n]*+(?:\\.[^'\\\n]*+)*'?"
_HEADER = r"\#[ \t]*include[ \t]*<[^>\n]*+>"
_MARKS = re.compile(rf"{_COMMENT}|{_QUOTED}|{_HEADER}|\#")
_MARKS_AND_DIGRAPHS = re.compile(rf"{_COMMENT}|{_QUOTED}|{_HEADER}|\#|%:%:|%:|<:|:>|<%|%>")
_DIGRAPHS = {"%:%:": "##  ", "%:": "# ", "<:": "[ ", ":>": "] ", "<%": "{ ", "%>": "} "}
"""C11 6.4.6; the spelling that takes their place is padded to their length."""
_NOT_LINE_END = re.compile(r"[^\n]+")
_COMMENT_SIGNS = re.compile(r"^\s*(?:/\*+<?|//+[/!<]*|\*+(?!/))|\*+/\s*$")


class Outline:
    """One file's logical text and the spans of its comments and directives, as logical offsets."""

    def __init__(self, file: SourceFile) -> None:
        self.file = file
        runs = list(_runs(file.text.replace("\r\n", " \n").replace("\r", "\n")))
        joined = "".join([text for _, text in runs])
        self._sources = [source for source, _ in runs]
        self._starts = [0]
        for _, text in runs:
            self._starts.append(self._starts[-1] + len(text))
        marks = _Marks(joined)
        self.logical = marks.text
        self.comments = tuple(marks.comments)
        self.directives = tuple(marks.directives)
        """Start (of the `#`) and end of each directive; its white space may hold line ends."""

    def source(self, offset: int) -> int:
        """The offset in the file's own text of a logical offset."""
        if len(self._sources) == 1:
            return offset
        index = bisect.bisect_right(self._starts, offset, hi=len(self._sources)) - 1
        return self._sources[index] + offset - self._starts[index]

    @cached_property
    def blank(self) -> str:
        """The logical text with nothing but its line ends."""
        return "\n".join([" " * len(line) for line in self.logical.split("\n")])


def _runs(text: str) -> Iterator[tuple[int, str]]:
    """Text with spliced lines joined (C11 5.1.1.2, phase 2) in runs with their source offsets."""
    position = 0
    taken: list[re.Match[str]] = []
    for splice in (*_SPLICE.finditer(text), None):
        stop = len(text) if splice is None else splice.start()
        end = text.find("\n", position, stop)
        if taken and (end >= 0 or splice is None):
            end = stop if end < 0 else end
            yield position, text[position:end]
            yield from ((earlier.start(), _blanked(earlier[0])) for earlier in taken)
            position = end
            taken = []
        yield position, text[position:stop]
        if splice is not None:
            position = splice.end()
            taken.append(splice)


def _blanked(text: str) -> str:
    if "\n" not in text:
        return " " * len(text)
    return _NOT_LINE_END.sub(lambda match: " " * len(match[0]), text)


class _Marks:
    """One pass over joined text: comments and digraphs replaced, directives found."""

    def __init__(self, text: str) -> None:
        self._joined = text
        self.comments: list[tuple[int, int]] = []
        self.directives: list[tuple[int, int]] = []
        self._clear = 0
        """Where the comments end that nothing stands before on their line."""
        self._taken = 0
        """The end of the line that is known to begin with something else."""
        pieces: list[str] = []
        position = 0
        for start, end, instead in self._replacements():
            pieces += (text[position:start], instead)
            position = end
        pieces.append(text[position:])
        self.text = "".join(pieces)

    def _replacements(self) -> Iterator[tuple[int, int, str]]:
        text = self._joined
        digraphs = any(digraph in text for digraph in _DIGRAPHS)
        directive = line_end = -1
        for mark in (_MARKS_AND_DIGRAPHS if digraphs else _MARKS).finditer(text):
            start, end = mark.span()
            if directive >= 0 and start > line_end:
                self.directives.append((directive, line_end))
                directive = -1
            first = text[start]
            if first == "/":
                self.comments.append((start, end))
                if directive >= 0:
                    line_end = line_end if end <= line_end else _line_end(text, end)
                elif self._begins_line(start):
                    self._clear = end
                yield start, end, _blanked(text[start:end])
            elif first not in "\"'":
                hash_sign = first == "#" or mark[0].startswith("%:")
                if hash_sign and directive < 0 and self._begins_line(start):
                    directive, line_end = start, _line_end(text, end)
                if first != "#":
                    yield start, end, _DIGRAPHS[mark[0]]
        if directive >= 0:
            self.directives.append((directive, line_end))

    def _begins_line(self, offset: int) -> bool:
        """Whether only white space and comments stand before `offset` on its line."""
        text = self._joined
        if offset < self._taken:
            return False
        start = max(text.rfind("\n", self._clear, offset) + 1, self._clear)
        if start == offset or text[start:offset].isspace():
            return True
        self._taken = _line_end(text, offset)
        return False


def _line_end(text: str, offset: int) -> int:
    end = text.find("\n", offset)
    return len(text) if end < 0 else end


def line_text(file: SourceFile, line: int) -> str:
    """The text of a line (counted from 1) without its end; empty if there is no such line."""
    lines = file.remembered(_source_lines)
    return lines[line - 1] if 0 < line <= len(lines) else ""


def line_comment(file: SourceFile, line: int) -> str:
    """The words of the comments on a line (counted from 1), without the comment signs."""
    text = line_text(file, line)
    if not text:
        return ""
    start = file.lines.offset(line)
    end = start + len(text)
    spans = file.remembered(_comment_spans)
    index = max(bisect.bisect_right(spans, (start, start)) - 1, 0)
    words = []
    for comment, stop in spans[index:]:
        if comment >= end:
            break
        if stop > start:
            words.append(_words(file.text[max(comment, start) : min(stop, end)]))
    return " ".join(filter(None, words))


def _words(comment: str) -> str:
    return _COMMENT_SIGNS.sub("", comment).strip()


def _comment_spans(file: SourceFile) -> list[tuple[int, int]]:
    outline = file.remembered(Outline)
    return [(outline.source(start), outline.source(end - 1) + 1) for start, end in outline.comments]


def _source_lines(file: SourceFile) -> list[str]:
    return re.split(r"\r\n|\n|\r", file.text)
