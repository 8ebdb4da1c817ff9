"""The program as a process of its own."""

import subprocess
import sys
from collections.abc import Mapping
from pathlib import Path
from typing import IO

Finished = subprocess.CompletedProcess[str]


def bitweight(
    *arguments: str,
    cwd: Path | None = None,
    stdout: int | IO[str] = subprocess.PIPE,
    env: Mapping[str, str] | None = None,
) -> Finished:
    """Runs the program; what it wrote and its exit status."""
    return subprocess.run(
        [sys.executable, "-m", "bitweight", *arguments],
        cwd=cwd,
        stdin=subprocess.DEVNULL,
        stdout=stdout,
        stderr=subprocess.PIPE,
        env=env,
        text=True,
        timeout=120,
        check=False,
    )
