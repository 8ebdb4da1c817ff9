"""Find and read the C sources of a tree within limits.

Paths enter, decoded text leaves: one character a code point, every line end as it was.
"""

import errno
import os
import re
import stat
from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass, field
from fnmatch import fnmatchcase
from functools import cached_property
from itertools import takewhile
from pathlib import Path
from typing import NamedTuple, TypeVar, cast

from bitweight.errors import SourceError
from bitweight.limits import Limits
from bitweight.places import LineIndex, Place

_Derived = TypeVar("_Derived")
_SUFFIXES = (".c", ".h")
_MOST_SHOWN = 3
"""Files that are named where none could be read."""
_BYTE_ORDER_MARKS = (
    (b"\xef\xbb\xbf", "utf-8"),
    (b"\xff\xfe", "utf-16-le"),
    (b"\xfe\xff", "utf-16-be"),
)


@dataclass(frozen=True, eq=False)
class SourceFile:
    """A decoded source; `path` as shown to the user, relative to the current folder, with `/`."""

    path: str
    text: str = field(repr=False)
    _derived: dict[object, object] = field(default_factory=dict, init=False, repr=False)

    @cached_property
    def lines(self) -> LineIndex:
        """Line starts of the text."""
        return LineIndex(self.text)

    def place(self, offset: int) -> Place:
        """The place of a character offset."""
        return self.lines.place(self.path, offset)

    def remembered(self, make: "Callable[[SourceFile], _Derived]") -> _Derived:
        """What `make` derives from this file alone, made once for each `make`."""
        if make not in self._derived:
            self._derived[make] = make(self)
        return cast(_Derived, self._derived[make])


class Skipped(NamedTuple):
    """A file that was not read, and why."""

    path: str
    reason: str


class SourceTree:
    """The sources of one run: those below the given paths, and those that includes lead to.

    Only regular files are read; links to folders are not followed, links to files only when they
    end inside the given sources or include folders.
    """

    def __init__(
        self,
        sources: Sequence[Path],
        *,
        limits: Limits,
        include: Sequence[Path] = (),
        exclude: Sequence[str] = (),
        base: Path | None = None,
        cwd: Path | None = None,
    ) -> None:
        """Read the C files of `sources`.

        `exclude` holds glob patterns for paths relative to `base` (default: `cwd`) or to the source
        they lie in; a folder's name excludes what is below it. `cwd` is the folder shown paths are
        relative to. Raises `SourceError` when a source is missing or none holds a C file.
        """
        self._cwd = os.path.abspath(Path.cwd() if cwd is None else cwd)
        self._limits = limits
        self._skipped: dict[str, str] = {}
        self._read: dict[str, SourceFile | None] = {}
        self._resolved: dict[tuple[str, bool, str], SourceFile | None] = {}
        self._include = tuple(os.path.abspath(folder) for folder in include)
        starts = tuple(os.path.abspath(source) for source in sources)
        self._inside = tuple(os.path.realpath(path) for path in (*starts, *self._include))
        against = os.path.abspath(self._cwd if base is None else base)
        found = self._find(starts, _exclusion(exclude, against))
        self.files = self._load_all(found)
        if not self.files:
            shown = ", ".join(map(str, sources)) or "."
            all_excluded = bool(exclude) and bool(self._find(starts, _nothing))
            raise SourceError(path=shown, message=self._why_none(all_excluded=all_excluded))

    @classmethod
    def of(cls, *files: SourceFile) -> "SourceTree":
        """A tree of texts already at hand; nothing is read from disk."""
        tree = cls.__new__(cls)
        tree._cwd = os.path.abspath(Path.cwd())
        tree._limits = Limits()
        tree._skipped = {}
        tree._resolved = {}
        tree._include = tree._inside = ()
        tree.files = tuple(sorted(files, key=lambda file: file.path))
        tree._read = {tree._absolute(file.path): file for file in tree.files}
        return tree

    @property
    def skipped(self) -> tuple[Skipped, ...]:
        """Files not read so far, by path."""
        return tuple(Skipped(*entry) for entry in sorted(self._skipped.items()))

    def file(self, path: str) -> SourceFile | None:
        """The file that `path`, as a `Place` shows it, names; None if it was not read."""
        return self._read.get(self._absolute(path))

    def mentioning(self, word: str) -> tuple[SourceFile, ...]:
        """The files that contain `word` as a whole identifier, wherever it stands."""
        whole = re.compile(rf"(?<![\w$]){re.escape(word)}(?![\w$])")
        return tuple(file for file in self.files if word in file.text and whole.search(file.text))

    def resolve(self, name: str, quoted: bool, from_file: SourceFile) -> SourceFile | None:
        """The file an include of `name` leads to.

        Searched are: the including file's folder (quoted names only), the include folders in order,
        then the tree itself for a path that ends with the name, the nearest if there are several.
        """
        key = (name, quoted, from_file.path)
        if key not in self._resolved:
            self._resolved[key] = self._resolve(name.replace("\\", "/"), quoted, from_file)
        return self._resolved[key]

    def _resolve(self, name: str, quoted: bool, from_file: SourceFile) -> SourceFile | None:
        own = os.path.dirname(self._absolute(from_file.path))
        for folder in (own, *self._include) if quoted else self._include:
            file = self._open(os.path.normpath(os.path.join(folder, name)))
            if file is not None:
                return file
        return self._nearest(name, from_file)

    def _absolute(self, path: str) -> str:
        return os.path.normpath(os.path.join(self._cwd, path))

    def _shown(self, path: str) -> str:
        return os.path.relpath(path, self._cwd).replace(os.sep, "/")

    def _find(self, starts: Sequence[str], excluded: Callable[[str, str], bool]) -> list[str]:
        """Absolute paths of the C files below `starts`, each once."""
        found: dict[str, None] = {}
        for start in starts:
            if not os.path.exists(start):
                raise SourceError(path=self._shown(start), message="no such file or folder")
            paths = _walk(start) if os.path.isdir(start) else iter((start,))
            for path in paths:
                if path == start or (path.endswith(_SUFFIXES) and not excluded(path, start)):
                    found[path] = None
                if len(found) > self._limits.files:
                    del found[path]
                    self._skipped[self._shown(start)] = f"more than {self._limits.files} files"
                    return list(found)
        return list(found)

    def _why_none(self, *, all_excluded: bool) -> str:
        """Why no file was read, in words for the user."""
        if self._skipped:
            reasons = "; ".join(f"{path}: {reason}" for path, reason in self.skipped[:_MOST_SHOWN])
            return f"no C file here can be read: {reasons}"
        if all_excluded:
            return "no C file is left here: exclude in [board] leaves all of them out"
        return "no C file here"

    def _load_all(self, paths: Iterable[str]) -> tuple[SourceFile, ...]:
        files = filter(None, map(self._open, paths))
        return tuple(sorted(files, key=lambda file: file.path))

    def _open(self, path: str) -> SourceFile | None:
        """The file at an absolute path, read once; None if it is not there or must not be read."""
        if path not in self._read:
            self._read[path] = self._decode(path) if self._is_ours(path) else None
        return self._read[path]

    def _is_ours(self, path: str) -> bool:
        """Whether a path exists and, links followed, lies inside the given paths."""
        try:
            real = os.path.realpath(path)
            if not os.path.lexists(path):
                return False
        except (OSError, ValueError):
            return False
        if any(real == root or real.startswith(root.rstrip("/") + "/") for root in self._inside):
            return True
        if os.path.islink(path):
            self._skipped[self._shown(path)] = "a link that leads out of the sources"
        return False

    def _decode(self, path: str) -> SourceFile | None:
        if os.path.isdir(path):
            return None
        shown = self._shown(path)
        try:
            return SourceFile(shown, self._text(path))
        except OSError as error:
            self._skipped[shown] = error.strerror or "cannot be read"
            return None

    def _text(self, path: str) -> str:
        """The text of a file; raises `OSError` that says why it cannot be had."""
        state = os.stat(path)
        if not stat.S_ISREG(state.st_mode):
            raise OSError(errno.EINVAL, "not a regular file")
        if state.st_size > self._limits.file_bytes:
            raise OSError(errno.EFBIG, f"larger than {self._limits.file_bytes} bytes")
        with open(path, "rb") as stream:
            text = decoded(stream.read(self._limits.file_bytes))
        if text is None:
            raise OSError(errno.EINVAL, "not a text file")
        return text

    @cached_property
    def _by_name(self) -> dict[str, list[SourceFile]]:
        """The tree's files by base name in lower case, which some file systems fold."""
        names: dict[str, list[SourceFile]] = {}
        for file in self.files:
            names.setdefault(file.path.rpartition("/")[2].lower(), []).append(file)
        return names

    def _nearest(self, name: str, from_file: SourceFile) -> SourceFile | None:
        """The file whose path ends with `name`; of several, the one that shares most folders."""
        ending = "/" + re.sub(r"^(?:\.\.?/)+", "", name)
        files = self._by_name.get(ending.rpartition("/")[2].lower(), ())
        exact = [file for file in files if ("/" + file.path).endswith(ending)]
        folded = [file for file in files if ("/" + file.path).lower().endswith(ending.lower())]
        return min(
            exact or folded,
            key=lambda file: (-_shared(file.path, from_file.path), file.path.count("/"), file.path),
            default=None,
        )


def decoded(content: bytes) -> str | None:
    """The text of a source: UTF-8, UTF-16 with a mark, else Latin-1; None for what is no text."""
    for mark, encoding in _BYTE_ORDER_MARKS:
        if content.startswith(mark):
            text = content[len(mark) :].decode(encoding, "replace")
            return None if "\0" in text else text
    if b"\0" in content:
        return None
    try:
        return content.decode("utf-8")
    except UnicodeDecodeError:
        return content.decode("latin-1")


def _nothing(path: str, start: str) -> bool:
    """Excludes no file."""
    return False


def _walk(folder: str) -> Iterator[str]:
    """Every file below a folder in a fixed order; folders that cannot be listed hold nothing."""
    for path, folders, names in os.walk(folder):
        folders.sort()
        yield from (os.path.join(path, name) for name in sorted(names))


def _exclusion(patterns: Sequence[str], base: str) -> Callable[[str, str], bool]:
    """Whether a path, found below a start, is excluded by a pattern for it or a folder above."""
    wanted = [pattern.rstrip("/") for pattern in patterns]
    wanted += [pattern + "/*" for pattern in wanted]

    def excluded(path: str, start: str) -> bool:
        shown = [os.path.relpath(path, root).replace(os.sep, "/") for root in (base, start)]
        return any(fnmatchcase(name, pattern) for name in shown for pattern in wanted)

    return excluded


def _shared(one: str, other: str) -> int:
    """How many leading folders two paths share."""
    folders = zip(one.split("/")[:-1], other.split("/")[:-1], strict=False)
    return sum(1 for _ in takewhile(lambda pair: pair[0] == pair[1], folders))
