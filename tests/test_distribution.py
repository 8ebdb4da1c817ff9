"""The wheel, away from the checkout: it holds all it needs and runs where it is installed."""

import os
import shutil
import subprocess
import sys
import zipfile
from collections.abc import Mapping
from importlib.metadata import PathDistribution
from importlib.util import find_spec
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
KEPT = ("lint", "rules", "pyproject.toml", "README.md", "LICENSE")
"""What a build reads; copied, so that it leaves nothing behind in the checkout."""

pytestmark = pytest.mark.skipif(
    find_spec("hatchling") is None, reason="hatchling, which builds the wheel, is not installed"
)


def run(*command: str, cwd: Path, env: Mapping[str, str]) -> subprocess.CompletedProcess[str]:
    """A process with this environment and no other; what it wrote and its exit status."""
    return subprocess.run(
        command,
        cwd=cwd,
        env=env,
        stdin=subprocess.DEVNULL,
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
    )


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The wheel, built without the network."""
    source = tmp_path_factory.mktemp("checkout")
    for name in KEPT:
        if (ROOT / name).is_dir():
            shutil.copytree(
                ROOT / name, source / name, ignore=shutil.ignore_patterns("__pycache__", ".*")
            )
        else:
            shutil.copy(ROOT / name, source)
    target = tmp_path_factory.mktemp("wheels")
    built = run(
        sys.executable, "-m", "hatchling", "build", "-t", "wheel", "-d", str(target),
        cwd=source,
        env=dict(os.environ),
    )  # fmt: skip
    assert built.returncode == 0, built.stderr
    (found,) = target.glob("*.whl")
    return found


@pytest.fixture(scope="module")
def installed(wheel: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder that holds the wheel's packages and their metadata, as an installer leaves them."""
    target = tmp_path_factory.mktemp("installed")
    with zipfile.ZipFile(wheel) as archive:
        archive.extractall(target)
    return target


@pytest.fixture(scope="module")
def metadata(installed: Path) -> PathDistribution:
    """The metadata that stands beside the installed packages."""
    (folder,) = installed.glob("bitweight-*.dist-info")
    return PathDistribution(folder)


@pytest.fixture
def verified(installed: Path, tmp_path: Path) -> subprocess.CompletedProcess[str]:
    """`verify` by the installed program over a copy of the clean demo, from another folder."""
    shutil.copytree(ROOT / "corpus" / "demo" / "clean", tmp_path / "demo")
    elsewhere = tmp_path / "elsewhere"
    elsewhere.mkdir()
    return run(
        sys.executable, "-m", "bitweight", "verify", "--board", "../demo/board.toml", "--plain",
        cwd=elsewhere,
        env={"PYTHONPATH": str(installed), "HOME": str(tmp_path), "PATH": os.defpath},
    )  # fmt: skip


def test_the_wheel_verifies_the_clean_demo(verified: subprocess.CompletedProcess[str]) -> None:
    """Outside the checkout, in an environment of its own, the clean demo is silent: exit 0."""
    assert (verified.returncode, verified.stderr) == (0, "")
    assert verified.stdout.endswith("0 untraced; 0 errors, 0 warnings, 0 notes\n")


def test_the_program_that_ran_is_the_installed_one(installed: Path, tmp_path: Path) -> None:
    """Neither package comes from the checkout."""
    shown = run(
        sys.executable,
        "-c",
        "import bitweight, bitweight_rules; print(bitweight.__file__, bitweight_rules.__file__)",
        cwd=tmp_path,
        env={"PYTHONPATH": str(installed)},
    )
    assert shown.stdout.split() == [
        str(installed / package / "__init__.py") for package in ("bitweight", "bitweight_rules")
    ]


def test_every_rule_module_is_an_entry_point(metadata: PathDistribution, installed: Path) -> None:
    """The wheel registers each rule it holds, under the rule's name."""
    registered = {entry.name for entry in metadata.entry_points.select(group="bitweight.rules")}
    modules = {path.stem for path in (installed / "bitweight_rules").glob("[a-z]*.py")}
    assert registered == {module.replace("_", "-") for module in modules}


def test_the_families_and_the_command_are_entry_points(metadata: PathDistribution) -> None:
    """One package of families, one command."""
    groups = {
        group: {entry.name: entry.value for entry in metadata.entry_points.select(group=group)}
        for group in ("bitweight.families", "console_scripts")
    }
    assert groups["bitweight.families"] == {"bitweight": "bitweight_rules.families"}
    assert groups["console_scripts"] == {"bitweight": "bitweight.command.cli:main"}


def data_files() -> list[str]:
    """Every file of the packages that is no Python module, as the wheel names it."""
    return sorted(
        path.relative_to(source).as_posix()
        for source in (ROOT / "lint", ROOT / "rules")
        for path in source.rglob("*")
        if path.suffix in {".json", ".toml", ".typed"}
    )


def test_every_data_file_is_in_the_wheel(installed: Path) -> None:
    """The schemas, the families and the type marker travel with the modules."""
    names = data_files()
    assert {Path(name).suffix for name in names} >= {".json", ".toml"}
    assert [name for name in names if not (installed / name).is_file()] == []
