"""What registers and names of a microcontroller family mean: data files, read here.

Each file of the entry-point group `bitweight.families` is one family; nothing here knows a
register.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from importlib.metadata import entry_points
from importlib.resources import files
from typing import Any

import msgspec
import tomli

from bitweight.errors import RuleError

GROUP = "bitweight.families"


@dataclass(frozen=True, slots=True, kw_only=True)
class RegisterField:
    """Some bits of a register. `subject` is what they select.

    `choices` are the selections by the bits' value, shifted down; with no choices the value itself
    is the selection (an input number). `caution` is the data sheet's hazard for a wrong selection.
    """

    register: str
    mask: int
    subject: str
    choices: Mapping[int, str]
    caution: str | None = None

    @property
    def shift(self) -> int:
        """Position of the lowest bit."""
        return (self.mask & -self.mask).bit_length() - 1


@dataclass(frozen=True, slots=True, kw_only=True)
class Family:
    """One family: bit names with their positions, types of registers and calls, register fields.

    `document` is what it was written from. A target of its `architecture` that names no family gets
    it.
    """

    name: str
    aliases: tuple[str, ...]
    architecture: str | None
    document: str
    names: Mapping[str, int]
    types: Mapping[str, str]
    fields: tuple[RegisterField, ...]


class _FieldData(msgspec.Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    register: str
    mask: int
    subject: str
    choices: dict[str, str] = {}
    caution: str | None = None


class _FamilyData(msgspec.Struct, frozen=True, kw_only=True, forbid_unknown_fields=True):
    document: str
    aliases: tuple[str, ...] = ()
    architecture: str | None = None
    names: dict[str, int] = {}
    types: dict[str, str] = {}
    field: list[_FieldData] = []


def load_families() -> Mapping[str, Family]:
    """Every registered family by name, which is that of its file.

    Raises `RuleError` for a file that is not a family.
    """
    found: dict[str, Family] = {}
    for entry in sorted(entry_points(group=GROUP), key=lambda entry: entry.value):
        for item in sorted(files(entry.value).iterdir(), key=lambda item: item.name):
            if item.name.endswith(".toml"):
                name = item.name.removesuffix(".toml")
                found[name] = family_from_text(name, item.read_text(encoding="utf-8"))
    return found


def family_from_text(name: str, text: str) -> Family:
    """The family of one data file's text."""
    try:
        content: dict[str, Any] = tomli.loads(text)
        data = msgspec.convert(content, _FamilyData)
    except (tomli.TOMLDecodeError, msgspec.ValidationError) as error:
        raise RuleError(f"family {name!r}: {error}") from error
    return Family(
        name=name,
        aliases=data.aliases,
        architecture=data.architecture,
        document=data.document,
        names=data.names,
        types=data.types,
        fields=tuple(
            RegisterField(
                register=one.register,
                mask=one.mask,
                subject=one.subject,
                choices={int(bits, 0): choice for bits, choice in one.choices.items()},
                caution=one.caution,
            )
            for one in data.field
        ),
    )
