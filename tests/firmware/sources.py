"""Sources and units for the tests of this folder, made from text."""

from collections.abc import Mapping

from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.translation import TranslationUnit, translate
from bitweight.limits import Limits


def unit_of(
    text: str,
    headers: Mapping[str, str] | None = None,
    defines: Mapping[str, str | None] | None = None,
    limits: Limits | None = None,
) -> TranslationUnit:
    """The unit of `main.c` with this text, in a tree with these headers."""
    main = SourceFile("main.c", text)
    others = [SourceFile(path, content) for path, content in (headers or {}).items()]
    return translate(SourceTree.of(main, *others), main, defines or {}, limits or Limits())


def words_of(text: str) -> str:
    """Text with its white space reduced to single spaces."""
    return " ".join(text.split())
