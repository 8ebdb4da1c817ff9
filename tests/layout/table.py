"""The table of modules in DEVELOPERS.md, made of their docstrings.

`python -m layout.table` in tests/ writes it anew.
"""

from collections.abc import Iterator

from layout.modules import REPOSITORY, Module, modules

GUIDE = REPOSITORY / "DEVELOPERS.md"
BEGIN = "<!-- modules: written by layout.table -->\n"
END = "<!-- end of modules -->\n"

ORDER = (
    "bitweight",
    "places",
    "limits",
    "version",
    "errors",
    "units",
    "quantities",
    "toml_texts",
    "documents",
    "requests",
    "arithmetic",
    "board",
    "firmware",
    "trace",
    "judge",
    "pipeline",
    "report",
    "api",
    "bitweight_rules",
    "command",
    "__main__",
)
"""Packages and single modules in import order: each imports only from those before it."""


def table(given: tuple[Module, ...]) -> str:
    """The modules in import order, a line each."""
    rows = [row for group in ORDER for row in _rows([one for one in given if one.group == group])]
    return "\n".join(["| module | one line |", "|---|---|", *rows]) + "\n"


def renewed(guide: str, rows: str) -> str:
    """The guide with its table replaced; `ValueError` if it has no place for one."""
    before, begin, rest = guide.partition(BEGIN)
    _, end, after = rest.partition(END)
    if not begin or not end:
        raise ValueError(f"no table between {BEGIN.strip()} and {END.strip()}")
    return f"{before}{BEGIN}\n{rows}\n{END}{after}"


def _rows(group: list[Module]) -> Iterator[str]:
    for one in sorted(group, key=lambda one: (not one.is_package, one.name)):
        name = one.name.removeprefix("bitweight.")
        shown = f"**`{name}`**" if one.is_package else f"`{name}`"
        yield f"| {shown} | {one.title.replace('|', '&#124;')} |"


if __name__ == "__main__":
    GUIDE.write_text(renewed(GUIDE.read_text("utf-8"), table(modules())), "utf-8")
