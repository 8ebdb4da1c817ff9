"""Whether what the board file names outside itself exists: paths, families, rules."""

import os
from collections.abc import Iterable, Iterator, Mapping
from pathlib import Path

from bitweight.board.decoding.tables import Mistakes, near, nearest, shortened
from bitweight.board.hardware import Board
from bitweight.errors import Mistake
from bitweight.places import Place
from bitweight.trace.families import Family

_UNUSED = {
    "build": "build is not read yet; give its macros by define",
    "families": "families are not read yet; the family files named here change nothing",
}


def wrong_names(
    board: Board,
    folder: Path,
    *,
    sources_given: bool,
    families: Mapping[str, Family],
    rules: Iterable[str],
) -> tuple[Mistake, ...]:
    """Every name of the board file that stands for nothing, in the order of the file.

    `folder` is that of the board file; its `firmware` is read only where no sources are given.
    """
    mistakes = Mistakes()
    for place, message in (
        *_wrong_paths(board, folder, sources_given=sources_given),
        *_wrong_families(board, families),
        *_wrong_rules(board, tuple(rules)),
    ):
        mistakes.add(place, message)
    return tuple(mistakes.found[key] for key in sorted(mistakes.found))


def unused_keys(board: Board) -> tuple[str, ...]:
    """What the board file gives and nothing reads yet, as lines for the user."""
    return tuple(
        f"{place}: note: {_UNUSED[key]}" for key, place in board.paths.items() if key in _UNUSED
    )


def _wrong_paths(board: Board, folder: Path, *, sources_given: bool) -> Iterator[tuple[Place, str]]:
    files = (board.build,) if board.build is not None else ()
    wanted = {
        "firmware": () if sources_given else board.firmware,
        "include": board.include,
        "build": files,
        "families": board.target.families,
    }
    for key, names in wanted.items():
        for name in names:
            place, path = board.paths.get(key, board.place), folder / name
            if not os.path.exists(path):
                yield place, f"{key}: no such file or folder: '{shortened(name)}'"
            elif key == "include" and not os.path.isdir(path):
                yield place, f"{key}: expected a folder, found the file '{shortened(name)}'"


def _wrong_families(board: Board, families: Mapping[str, Family]) -> Iterator[tuple[Place, str]]:
    names = {alias for one in families.values() for alias in (one.name, *one.aliases)}
    target = board.target
    stated = [(target.family, target.family_place or target.place)]
    stated += [(one.family, one.family_place or one.place) for one in board.converters]
    for name, place in stated:
        if name is not None and name not in names:
            hint = nearest(name, sorted(names)) or f"; known: {', '.join(families)}"
            yield place, f"no family '{shortened(name)}' is known{hint}"


def _wrong_rules(board: Board, rules: tuple[str, ...]) -> Iterator[tuple[Place, str]]:
    """Slips of a rule's name; a name like no other may belong to rules installed elsewhere."""
    for deviation in board.deviations:
        if deviation.rule not in rules and near(deviation.rule, rules) is not None:
            message = f"no rule '{shortened(deviation.rule)}' exists"
            yield deviation.rule_place or deviation.place, message + nearest(deviation.rule, rules)
