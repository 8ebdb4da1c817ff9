"""The door for rules and scripts."""

import ast
import inspect
from pathlib import Path

import pytest

import bitweight.api as api

SOURCE = ast.parse(Path(api.__file__).read_text("utf-8"))

FOR_SCRIPTS = {
    "Board",
    "BoardError",
    "BitweightError",
    "Limits",
    "Mistake",
    "Outcome",
    "Request",
    "RuleError",
    "SourceError",
    "UsageError",
    "VERSION",
    "json_report",
    "load_rules",
    "plain_report",
    "verify",
}
"""Names to run the program by and to read what comes of it."""

FOR_HOUSE_RULES = {"BY_EFFECT", "Replacement", "Rule", "Status", "Trace"}
"""Names that a rule may need although none of ours does."""


def test_it_holds_no_code() -> None:
    """The module is a docstring, imports and the list of its names."""
    kinds = {type(node) for node in SOURCE.body[1:]}
    assert kinds == {ast.ImportFrom, ast.Assign}
    assert all(alias.asname is None for alias in _aliases())


def test_every_import_is_public() -> None:
    """All names imported are listed, once, in order; none is private."""
    assert sorted(api.__all__) == sorted(alias.name for alias in _aliases())
    assert [name for name in api.__all__ if name.startswith("_")] == []


@pytest.mark.parametrize("name", api.__all__)
def test_every_name_is_explained(name: str) -> None:
    """Classes and functions behind the door have a docstring of their own."""
    value = getattr(api, name)
    if inspect.isclass(value) or inspect.isfunction(value):
        assert inspect.getdoc(value)


def test_no_name_is_there_for_nothing() -> None:
    """Each name is used by a rule, or is meant for scripts or for rules of others."""
    rules = Path(__file__).parents[1] / "rules" / "bitweight_rules"
    used = {
        alias.name
        for path in rules.glob("*.py")
        for node in ast.walk(ast.parse(path.read_text("utf-8")))
        if isinstance(node, ast.ImportFrom) and node.module == "bitweight.api"
        for alias in node.names
    }
    assert {*api.__all__} - used == FOR_SCRIPTS | FOR_HOUSE_RULES


def _aliases() -> list[ast.alias]:
    return [
        alias for node in SOURCE.body if isinstance(node, ast.ImportFrom) for alias in node.names
    ]
