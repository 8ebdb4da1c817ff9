"""The version of the program, as its distribution states it."""

from importlib import metadata


def installed_version() -> str:
    """The version of the installed distribution; "0+source" without one."""
    try:
        return metadata.version("bitweight")
    except metadata.PackageNotFoundError:  # run from a source tree that is not installed
        return "0+source"


VERSION = installed_version()
"""What reports and `--version` state."""
