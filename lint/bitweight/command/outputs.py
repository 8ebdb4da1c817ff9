"""Where text goes: standard output, standard error, files. Files appear whole or not at all."""

import os
import stat
import sys
import tempfile
from contextlib import suppress
from pathlib import Path

from bitweight.command.options import STDOUT
from bitweight.errors import UsageError
from bitweight.report.texts import shown


def say(text: str) -> None:
    """Writes to standard output and flushes; characters it cannot hold are escaped.

    A reader that has left is no error. Raises `UsageError` where nothing can be written.
    """
    stream = sys.stdout
    if stream is None:
        raise UsageError("standard output is closed")
    try:
        stream.write(_encodable(text, stream.encoding or "utf-8"))
        stream.flush()
    except BrokenPipeError:
        _drop_stdout()
    except OSError as error:
        _drop_stdout()
        raise UsageError(f"standard output: {error.strerror}") from error


def complain(text: str) -> None:
    """Writes one line to standard error, control characters escaped; never fails."""
    if sys.stderr is None:
        return
    with suppress(OSError, ValueError):
        sys.stderr.write(_encodable(f"{shown(text)}\n", sys.stderr.encoding or "utf-8"))
        sys.stderr.flush()


def check_target(file: str | None) -> None:
    """Raises `UsageError` where a report cannot be written to `file`: asked before any work."""
    if file is None or file == STDOUT:
        return
    if Path(file).is_dir():
        raise UsageError(f"{file}: is a folder, a file is needed for the report")
    target = Path(file) if _takes_bytes(file) else Path(os.path.realpath(file))
    if not target.parent.is_dir():
        raise UsageError(f"{file}: the folder {target.parent.name!r} does not exist")
    if not os.access(target if target.exists() else target.parent, os.W_OK):
        raise UsageError(f"{file}: cannot be written")


def write_report(file: str, text: str) -> None:
    """Writes a report in UTF-8: to standard output for `-`, else to a file that is replaced whole.

    Raises `UsageError` where that is not possible.
    """
    if file == STDOUT:
        say(text)
        return
    try:
        if _takes_bytes(file):
            Path(file).write_bytes(text.encode())
        else:
            _replace(Path(os.path.realpath(file)), text.encode())
    except OSError as error:
        raise UsageError(f"{file}: cannot be written: {error.strerror}") from error


def _takes_bytes(file: str) -> bool:
    """Whether the name is a device or a named pipe, which cannot be replaced."""
    return Path(file).exists() and not Path(file).is_file()


def _replace(target: Path, content: bytes) -> None:
    handle, name = tempfile.mkstemp(prefix=f".{target.name[:40]}.", dir=target.parent)
    try:
        with os.fdopen(handle, "wb") as stream:
            stream.write(content)
        os.chmod(name, _mode(target))
        os.replace(name, target)
    except BaseException:
        with suppress(OSError):
            os.unlink(name)
        raise


def _mode(target: Path) -> int:
    """The permissions that plain writing would leave; a temporary file has narrower ones."""
    if target.exists():
        return stat.S_IMODE(target.stat().st_mode)
    mask = os.umask(0)
    os.umask(mask)
    return 0o666 & ~mask


def _encodable(text: str, encoding: str) -> str:
    return text.encode(encoding, errors="backslashreplace").decode(encoding)


def _drop_stdout() -> None:
    """Keeps the interpreter from writing what is left to a stream that takes nothing."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
