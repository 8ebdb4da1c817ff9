"""The layout of the repository: import order, sizes, mirrored tests, docstrings, tracked files."""

import ast
import graphlib
import re
import subprocess
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

from corpus.cases import cases
from layout.modules import REPOSITORY, Module, body_lines, dependencies, modules, undocumented
from layout.table import GUIDE, ORDER, renewed, table

MODULES = modules()
IMPORTS = dependencies(MODULES)
RULES = [one for one in MODULES if one.name.startswith("bitweight_rules.") and not one.is_package]
TESTS = REPOSITORY / "tests"

MODULE_LINES = 400
BODY_LINES = 50

APART = {("board", "firmware"), ("board", "trace"), ("trace", "board"), ("firmware", "board")}
"""Packages that may not know each other although the order would allow it: the two sides."""

TREE_SITTER = {"bitweight.documents", "bitweight.firmware.grammar"}
"""The modules through which every syntax tree comes."""

UNTESTED = {
    "bitweight.__main__": "one call; run by every test of the program as a process",
    "bitweight.limits": "numbers, and a clock that the tests of tracing set",
    "bitweight.errors": "texts; tested where they are raised and where the command shows them",
    "bitweight.requests": "one record without behaviour",
    "bitweight.judge.outcomes": "one record without behaviour",
    "bitweight.trace.conversions": "records without behaviour",
    "bitweight.trace.exits": "one record without behaviour",
    "bitweight.firmware.syntax": "records without behaviour: the kinds of C that are followed",
}
"""Modules without a test file of their own, and why."""

FREE_TESTS = {"benchmarks", "corpus", "layout", "outside", "properties"}
"""Folders of tests that look at more than one module."""

CROSS_TESTS = {
    "command/test_program.py",
    "judge/test_roles_properties.py",
    "test_distribution.py",
    "test_readme.py",
    "trace/test_identities.py",
    "trace/test_types_of_expressions.py",
}
"""Further test files that look at more than one module."""

TOP = {
    ".ci",
    ".gitignore",
    "DEVELOPERS.md",
    "LICENSE",
    "README.md",
    "corpus",
    "lint",
    "pyproject.toml",
    "rules",
    "tests",
}

MACHINE = re.compile(
    r"(?<![\w.])/(?:work|tmp|home|root|Users|opt|mnt)/\w|\b[A-Z]:\\(?:Users|Temp)\b"
    r"|\bpy[p]i\.org|python[h]osted|crates[.]io|registry[.]npm|proxy[.]golang",
    re.IGNORECASE,
)
"""Paths of one machine, and hosts of package registries."""


def _test_file(module: Module) -> Path:
    root, *folders, stem = module.name.split(".")
    folders = folders if root == "bitweight" else ["rules", *folders]
    return TESTS.joinpath(*folders, f"test_{stem}.py")


TEST_FILES = {one.name: _test_file(one) for one in MODULES if not one.is_package}
GROUPS = {one.name: one.group for one in MODULES}


def test_every_package_has_its_place() -> None:
    """The import order names every package and single module, and nothing that is gone."""
    assert sorted(set(GROUPS.values())) == sorted(ORDER)


def test_imports_follow_the_order() -> None:
    """A module imports only from its own package and from those before it in the order."""
    late = [
        f"{name} imports {used}"
        for name, targets in IMPORTS.items()
        for used in sorted(targets)
        if ORDER.index(GROUPS[used]) > ORDER.index(GROUPS[name])
        or (GROUPS[name], GROUPS[used]) in APART
    ]
    assert late == []


def test_no_circles() -> None:
    """No module imports itself through others, local and type-only imports counted."""
    graphlib.TopologicalSorter(IMPORTS).prepare()


def test_rules_use_the_one_door() -> None:
    """A rule imports nothing of the program but `bitweight.api`, and no other rule."""
    others = [
        f"{rule.name} imports {source}"
        for rule in RULES
        for source, _ in rule.imports()
        if source.startswith("bitweight") and source != "bitweight.api"
    ]
    assert others == []


def test_nothing_underscored_is_imported() -> None:
    """A leading underscore means this module only."""
    taken = [
        f"{one.name} imports {name} of {source}"
        for one in MODULES
        for source, name in one.imports()
        if name is not None and name.startswith("_")
    ]
    assert taken == []


def test_imports_are_absolute() -> None:
    """Imports name the whole path of what they take, and no star."""
    loose = [
        f"{one.name} imports {name} of {source}"
        for one in MODULES
        for source, name in one.imports()
        if source.startswith(".") or name == "*"
    ]
    assert loose == []


def test_syntax_trees_have_two_doors() -> None:
    """Only the modules that read TOML and C know the parser library."""
    users = {
        one.name
        for one in MODULES
        if any(source.partition(".")[0].startswith("tree_sitter") for source, _ in one.imports())
    }
    assert users == TREE_SITTER


def test_modules_are_short() -> None:
    """No module is longer than its bound."""
    lines = {one.name: len(one.text.splitlines()) for one in MODULES}
    assert {name: count for name, count in lines.items() if count > MODULE_LINES} == {}


def test_functions_are_short() -> None:
    """No function's body is longer than its bound."""
    lines = {
        f"{one.name}.{function.name}": body_lines(function)
        for one in MODULES
        for function in one.functions()
    }
    assert {name: count for name, count in lines.items() if count > BODY_LINES} == {}


def test_modules_are_documented() -> None:
    """The docstring of a module starts with a sentence."""
    assert [one.name for one in MODULES if not one.title.endswith((".", ":"))] == []


def test_public_names_are_documented() -> None:
    """Public classes, functions and methods each have a docstring."""
    silent = [f"{one.name}.{name}" for one in MODULES for name in undocumented(one.tree)]
    assert silent == []


def test_every_module_has_its_test_file() -> None:
    """The tests of a module stand under the same path, unless it is listed with the reason."""
    missing = {name for name, file in TEST_FILES.items() if not file.is_file()}
    assert sorted(missing) == sorted(UNTESTED)


def test_every_test_file_has_its_module() -> None:
    """A test file mirrors a module, or lies in a folder for tests of several."""
    stray = {
        path.relative_to(TESTS).as_posix()
        for path in TESTS.rglob("test_*.py")
        if path not in TEST_FILES.values() and path.relative_to(TESTS).parts[0] not in FREE_TESTS
    }
    assert sorted(stray) == sorted(CROSS_TESTS)


def test_tests_say_what_they_expect() -> None:
    """Every test function's docstring says in a sentence what is expected."""
    silent = [
        f"{path.relative_to(TESTS).as_posix()}: {node.name}"
        for path in sorted(TESTS.rglob("test_*.py"))
        for node in ast.walk(ast.parse(path.read_text("utf-8")))
        if isinstance(node, ast.FunctionDef)
        and node.name.startswith("test_")
        and not (ast.get_docstring(node) or "").rstrip().endswith(".")
    ]
    assert silent == []


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.path.stem)
def test_a_rule_is_registered_under_its_name(rule: Module) -> None:
    """Module, entry point and test file of a rule have one name."""
    stem = rule.path.stem
    name = stem.replace("_", "-")
    assert _entry_points().get(name) == f"bitweight_rules.{stem}:RULE"
    assert f'name="{name}"' in rule.text
    assert TEST_FILES[rule.name].is_file()


def test_no_entry_point_without_a_rule() -> None:
    """The project file registers nothing that is not there."""
    assert sorted(_entry_points()) == sorted(one.path.stem.replace("_", "-") for one in RULES)


@pytest.mark.parametrize("name", sorted(one.path.stem.replace("_", "-") for one in RULES))
def test_a_rule_has_a_case(name: str) -> None:
    """At least one seeded case expects the rule."""
    expected = {finding.rule for case in cases("seeded") for finding in case.expectation().finding}
    assert name in expected


def test_the_guide_lists_the_modules() -> None:
    """The table of modules in DEVELOPERS.md is what `python -m layout.table` writes."""
    guide = GUIDE.read_text("utf-8")
    assert renewed(guide, table(MODULES)) == guide


def test_top_level() -> None:
    """Nothing lies at the top of the repository but what belongs there."""
    assert {path.partition("/")[0] for path in _tracked()} - TOP == set()


def test_nothing_names_a_machine() -> None:
    """No file of the repository names a path of one machine or a package registry."""
    found = [
        f"{path}:{number}: {match[0]}"
        for path in _tracked()
        for number, line in enumerate(_lines(REPOSITORY / path), start=1)
        if (match := MACHINE.search(line))
    ]
    assert found == []


def test_imports_are_all_counted() -> None:
    """Local, conditional and type-only imports are seen like all others."""
    text = (
        "import a.b\n"
        "if TYPE_CHECKING:\n    from c import _d\n"
        "def f():\n    from . import e\n    class G:\n        import h\n"
    )
    seen = Module(name="m", path=Path("m.py"), text=text).imports()
    assert sorted(seen, key=str) == [(".", "e"), ("a.b", None), ("c", "_d"), ("h", None)]


def test_undocumented_names_are_seen() -> None:
    """A public method of a public class counts, what is private does not."""
    text = "class A:\n  'x'\n  def m(self): ...\n  def _n(self): ...\nclass _B: ...\ndef f(): ..."
    assert list(undocumented(ast.parse(text))) == ["A.m", "f"]


def test_methods_of_a_protocol_are_told_once() -> None:
    """What a documented method of a protocol says need not be said where it is implemented."""
    text = "class P(Protocol):\n 'x'\n def m(self):\n  'y'\n def n(self): ...\n"
    text += "class A:\n 'x'\n def m(self): ...\n def n(self): ...\n"
    assert list(undocumented(ast.parse(text))) == ["P.n", "A.n"]


@pytest.mark.parametrize(
    ("text", "is_found"),
    [
        ("see /" + "work/notes", True),
        ("/" + "tmp/x", True),
        ("https://py" + "pi.org/p", True),
        ("src/tmp/x", False),
        ("/dev/null", False),
        ("../home/x", False),
    ],
)
def test_machine_paths_are_seen(text: str, is_found: bool) -> None:
    """Absolute paths of a machine and registry hosts are seen, relative ones are not."""
    assert bool(MACHINE.search(text)) == is_found


def _entry_points() -> dict[str, str]:
    project = tomllib.loads((REPOSITORY / "pyproject.toml").read_text("utf-8"))["project"]
    found: dict[str, str] = project["entry-points"]["bitweight.rules"]
    return found


def _tracked() -> list[str]:
    """The files of the repository; outside a clone, those of the folders that belong to it."""
    if (REPOSITORY / ".git").exists():
        command = ["git", "ls-files", "-z", "--cached", "--others", "--exclude-standard"]
        done = subprocess.run(command, cwd=REPOSITORY, capture_output=True, check=True)
        listed = done.stdout.decode("utf-8", "surrogateescape").split("\0")
        return [path for path in listed if path and (REPOSITORY / path).is_file()]
    return sorted(_walked())


def _walked() -> Iterator[str]:
    for top in sorted(TOP):
        start = REPOSITORY / top
        for path in [start, *start.rglob("*")]:
            shown = path.relative_to(REPOSITORY)
            if path.is_file() and not any(part.startswith((".", "__py")) for part in shown.parts):
                yield shown.as_posix()


def _lines(path: Path) -> list[str]:
    return path.read_bytes().decode("utf-8", "replace").splitlines()


def test_no_group_is_possessive() -> None:
    """Patterns that never give back a group match wrongly on Python 3.11 before 3.11.5."""
    group = re.compile(r"\)[*+?]\+|\(\?>")
    found = [
        f"{path.relative_to(REPOSITORY)}:{number}"
        for source in ("lint", "rules")
        for path in sorted((REPOSITORY / source).rglob("*.py"))
        for number, line in enumerate(path.read_text("utf-8").splitlines(), start=1)
        if group.search(line) and re.search(r"""\b[rf]{1,2}["']""", line)
    ]
    assert found == []
