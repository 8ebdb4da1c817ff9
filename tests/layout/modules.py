"""The program's own modules as syntax trees, and what they import."""

import ast
from collections.abc import Iterator, Mapping, Set
from dataclasses import dataclass, field
from functools import cached_property
from pathlib import Path

REPOSITORY = Path(__file__).parents[2]
ROOTS = {"bitweight": REPOSITORY / "lint", "bitweight_rules": REPOSITORY / "rules"}

Function = ast.FunctionDef | ast.AsyncFunctionDef


@dataclass(frozen=True, kw_only=True)
class Module:
    """One module: its dotted name, its file, its text."""

    name: str
    path: Path
    text: str = field(repr=False)

    @cached_property
    def tree(self) -> ast.Module:
        """The module's syntax."""
        return ast.parse(self.text, filename=str(self.path))

    @property
    def is_package(self) -> bool:
        """Whether it is the `__init__.py` of a package."""
        return self.path.name == "__init__.py"

    @property
    def group(self) -> str:
        """The package or single module of `bitweight` it belongs to, or `bitweight_rules`."""
        root, _, rest = self.name.partition(".")
        return rest.partition(".")[0] if root == "bitweight" and rest else root

    @property
    def title(self) -> str:
        """The first paragraph of its docstring, in one line."""
        text = ast.get_docstring(self.tree) or ""
        return " ".join(text.partition("\n\n")[0].split())

    def imports(self) -> Iterator[tuple[str, str | None]]:
        """Every import in it, local and type-only ones too: module, and name taken from it."""
        for node in ast.walk(self.tree):
            match node:
                case ast.Import():
                    yield from ((alias.name, None) for alias in node.names)
                case ast.ImportFrom():
                    yield from ((node.module or ".", alias.name) for alias in node.names)

    def functions(self) -> Iterator[Function]:
        """Every function and method in it, however deep."""
        for node in ast.walk(self.tree):
            if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef):
                yield node


def modules() -> tuple[Module, ...]:
    """Every module of both packages, in order of name."""
    return tuple(
        _module(path, root)
        for package, root in ROOTS.items()
        for path in sorted((root / package).rglob("*.py"))
    )


def dependencies(given: tuple[Module, ...]) -> Mapping[str, frozenset[str]]:
    """For each module the ones of `given` that it imports."""
    known = {one.name for one in given}
    return {
        one.name: frozenset(
            target
            for source, name in one.imports()
            if (target := f"{source}.{name}" if f"{source}.{name}" in known else source) in known
        )
        for one in given
    }


def body_lines(function: Function) -> int:
    """Lines of a function's body, from its first statement behind the docstring to its last."""
    body = function.body[1:] if ast.get_docstring(function) is not None else function.body
    return (body[-1].end_lineno or 0) - body[0].lineno + 1 if body else 0


def undocumented(tree: ast.Module) -> Iterator[str]:
    """Public classes, functions and methods without a docstring.

    A method needs none where a protocol of the module tells what it does.
    """
    told = {
        method.name
        for node in ast.walk(tree)
        if isinstance(node, ast.ClassDef) and any(map(_is_protocol, node.bases))
        for method in node.body
        if isinstance(method, Function) and ast.get_docstring(method) is not None
    }
    yield from _undocumented(tree, "", told)


def _undocumented(node: ast.Module | ast.ClassDef, prefix: str, told: Set[str]) -> Iterator[str]:
    for child in node.body:
        if not isinstance(child, ast.ClassDef | Function) or child.name.startswith("_"):
            continue
        is_told = bool(prefix) and child.name in told
        if ast.get_docstring(child) is None and not is_told and not _overload(child):
            yield prefix + child.name
        if isinstance(child, ast.ClassDef):
            yield from _undocumented(child, f"{prefix}{child.name}.", told)


def _is_protocol(base: ast.expr) -> bool:
    return ast.unparse(base).startswith("Protocol")


def _overload(node: ast.ClassDef | Function) -> bool:
    """Whether it says again what a documented one says: an overload, an override, a setter."""
    names = {ast.unparse(one).rpartition(".")[2] for one in node.decorator_list}
    return bool(names & {"overload", "override", "setter"})


def _module(path: Path, root: Path) -> Module:
    parts = path.relative_to(root).with_suffix("").parts
    name = ".".join(parts[:-1] if parts[-1] == "__init__" else parts)
    return Module(name=name, path=path, text=path.read_text("utf-8"))
