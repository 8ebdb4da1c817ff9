"""The corpus: folders of cases, and what a person expects of each."""

import tomllib
from dataclasses import dataclass
from pathlib import Path

import msgspec

ROOT = Path(__file__).parents[2] / "corpus"
KINDS = ("demo", "hostile", "seeded", "sound", "styles")


class ExpectedChannel(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """What must hold of a channel; `gain` in its unit per count, None where it is left open."""

    status: str
    gain: float | None = None


class ExpectedFinding(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One finding that must come; a field that is None is left open."""

    rule: str
    level: str | None = None
    file: str | None = None
    line: int | None = None
    found: str | None = None
    expected: str | None = None
    channels: tuple[str, ...] | None = None


class Expectation(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """`expect.toml`, written by hand; corpus/README.md gives the meaning of each key."""

    exit: int
    mistake_lines: tuple[int, ...] | None = None
    open: bool = False
    channel: dict[str, ExpectedChannel] = msgspec.field(default_factory=dict)
    finding: tuple[ExpectedFinding, ...] = ()


@dataclass(frozen=True, slots=True)
class CorpusCase:
    """One folder of the corpus."""

    folder: Path

    def __str__(self) -> str:
        return f"{self.kind}/{self.folder.name}"

    @property
    def kind(self) -> str:
        """The folder it lies in: demo, hostile, seeded, sound or styles."""
        return self.folder.parent.name

    @property
    def expected_file(self) -> Path:
        """Where the stable part of the report is kept."""
        return self.folder / "expected.json"

    @property
    def title(self) -> str:
        """The heading of the note."""
        first = (self.folder / "note.md").read_text("utf-8").partition("\n")[0]
        return first.removeprefix("# ")

    def expectation(self) -> Expectation:
        """What `expect.toml` says; an unknown key or a wrong type is an error."""
        text = (self.folder / "expect.toml").read_text("utf-8")
        return msgspec.convert(tomllib.loads(text), Expectation)


def cases(*kinds: str) -> list[CorpusCase]:
    """Every case of the kinds (none named: of all), in order."""
    return [
        CorpusCase(folder)
        for kind in kinds or KINDS
        for folder in sorted((ROOT / kind).iterdir())
        if folder.is_dir()
    ]
