"""The version of the program."""

from importlib import metadata

import pytest

from bitweight import version


def test_version_is_the_distribution_s(monkeypatch: pytest.MonkeyPatch) -> None:
    """The version is that of the installed distribution."""
    monkeypatch.setattr(metadata, "version", lambda name: f"1.2 of {name}")
    assert version.installed_version() == "1.2 of bitweight"


def test_version_without_a_distribution(monkeypatch: pytest.MonkeyPatch) -> None:
    """Run from a source tree that is not installed, the program still starts."""

    def missing(name: str) -> str:
        raise metadata.PackageNotFoundError(name)

    monkeypatch.setattr(metadata, "version", missing)
    assert version.installed_version() == "0+source"
