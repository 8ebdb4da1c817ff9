"""Finding and reading sources."""

import os
from pathlib import Path

import pytest

from bitweight.errors import SourceError
from bitweight.firmware.files import SourceFile, SourceTree, decoded
from bitweight.limits import Limits


def put(folder: Path, path: str, content: bytes = b"int x;\n") -> Path:
    target = folder / path
    target.parent.mkdir(parents=True, exist_ok=True)
    target.write_bytes(content)
    return target


def read(folder: Path, *sources: str, **options: object) -> SourceTree:
    paths = [folder / source for source in sources or ("src",)]
    return SourceTree(paths, limits=Limits(), cwd=folder, **options)  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("content", "text"),
    [
        (b"a\r\nb\rc\n", "a\r\nb\rc\n"),
        (b"\xef\xbb\xbfint x;", "int x;"),
        ("// 5 µV".encode(), "// 5 µV"),
        (b"// 5 \xb5V", "// 5 µV"),
        ("\ufeffint µ;".encode("utf-16-le"), "int µ;"),
        ("\ufeffint µ;".encode("utf-16-be"), "int µ;"),
        (b"int\0x;", None),
        (b"", ""),
    ],
)
def test_every_encoding_decodes_to_one_character_a_code_point(
    content: bytes, text: str | None
) -> None:
    """UTF-8, UTF-16 with a mark and Latin-1 are text, anything with a NUL is not."""
    assert decoded(content) == text


def test_c_files_are_found_in_order(tmp_path: Path) -> None:
    """All .c and .h files below a folder are read, sorted by path, and no others."""
    for path in ("src/b.c", "src/a/z.h", "src/notes.txt", "src/x.cpp", "src/odd name\n+.c"):
        put(tmp_path, path)
    tree = read(tmp_path)
    assert [file.path for file in tree.files] == ["src/a/z.h", "src/b.c", "src/odd name\n+.c"]


@pytest.mark.parametrize("pattern", ["sim/*", "sim", "sim/", "src/sim/*", "*/sim/*.c"])
def test_excluded_files_are_not_read(tmp_path: Path, pattern: str) -> None:
    """A pattern holds against the path below the source or below the base folder."""
    put(tmp_path, "src/sim/a.c")
    put(tmp_path, "src/simple.c")
    assert [file.path for file in read(tmp_path, exclude=[pattern]).files] == ["src/simple.c"]


def test_overlapping_sources_are_read_once(tmp_path: Path) -> None:
    """A file given twice is one file."""
    put(tmp_path, "src/a.c")
    assert len(read(tmp_path, "src", "src/a.c", "src/../src").files) == 1


def test_what_cannot_be_read_is_listed(tmp_path: Path) -> None:
    """Binary, oversize, special and outward-leading files are skipped with a reason."""
    put(tmp_path, "src/a.c")
    put(tmp_path, "src/binary.c", b"\0\1")
    put(tmp_path, "src/large.c", b" " * 101)
    put(tmp_path, "secret.c")
    (tmp_path / "src/out.c").symlink_to(tmp_path / "secret.c")
    os.mkfifo(tmp_path / "src/pipe.c")
    (tmp_path / "src/loop").symlink_to(tmp_path / "src")
    tree = SourceTree([tmp_path / "src"], limits=Limits(file_bytes=100), cwd=tmp_path)
    assert [file.path for file in tree.files] == ["src/a.c"]
    assert dict(tree.skipped) == {
        "src/binary.c": "not a text file",
        "src/large.c": "larger than 100 bytes",
        "src/out.c": "a link that leads out of the sources",
        "src/pipe.c": "not a regular file",
    }


def test_no_more_files_than_the_limit_are_read(tmp_path: Path) -> None:
    """The bound on files holds, and it is said that it was met."""
    for number in range(5):
        put(tmp_path, f"src/{number}.c")
    tree = SourceTree([tmp_path / "src"], limits=Limits(files=3), cwd=tmp_path)
    assert len(tree.files) == 3
    assert dict(tree.skipped) == {"src": "more than 3 files"}


@pytest.mark.parametrize("source", ["nowhere", "empty"])
def test_a_source_without_c_is_an_error(tmp_path: Path, source: str) -> None:
    """A missing path and a folder without C are the user's to mend."""
    (tmp_path / "empty").mkdir()
    with pytest.raises(SourceError):
        read(tmp_path, source)


def test_why_no_file_could_be_read(tmp_path: Path) -> None:
    """The reason of each file that was not read stands on the line of the error."""
    put(tmp_path, "src/a.c", b"\0")
    with pytest.raises(SourceError, match=r"src: error: .* can be read: src/a.c: not a text file"):
        read(tmp_path, "src")


def test_patterns_that_leave_nothing(tmp_path: Path) -> None:
    """Where the exclusions take every file, they are named as the cause."""
    put(tmp_path, "src/a.c")
    with pytest.raises(SourceError, match=r"exclude in \[board\] leaves all of them out"):
        read(tmp_path, "src", exclude=["*"])


TREE = ("src/app/main.c", "src/app/own.h", "src/own.h", "src/drv/adc.h", "src/boards/b1/pins.h")


@pytest.mark.parametrize(
    ("name", "quoted", "path"),
    [
        ("own.h", True, "src/app/own.h"),
        ("../own.h", True, "src/own.h"),
        ("..\\own.h", True, "src/own.h"),
        ("adc.h", True, "src/drv/adc.h"),
        ("drv/adc.h", False, "src/drv/adc.h"),
        ("ADC.H", False, "src/drv/adc.h"),
        ("b1/pins.h", True, "src/boards/b1/pins.h"),
        ("first.h", False, "inc/first.h"),
        ("table.inc", True, "src/app/table.inc"),
        ("vendor.h", False, None),
        ("../../secret.h", True, None),
        ("drv", True, None),
        ("a\0b.h", True, None),
    ],
)
def test_an_include_leads_into_the_given_folders_only(
    tmp_path: Path, name: str, quoted: bool, path: str | None
) -> None:
    """Own folder, include folders, then the nearest file whose path ends with the name."""
    for each in (*TREE, "inc/first.h", "secret.h", "src/app/table.inc"):
        put(tmp_path, each)
    tree = read(tmp_path, include=[tmp_path / "inc"])
    main = tree.file("src/app/main.c")
    assert main is not None
    found = tree.resolve(name, quoted, main)
    assert (found.path if found else None) == path


def test_of_several_headers_the_nearest_is_taken() -> None:
    """Boards keep a header of the same name each; the one that shares most folders is meant."""
    main = SourceFile("fw/b2/src/main.c", "")
    headers = [SourceFile(f"fw/{board}/inc/pins.h", "") for board in ("b1", "b2", "b3")]
    found = SourceTree.of(main, *headers).resolve("pins.h", True, main)
    assert found is headers[1]


def test_files_that_mention_a_word_are_found_by_whole_words() -> None:
    """A longer identifier that contains the word does not count."""
    one = SourceFile("a.c", "x = ADC_read(1);")
    other = SourceFile("b.c", "x = my_ADC_read2(1);")
    assert SourceTree.of(one, other).mentioning("ADC_read") == (one,)


def test_what_is_remembered_is_made_once() -> None:
    """A file keeps what was derived from it, for each way of deriving it."""
    file = SourceFile("a.c", "text")
    assert file.remembered(_lines) is file.remembered(_lines)
    assert file.place(2).column == 3


def _lines(file: SourceFile) -> list[str]:
    return file.text.split()
