"""What all tests share: the project's folder, a copy of the demo job, and the program as a process."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from collections.abc import Callable, Sequence
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


def run_program(arguments: Sequence[str | Path], cwd: Path, **environment: str) -> subprocess.CompletedProcess[str]:
    """Run the program as a process of its own and return how it ended."""
    return subprocess.run(
        [sys.executable, "-m", "routing.commands", *map(str, arguments)],
        cwd=cwd,
        env=os.environ | environment,
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
    )


@pytest.fixture(scope="session")
def demo_run(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, subprocess.CompletedProcess[str]]:
    """Run the README's job once: the folder it ran in, which holds a copy of ``sample_dem``, and how it ended."""
    folder = tmp_path_factory.mktemp("readme")
    shutil.copytree(ROOT / "sample_dem", folder / "sample_dem")
    return folder, run_program(["plan", "sample_dem/brackenmere/site.toml"], folder)


@pytest.fixture
def overcrest(tmp_path: Path) -> RunProgram:
    """Return a function that runs the program in an empty folder."""
    folder = tmp_path / "work"
    folder.mkdir()

    def run(*arguments: str | Path, cwd: Path = folder, **environment: str) -> subprocess.CompletedProcess[str]:
        return run_program(arguments, cwd, **environment)

    return run
