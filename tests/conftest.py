"""What all tests share: the project's folder, a copy of the demo job, and the program as a process."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import settings

# No deadline: the first example of a compiled kernel takes as long as its compilation. The same examples every
# run, so that a failure on one machine is a failure on all.
settings.register_profile("overcrest", deadline=None, derandomize=True)
settings.load_profile("overcrest")

ROOT = Path(__file__).resolve().parent.parent

RunProgram = Callable[..., "subprocess.CompletedProcess[str]"]


@pytest.fixture(scope="session")
def project() -> Path:
    """The folder of the checkout."""
    return ROOT


@pytest.fixture
def demo(tmp_path: Path) -> Path:
    """The site file of the demo job, in a copy of ``sample_dem``."""
    folder = tmp_path / "sample_dem"
    shutil.copytree(ROOT / "sample_dem", folder)
    return folder / "brackenmere" / "site.toml"


@pytest.fixture
def overcrest(tmp_path: Path) -> RunProgram:
    """Run the program as a process of its own, in an empty folder, and return how it ended."""
    folder = tmp_path / "work"
    folder.mkdir()

    def run(*arguments: str | Path, cwd: Path = folder, **environment: str) -> subprocess.CompletedProcess[str]:
        return subprocess.run(
            [sys.executable, "-m", "routing.commands", *map(str, arguments)],
            cwd=cwd,
            env=os.environ | environment,
            capture_output=True,
            text=True,
            timeout=300,
            check=False,
        )

    return run
