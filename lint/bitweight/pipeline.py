"""The only place where the stages are joined: a request enters, an outcome leaves."""

import re
import sys
from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass, replace
from datetime import date
from difflib import get_close_matches
from os.path import isdir, relpath
from pathlib import Path

from bitweight.arithmetic.expressions import Literal, walk
from bitweight.board.decoding.boards import load_board
from bitweight.board.hardware import Board
from bitweight.errors import BoardError, SourceError, UsageError
from bitweight.firmware.constants import Conflict, conflicts
from bitweight.firmware.files import SourceTree
from bitweight.firmware.outlines import line_text
from bitweight.firmware.predefined import predefined
from bitweight.firmware.symbols import Program
from bitweight.firmware.units import Unit
from bitweight.judge.aims import aim, givens, limit_aims
from bitweight.judge.cases import Case, Facts, judge_case
from bitweight.judge.deviations import Remark, remarks_in
from bitweight.judge.expressions_given import wrong_expressions
from bitweight.judge.findings import Finding
from bitweight.judge.outcomes import Outcome
from bitweight.judge.requirements import unused_keys, wrong_names
from bitweight.judge.rules import load_rules, run_rules
from bitweight.judge.statuses import counts, reasons_of, settle, statuses_of
from bitweight.limits import Deadline
from bitweight.requests import Request
from bitweight.trace import settings, thresholds
from bitweight.trace.contexts import Context
from bitweight.trace.conversions import Trace
from bitweight.trace.execution import Execution
from bitweight.trace.families import Family, load_families
from bitweight.trace.memory import is_number
from bitweight.trace.patterns import parsed
from bitweight.trace.tracing import Tracer

Progress = Callable[[str, int, int], None]

_FRAMES = 30_000
"""Python frames for nested C: `Limits` bounds the nesting, this leaves room for it."""
_WORD = re.compile(r"[A-Za-z_]\w*")


@dataclass(frozen=True, slots=True, kw_only=True)
class _Traced:
    """The firmware's side of a run."""

    context: Context
    tracer: Tracer
    traces: tuple[Trace, ...]


def verify(request: Request, progress: Progress) -> Outcome:
    """Verify the firmware of a request against its board.

    Raises `BoardError` with every mistake of the board file, `SourceError` when there is nothing to
    read, `UsageError` for a name that the board file lacks, `RuleError` for a broken rule.
    """
    rules = load_rules()
    path = Path(request.board)
    board = load_board(path, shown=_shown(path), variant=request.variant)
    board = _only(board, request.channel)
    _check(board, path, request, tuple(rule.name for rule in rules))
    progress("reading sources", 0, 0)
    tree = _tree(board, path, request)
    with _deep_recursion():
        traced = _trace(board, tree, request, progress)
        facts = _facts(board, traced, request, progress)
    found = run_rules(rules, facts)
    findings = settle(found, facts, _remarks(tree, board), request.today or date.today())
    statuses = statuses_of(facts.cases, findings)
    return Outcome(
        facts=facts,
        findings=findings,
        statuses=statuses,
        reasons=reasons_of(facts.cases),
        counts=counts(findings, statuses),
        source_lines=_source_lines(tree, findings),
        problems=(*unused_keys(board), *_problems(tree, traced.context.program)),
    )


def _only(board: Board, channel: str | None) -> Board:
    if channel is None:
        return board
    kept = tuple(one for one in board.channels if one.name == channel)
    if not kept:
        near = get_close_matches(channel, [one.name for one in board.channels], 1)
        hint = f", did you mean {near[0]!r}?" if near else ""
        raise UsageError(f"{board.file} has no channel {channel!r}{hint}")
    return replace(board, channels=kept)


def _check(board: Board, path: Path, request: Request, rules: tuple[str, ...]) -> None:
    """Refuse a board file or a request that names what does not exist."""
    for include in request.includes:
        if not isdir(include):
            raise UsageError(f"-I {include}: no such folder")
    mistakes = wrong_names(
        board,
        path.parent,
        sources_given=bool(request.sources),
        families=load_families(),
        rules=rules,
    )
    if mistakes:
        raise BoardError(mistakes)


def _shown(path: Path) -> str:
    try:
        return relpath(path).replace("\\", "/")
    except ValueError:
        return path.name


def _tree(board: Board, path: Path, request: Request) -> SourceTree:
    folder = path.parent
    sources = [Path(source) for source in request.sources]
    if not sources:
        sources = [folder / source for source in board.firmware]
    if not sources:
        raise SourceError(
            path=board.file,
            message="no source is given, and the board file has no firmware = [...] in [board]",
        )
    return SourceTree(
        sources,
        limits=request.limits,
        include=[*map(Path, request.includes), *(folder / one for one in board.include)],
        exclude=board.exclude,
        base=folder,
    )


def _defines(board: Board, request: Request) -> Mapping[str, str | None]:
    """Macros from outside the sources: the target's own, the board's, the command line's."""
    found: dict[str, str | None] = dict(predefined(board.target.architecture, board.target.model))
    found.update(board.define)
    for define in request.defines:
        name, equals, value = define.partition("=")
        found[name] = value if equals else None
    return found


def _families(board: Board) -> tuple[Family, ...]:
    """The families the board names; without a name those made for its architecture."""
    known = load_families()
    by_name = {alias: one for one in known.values() for alias in (one.name, *one.aliases)}
    wanted = {board.target.family, *(one.family for one in board.converters)} - {None}
    if not wanted:
        architecture = board.target.architecture
        return tuple(one for one in known.values() if one.architecture == architecture)
    found = {by_name[str(name)].name for name in wanted}
    return tuple(known[name] for name in sorted(found))


def _trace(board: Board, tree: SourceTree, request: Request, progress: Progress) -> _Traced:
    model = board.target.model
    aims = tuple(aim(channel, model) for channel in board.channels)
    results = frozenset(
        name for one in aims for value in one.values for name in _WORD.findall(value.text)
    )
    program = Program(
        tree=tree,
        model=model,
        defines=_defines(board, request),
        limits=request.limits,
        marks=results,
    )
    mistakes = wrong_expressions(board, program)
    if mistakes:
        raise BoardError(mistakes)
    context = Context(
        program=program,
        model=model,
        limits=request.limits,
        families=_families(board),
        readings=tuple(reading for one in aims for reading in one.readings),
        givens=givens(board),
        results=results,
    )
    tracer = Tracer(context=context, deadline=Deadline(request.limits.seconds))
    return _Traced(context=context, tracer=tracer, traces=tracer.trace(aims, progress))


def _facts(board: Board, traced: _Traced, request: Request, progress: Progress) -> Facts:
    context, tracer = traced.context, traced.tracer
    cases: list[Case] = []
    for index, (channel, trace) in enumerate(zip(board.channels, traced.traces, strict=True)):
        progress("judging", index + 1, len(board.channels))
        cases.append(judge_case(channel, trace, board, context.model, request.limits))
    limits = [one for channel in board.channels for one in limit_aims(channel)]
    return Facts(
        board=board,
        cases=tuple(cases),
        settings=settings.collect(context, tracer.runner, tracer.resolver, context.families),
        thresholds=thresholds.collect(context, tracer.resolver, limits),
        conflicts=_conflicts(context, traced.traces),
    )


def _conflicts(context: Context, traces: tuple[Trace, ...]) -> tuple[Conflict, ...]:
    users: dict[str, dict[str, None]] = {}
    for trace in traces:
        for conversion in trace.conversions:
            for node in walk(conversion.expression):
                leaf = node.leaf if isinstance(node, Literal) else None
                for name in (leaf.name, *leaf.names) if leaf is not None else ():
                    if name is not None:
                        users.setdefault(name, {})[trace.channel] = None

    def evaluate(unit: Unit, text: str) -> int | float | None:
        tree = parsed(text, unit)
        value = Execution(context, unit).value(tree) if tree is not None else None
        return context.constant(value) if value is not None and is_number(value) else None

    ordered = [(name, tuple(channels)) for name, channels in sorted(users.items())]
    return conflicts(context.program, ordered, evaluate)


def _remarks(tree: SourceTree, board: Board) -> tuple[Remark, ...]:
    found: list[Remark] = []
    for file in tree.files:
        if "deviation(" in file.text:
            found.extend(remarks_in(file.path, file.text))
    return tuple(found)


def _source_lines(tree: SourceTree, findings: tuple[Finding, ...]) -> Mapping[tuple[str, int], str]:
    found: dict[tuple[str, int], str] = {}
    for finding in findings:
        for place in (finding.place, *(one.place for one in finding.related)):
            file = tree.file(place.file)
            if file is not None:
                found[place.file, place.line] = line_text(file, place.line)
    return found


def _problems(tree: SourceTree, program: Program) -> tuple[str, ...]:
    found = [f"{path}: note: not read: {reason}" for path, reason in tree.skipped]
    found += [
        f"{file.path}: note: read as C, although its name ends neither in .c nor in .h"
        for file in tree.files
        if not file.path.endswith((".c", ".h"))
    ]
    for unit in program.units.values():
        found += [f"{one.place}: note: {one.message}" for one in unit.translation.problems]
    return tuple(dict.fromkeys(found))


@contextmanager
def _deep_recursion() -> Iterator[None]:
    before = sys.getrecursionlimit()
    sys.setrecursionlimit(max(before, _FRAMES))
    try:
        yield
    finally:
        sys.setrecursionlimit(before)
