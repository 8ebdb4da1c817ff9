"""The command line as typed facts: one parser, one frozen record a command."""

import argparse
import re
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date
from typing import Never

from bitweight.errors import UsageError

STDOUT = "-"
"""The file name that stands for standard output (POSIX utility conventions, guideline 13)."""

GATES = ("note", "warning", "error", "never")

_DEFINE = re.compile(r"[A-Za-z_]\w*(?:=.*)?", re.ASCII | re.DOTALL)


@dataclass(frozen=True, slots=True, kw_only=True)
class VerifyOptions:
    """What `bitweight verify` was asked. `gate` is one of `GATES`; `json` a file name or `-`."""

    board: str
    sources: tuple[str, ...]
    defines: tuple[str, ...]
    includes: tuple[str, ...]
    variant: str | None
    channel: str | None
    gate: str
    plain: bool
    json: str | None
    today: date | None


@dataclass(frozen=True, slots=True, kw_only=True)
class WhyOptions:
    """What `bitweight why` was asked; without a rule all are listed."""

    rule: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class VersionOptions:
    """`bitweight --version`."""


Options = VerifyOptions | WhyOptions | VersionOptions


def parse_options(arguments: Sequence[str]) -> Options:
    """The options of one command line.

    Raises `UsageError` for a bad one, and leaves with `SystemExit(0)` after printing a help text.
    """
    match list(arguments):
        case ["verify", *rest]:
            # Intermixed: sources may stand before, between and after the options.
            return _verify_options(_verify_parser().parse_intermixed_args(rest))
        case ["why", *rest]:
            return WhyOptions(rule=_why_parser().parse_args(rest).rule)
    if _parser().parse_args(arguments).version:
        return VersionOptions()
    raise UsageError("a command is needed: verify or why (see bitweight --help)")


class _Parser(argparse.ArgumentParser):
    """A parser whose errors are raised like all others."""

    def error(self, message: str) -> Never:
        """Raises `UsageError` with argparse's words and where help is."""
        raise UsageError(f"{message} (see {self.prog} --help)")


def _parser() -> argparse.ArgumentParser:
    parser = _Parser(
        prog="bitweight",
        description="Checks that converter scaling in C firmware agrees with the board it runs on.",
        epilog="Exit status: 0 nothing at or above the gate, 1 something was, 2 the run failed. "
        "Each command has its own --help.",
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="store_true", help="print the version and leave")
    parser.add_argument(
        "command",
        nargs="?",
        choices=tuple(_COMMANDS),
        metavar="COMMAND",
        help="; ".join(f"{name}: {text}" for name, text in _COMMANDS.items()),
    )
    return parser


_COMMANDS = {
    "verify": "compare every converter channel of a board file with the firmware",
    "why": "tell what a rule checks, its formula and its source",
}


def _why_parser() -> argparse.ArgumentParser:
    parser = _Parser(prog="bitweight why", description=_COMMANDS["why"], allow_abbrev=False)
    parser.add_argument("rule", nargs="?", metavar="RULE", help="without one, all are listed")
    return parser


def _verify_parser() -> argparse.ArgumentParser:
    parser = _Parser(prog="bitweight verify", description=_COMMANDS["verify"], allow_abbrev=False)
    add = parser.add_argument
    add(
        "sources",
        nargs="*",
        metavar="SOURCE",
        type=_name,
        help="C files or folders; without one, the board file's firmware paths",
    )
    add("--board", required=True, metavar="BOARD.toml", type=_name, help="the board file")
    add(
        "-D",
        dest="defines",
        action="append",
        default=[],
        metavar="NAME[=VALUE]",
        type=_define,
        help="define a macro",
    )
    add(
        "-I",
        dest="includes",
        action="append",
        default=[],
        metavar="DIR",
        type=_name,
        help="search DIR for headers",
    )
    add("--variant", metavar="NAME", help="judge this assembly of the board file")
    add("--channel", metavar="NAME", help="judge this channel alone")
    add(
        "--gate",
        choices=GATES,
        default="warning",
        help="lowest level that gives exit status 1 (default: warning)",
    )
    add("--plain", action="store_true", help="one finding a line, even on a terminal")
    add("--json", metavar="FILE", type=_name, help="write the JSON report to FILE (-: stdout)")
    add("--today", metavar="DATE", type=_day, help="judge deviations on this day (2027-06-30)")
    add("--no-cache", action="store_true", help="neither read nor write the cache folder")
    return parser


def _verify_options(given: argparse.Namespace) -> VerifyOptions:
    return VerifyOptions(
        board=given.board,
        sources=tuple(given.sources),
        defines=tuple(given.defines),
        includes=tuple(given.includes),
        variant=given.variant,
        channel=given.channel,
        gate=given.gate,
        plain=given.plain,
        json=given.json,
        today=given.today,
    )


def _name(text: str) -> str:
    """A path that an operating system can take."""
    if not text:
        raise argparse.ArgumentTypeError("a name is needed, found an empty one")
    if "\0" in text:
        raise argparse.ArgumentTypeError("a name cannot hold a NUL character")
    return text


def _define(text: str) -> str:
    if not _DEFINE.fullmatch(text):
        raise argparse.ArgumentTypeError(f"expected NAME or NAME=VALUE, found {text!r}")
    return text


def _day(text: str) -> date:
    try:
        return date.fromisoformat(text)
    except ValueError:
        raise argparse.ArgumentTypeError(
            f"expected a date like 2027-06-30, found {text!r}"
        ) from None
