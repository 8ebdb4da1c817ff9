"""Why a reading of the board file was met nowhere, and what may have been meant."""

import difflib
import re
from collections.abc import Iterator

from bitweight.firmware.mentions import nodes
from bitweight.firmware.syntax import Call, Expr, Index, Marked, Member, Name
from bitweight.firmware.units import Function, Unit
from bitweight.places import Place
from bitweight.trace.contexts import Context, Reading
from bitweight.trace.patterns import parsed
from bitweight.trace.runs import Run

_WORD = re.compile(r"[A-Za-z_]\w+")
_SEARCHED = 4 * 1024 * 1024
"""Characters of the sources in which a similar name is looked for."""
_MOST_WORDS = 20_000
_CLOSE = 0.75
"""Share of letters that two names must have in common to be taken for each other."""


def nowhere(
    context: Context, readings: tuple[Reading, ...], runs: tuple[Run, ...]
) -> tuple[str, Place | None]:
    """The reason for the user why none of the readings was met, and where to look."""
    for reading in readings:
        found = _given_up(reading, runs) or _too_large(context, reading)
        if found is not None:
            return found
    texts = ", ".join(reading.pattern.text for reading in readings)
    reason = f"the reading {texts} is nowhere in the code that was followed"
    for reading in readings:
        hint = _hint(context, reading)
        if hint is not None:
            return f"{reason}: {hint[0]}", hint[1]
    return reason, None


def _given_up(reading: Reading, runs: tuple[Run, ...]) -> tuple[str, Place | None] | None:
    """The reason of a function that was not followed to its end and names the reading."""
    for run in runs:
        if run.reason and _names(run.function, _subject(reading, run.function.unit)):
            return run.reason, run.function.key
    return None


def _names(function: Function, name: str) -> bool:
    """Whether the text of a function names something, where it nests too deeply for a tree too."""
    text = function.unit.translation.text
    word = re.compile(rf"(?<![\w$]){re.escape(name)}(?![\w$])")
    found = word.search(text, function.syntax.body_start, function.syntax.end)
    return bool(name) and found is not None


def _too_large(context: Context, reading: Reading) -> tuple[str, Place | None] | None:
    large = context.program.too_large
    for name in sorted(reading.pattern.names) if large else ():
        for file in context.program.tree.mentioning(name):
            if file.path in large:
                most = context.limits.parsed_bytes >> 20
                return f"{file.path} is larger than {most} MB and is not read", Place(file.path, 1)
    return None


def _subject(reading: Reading, unit: Unit) -> str:
    """The function, array, member or variable that a reading is about."""
    tree = parsed(reading.pattern.text, unit)
    return _head(tree) if tree is not None else ""


def _head(tree: Expr) -> str:
    match tree:
        case Name():
            return tree.text
        case Member():
            return tree.name
        case Call():
            return _head(tree.function)
        case Index():
            return _head(tree.base)
        case Marked():
            return _head(tree.operand)
        case _:
            return ""


def _hint(context: Context, reading: Reading) -> tuple[str, Place] | None:
    name = reading.pattern.text.split("(")[0].split("[")[0].strip()
    for unit in tuple(context.program.units.values()):
        name = _subject(reading, unit) or name
        break
    for use, function in _uses(context, name):
        return _otherwise(name, use, function)
    close = _similar(context, name)
    if close is None:
        return None
    for use, function in _uses(context, close):
        place = function.unit.place(use.start)
        return f"did you mean {_shown(use, function)} ({place})?", place
    return None


def _uses(context: Context, name: str) -> Iterator[tuple[Call | Index, Function]]:
    """Calls of a function, and elements of an array, with the function they stand in."""
    for function in context.program.all_functions(name):
        ordered = sorted(nodes(function.body), key=lambda node: node.start)
        for node in ordered:
            if isinstance(node, Call | Index) and _head(node) == name:
                yield node, function


def _otherwise(name: str, use: Call | Index, function: Function) -> tuple[str, Place]:
    place = function.unit.place(use.start)
    how = "() is called" if isinstance(use, Call) else " is used"
    return f"{name}{how}, but otherwise, as {_shown(use, function)} ({place})", place


def _shown(use: Call | Index, function: Function) -> str:
    return " ".join(function.unit.translation.text[use.start : use.end].split())[:60]


def _similar(context: Context, name: str) -> str | None:
    """The name in the sources that resembles one which is not there most."""
    words: dict[str, None] = {}
    left = _SEARCHED
    for file in context.program.tree.files:
        if left <= 0 or len(words) > _MOST_WORDS:
            break
        words.update(dict.fromkeys(_WORD.findall(file.text[:left])))
        left -= len(file.text)
    words.pop(name, None)
    near = [word for word in words if abs(len(word) - len(name)) <= 4]
    return next(iter(difflib.get_close_matches(name, near, n=1, cutoff=_CLOSE)), None)
