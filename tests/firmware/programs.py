"""Programs and units for the tests of this folder, made from text."""

from collections.abc import Mapping

from bitweight.arithmetic.types import DataModel
from bitweight.firmware.files import SourceFile, SourceTree
from bitweight.firmware.symbols import Program
from bitweight.firmware.units import Unit
from bitweight.limits import Limits

INT32 = DataModel()
"""A target with an int of 32 bits."""


def program_of(texts: Mapping[str, str]) -> Program:
    """The program of some sources by file name; nothing of it is parsed yet."""
    tree = SourceTree.of(*(SourceFile(path, text) for path, text in texts.items()))
    return Program(tree=tree, model=INT32, defines={}, limits=Limits())


def parsed_unit(text: str, name: str = "f") -> Unit:
    """The unit of `main.c` with this text, which mentions `name`."""
    program = program_of({"main.c": text})
    program.load(name)
    return program.units["main.c"]
