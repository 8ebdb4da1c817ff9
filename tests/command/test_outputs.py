"""Where text goes."""

import io
import os
import stat
import sys
from pathlib import Path

import pytest

from bitweight.command.outputs import check_target, complain, say, write_report
from bitweight.errors import UsageError


def test_a_report_is_written_whole(tmp_path: Path) -> None:
    """A file is replaced by the new text and nothing else is left beside it."""
    target = tmp_path / "out.json"
    target.write_text("old and longer")
    write_report(str(target), "µ\n")
    assert target.read_bytes() == "µ\n".encode()
    assert list(tmp_path.iterdir()) == [target]


def test_a_new_report_has_usual_permissions(tmp_path: Path) -> None:
    """A new file has what the user's mask leaves, an old one keeps its own."""
    mask = os.umask(0o027)
    try:
        write_report(str(tmp_path / "new"), "x")
        assert stat.S_IMODE((tmp_path / "new").stat().st_mode) == 0o640
        (tmp_path / "new").chmod(0o600)
        write_report(str(tmp_path / "new"), "y")
        assert stat.S_IMODE((tmp_path / "new").stat().st_mode) == 0o600
    finally:
        os.umask(mask)


def test_a_failed_write_leaves_the_old_file(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Where the new file cannot be put in place, the old one stays and no other is left."""

    def refuse(source: str, target: Path) -> None:
        raise OSError(28, "No space left on device")

    target = tmp_path / "out.json"
    target.write_text("old")
    monkeypatch.setattr("os.replace", refuse)
    with pytest.raises(UsageError, match="No space left"):
        write_report(str(target), "new")
    assert target.read_text() == "old"
    assert list(tmp_path.iterdir()) == [target]


def test_a_link_is_followed(tmp_path: Path) -> None:
    """A report written to a link replaces what the link leads to, not the link."""
    (tmp_path / "real").write_text("old")
    (tmp_path / "link").symlink_to("real")
    write_report(str(tmp_path / "link"), "new")
    assert (tmp_path / "link").is_symlink()
    assert (tmp_path / "real").read_text() == "new"


def test_a_device_is_written_to(tmp_path: Path) -> None:
    """A named pipe stays one: it is written to, not replaced."""
    pipe = tmp_path / "pipe"
    os.mkfifo(pipe)
    reader = os.open(pipe, os.O_RDONLY | os.O_NONBLOCK)
    try:
        check_target(str(pipe))
        write_report(str(pipe), "text")
        assert os.read(reader, 100) == b"text"
    finally:
        os.close(reader)
    assert pipe.is_fifo()


def test_bad_targets(tmp_path: Path) -> None:
    """A target that cannot be written is refused before the work, in the user's words."""
    with pytest.raises(UsageError, match="is a folder"):
        check_target(str(tmp_path))
    with pytest.raises(UsageError, match="the folder 'none' does not exist"):
        check_target(str(tmp_path / "none" / "out.json"))
    check_target(None)
    check_target("-")
    check_target(str(tmp_path / "new.json"))


def test_say_escapes_what_the_stream_cannot_hold(monkeypatch: pytest.MonkeyPatch) -> None:
    """A stream of another encoding gets escapes instead of an error."""
    raw = io.BytesIO()
    monkeypatch.setattr(sys, "stdout", io.TextIOWrapper(raw, encoding="ascii"))
    say("5 µV\udce9\n")
    assert raw.getvalue() == b"5 \\xb5V\\udce9\n"


def test_say_without_a_stream(monkeypatch: pytest.MonkeyPatch) -> None:
    """Without standard output the run cannot be done."""
    monkeypatch.setattr(sys, "stdout", None)
    with pytest.raises(UsageError, match="standard output is closed"):
        say("x")


def test_complain_is_one_printable_line(capsys: pytest.CaptureFixture[str]) -> None:
    """A complaint cannot act on the terminal."""
    complain("no file a\x1b[2J\nb.c")
    assert capsys.readouterr().err == "no file a\\x1b[2J\\nb.c\n"


def test_complain_never_fails(monkeypatch: pytest.MonkeyPatch) -> None:
    """A standard error that is closed is no reason to fail."""
    stream = io.StringIO()
    stream.close()
    for broken in (None, stream):
        monkeypatch.setattr(sys, "stderr", broken)
        complain("x")
