"""The program's entry: arguments in, exit status out. Only here errors become text."""

import signal
import sys
from collections.abc import Sequence

from bitweight.command.options import (
    Options,
    VerifyOptions,
    VersionOptions,
    WhyOptions,
    parse_options,
)
from bitweight.command.outputs import complain, say
from bitweight.errors import BitweightError, BoardError, SourceError
from bitweight.version import VERSION

FAILED = 2
"""Exit status of a run that could not be done (as of POSIX diff and grep)."""

INTERRUPTED = 128 + signal.SIGINT
"""Exit status after an interrupt, as shells show it."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Runs one command; the exit status of the process. Never lets an exception out."""
    try:
        return _run(parse_options(sys.argv[1:] if arguments is None else arguments))
    except SystemExit as leave:  # argparse, after --help
        return leave.code if isinstance(leave.code, int) else 0
    except KeyboardInterrupt:
        return INTERRUPTED
    except BoardError as error:
        for mistake in error.mistakes:
            complain(str(mistake))
    except SourceError as error:
        complain(str(error))
    except BitweightError as error:
        complain(f"bitweight: error: {error}")
    except OSError as error:
        complain(f"bitweight: error: {_words(error)}")
    except MemoryError:
        complain("bitweight: error: out of memory")
    except Exception as error:
        if _interrupted(error):
            return INTERRUPTED
        complain(f"bitweight: internal error: {type(error).__name__}: {error}; please report")
    return FAILED


def _run(options: Options) -> int:
    # Each command is imported when it runs: usage errors and --version answer at once.
    match options:
        case VersionOptions():
            say(f"bitweight {VERSION}\n")
            return 0
        case VerifyOptions():
            from bitweight.command.verify import run_verify

            return run_verify(options)
        case WhyOptions():
            from bitweight.command.why import run_why

            return run_why(options)


def _interrupted(error: BaseException) -> bool:
    """Whether the error arose while an interrupt was unwinding the program."""
    context = error.__context__
    while context is not None and not isinstance(context, KeyboardInterrupt):
        context = context.__context__
    return context is not None


def _words(error: OSError) -> str:
    name = f"{error.filename}: " if error.filename else ""
    return f"{name}{error.strerror or error}"
