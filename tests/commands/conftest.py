"""Stand-ins for the rooms behind the command line, so that its own layer is tested apart from them."""

from __future__ import annotations

import sys
from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path
from types import ModuleType, SimpleNamespace
from typing import Any

import pytest

from routing.errors import OutputError, Problem


@dataclass
class Behind:
    """What the stand-ins do, and what they were asked."""

    feasible: bool = True
    ready: bool = True
    pictures: str = "not asked"
    work: Callable[[Callable[[str, float], None]], None] = lambda report: report("search", 1.0)
    calls: list[tuple[Any, ...]] = field(default_factory=list)

    def plan(self, site: Any, progress: Callable[[str, float], None]) -> Behind:
        self.calls.append(("plan", site))
        self.work(progress)
        return self

    def look(self, site: Any, progress: Callable[[str, float], None]) -> Behind:
        self.calls.append(("look", site))
        self.work(progress)
        return self

    def check_folder(self, folder: Path, *, replace: bool = False) -> Path:
        if folder.exists() and not replace:
            raise OutputError(Problem("the folder exists already", remedy="use --replace"))
        return folder

    def write_run(self, plan: Any, folder: Path, *, replace: bool, run: SimpleNamespace, pictures: str) -> None:
        self.calls.append(("write_run", folder, replace, run.command))
        self.pictures = pictures


def _room(monkeypatch: pytest.MonkeyPatch, name: str, **names: Any) -> None:
    module = ModuleType(name)
    vars(module).update(names)
    monkeypatch.setitem(sys.modules, name, module)


@pytest.fixture
def behind(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> Behind:
    """Put stand-ins in the place of planning, site and outputs; work in an empty folder."""
    monkeypatch.chdir(tmp_path)
    stand_in = Behind()
    _room(
        monkeypatch,
        "routing.planning",
        plan=stand_in.plan,
        look=stand_in.look,
        inspect_dem=lambda path: f"facts of {path}",
        kernels_ready=lambda: stand_in.ready,
        cache_folder=lambda: tmp_path / "cache",
    )
    _room(
        monkeypatch,
        "routing.site",
        load_site=lambda path: f"site {path}",
        starter=lambda facts, *, dem_path, folder: f"# {facts}\nfile = '{dem_path.name}'\n# from {folder}\n",
        schema=lambda: {"type": "object"},
    )
    _room(
        monkeypatch,
        "routing.outputs",
        RunFacts=SimpleNamespace,
        check_folder=stand_in.check_folder,
        plan_document=lambda plan, run: {"feasible": plan.feasible, "took_s": (run.finished - run.started).seconds},
        look_document=lambda outlook, run: {"looked": True, "command": run.command},
        summary=lambda plan, top: f"best {top} schemes",
        outlook_summary=lambda outlook: "what was understood",
        write_run=stand_in.write_run,
        error_text=lambda error: f"error: {error}",
        error_document=lambda error: {
            "exit_code": error.exit_code,
            "problems": [problem.as_dict() for problem in error.problems],
        },
    )
    return stand_in
