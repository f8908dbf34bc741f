"""``rio overcrest``: registered with rasterio's command line, the same program there, and never in its way."""

from __future__ import annotations

import json
import os
import re
import shlex
import shutil
import subprocess
import sys
from contextlib import contextmanager
from importlib import metadata
from pathlib import Path

import click
import pytest
from click.testing import CliRunner

from routing.commands.group import COMMANDS
from routing.commands.group import overcrest as overcrest_group
from routing.commands.rio import overcrest as plugin

#: The program of the environment that runs the tests.
RIO = shutil.which("rio", path=str(Path(sys.executable).parent))


def rio(*arguments, cwd, **environment):
    """Run rasterio's command line as a process of its own."""
    assert RIO is not None
    return subprocess.run(
        [RIO, *map(str, arguments)],
        cwd=cwd,
        env=os.environ | environment,
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
    )


@pytest.fixture
def work(tmp_path):
    folder = tmp_path / "rio-work"
    folder.mkdir()
    return folder


def test_it_is_registered_once_and_its_name_is_free():
    ours = metadata.entry_points(group="rasterio.rio_plugins", name="overcrest")
    assert [point.value for point in ours] == ["routing.commands.rio:overcrest"]
    assert ours["overcrest"].load() is plugin
    usual = {point.name for point in metadata.entry_points(group="rasterio.rio_commands")}
    assert {"info", "warp"} <= usual
    assert "overcrest" not in usual


def test_loading_it_loads_click_only():
    code = "import sys, routing.commands.rio; print(*{name.split('.')[0] for name in sys.modules})"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, timeout=60, check=True)
    third = {"click", "numpy", "rasterio", "numba", "geopandas", "pydantic", "scipy", "shapely", "rich", "pyogrio"}
    assert set(done.stdout.split()) & third == {"click"}


def test_rio_lists_it_beside_its_own(work):
    done = rio("--help", cwd=work)
    assert done.returncode == 0, done.stderr
    assert "overcrest  Find siphon pipelines over dams and ridges." in done.stdout
    assert "  info " in done.stdout
    assert "could not load" not in done.stdout


def test_its_help_is_that_of_the_program(work, overcrest):
    shown, usual = rio("overcrest", "--help", cwd=work), overcrest("--help")
    assert shown.returncode == 0
    assert shown.stdout == usual.stdout.replace("Usage: overcrest", "Usage: rio overcrest")
    assert all(f"\n  {name} " in shown.stdout for name in COMMANDS)


def test_a_plan_is_the_same_by_both_ways(demo, work, overcrest):
    done = rio("overcrest", "plan", demo, "--out", "by-rio", "--quiet", cwd=work)
    usual = overcrest("plan", demo, "--out", "by-name", "--quiet", cwd=work)
    assert (done.returncode, done.stderr) == (0, "")
    assert done.stdout == usual.stdout
    for name in ("routes.geojson", "schemes.csv", "sections.csv"):
        assert (work / "by-rio" / name).read_bytes() == (work / "by-name" / name).read_bytes(), name
    document = json.loads((work / "by-rio" / "run.json").read_text(encoding="utf-8"))
    assert document["run"]["command"][:3] == ["rio", "overcrest", "plan"]


def test_no_route_is_exit_3_and_one_json_document(demo, work):
    text = demo.read_text(encoding="utf-8")
    demo.write_text(text.replace("[limits]\n", "[limits]\nhighest_lift_m = 0.1\n"), encoding="utf-8")
    done = rio("overcrest", "plan", demo, "--json", "--quiet", cwd=work)
    assert (done.returncode, done.stderr) == (3, "")
    assert json.loads(done.stdout)["feasible"] is False


def test_wrong_usage_is_exit_2_and_names_the_words_as_typed(work):
    done = rio("overcrest", "look", "--json", cwd=work)
    assert done.returncode == 2
    problem = json.loads(done.stdout)["error"]["problems"][0]
    assert problem["allowed"].startswith("rio overcrest look ")
    assert problem["remedy"].startswith("rio overcrest look --help")
    unknown = rio("overcrest", "digup", cwd=work)
    assert unknown.returncode == 2
    assert "rio overcrest new|look|plan|about" in unknown.stderr


def test_a_package_that_cannot_be_imported_does_not_break_rio(demo, work, tmp_path):
    """A stand-in of our name is found first, and fails as a torn installation would."""
    broken = tmp_path / "broken" / "routing"
    broken.mkdir(parents=True)
    (broken / "__init__.py").write_text("raise ImportError('torn installation')\n", encoding="utf-8")
    path = str(broken.parent)
    shown = rio("--help", cwd=work, PYTHONPATH=path)
    assert shown.returncode == 0
    assert "could not load plugin" in shown.stdout
    info = rio("info", demo.parent / "dem.tif", cwd=work, PYTHONPATH=path)
    assert info.returncode == 0
    assert json.loads(info.stdout)["width"] == 320
    assert "torn installation" in rio("overcrest", "--help", cwd=work, PYTHONPATH=path).stdout


def test_a_room_that_cannot_be_imported_is_told_only_where_it_is_needed(demo, work, tmp_path):
    hook = tmp_path / "hook"
    hook.mkdir()
    (hook / "sitecustomize.py").write_text("import sys\nsys.modules['routing.planning'] = None\n", encoding="utf-8")
    assert "could not load" not in rio("--help", cwd=work, PYTHONPATH=str(hook)).stdout
    assert rio("overcrest", "plan", "--help", cwd=work, PYTHONPATH=str(hook)).returncode == 0
    done = rio("overcrest", "look", demo, cwd=work, PYTHONPATH=str(hook))
    assert done.returncode == 1
    assert "a fault in Overcrest" in done.stderr
    assert "Traceback" not in done.stderr


@contextmanager
def _noting(notes):
    notes.append("in")
    yield
    notes.append("out")


def in_a_group(obj):
    """A command line of another program, with the plug-in in it."""
    group = click.Group("rio", commands=[plugin])
    group.context_settings = {"obj": obj}
    return group


def test_it_runs_inside_rios_settings_of_gdal(behind):
    notes = []
    behind.work = lambda report: notes.append("work")
    done = CliRunner().invoke(in_a_group({"env": _noting(notes)}), ["overcrest", "look", "site.toml"], prog_name="rio")
    assert done.exit_code == 0, done.output
    assert notes == ["in", "work", "out"]


@pytest.mark.parametrize("obj", [None, {}, {"env": None}])
def test_it_needs_none_of_rios_settings(behind, obj):
    done = CliRunner().invoke(in_a_group(obj), ["overcrest", "plan", "site.toml", "--", "--json"], prog_name="rio")
    assert done.exit_code == 2  # what stands after two dashes is no option, here as there
    done = CliRunner().invoke(in_a_group(obj), ["overcrest", "plan", "site.toml"], prog_name="rio")
    assert done.exit_code == 0, done.output
    assert behind.calls[-1][-1] == ("rio", "overcrest", "plan", "site.toml")


def test_a_stop_keeps_its_exit_code(behind):
    def work(_report):
        raise KeyboardInterrupt

    behind.work = work
    done = CliRunner().invoke(in_a_group({}), ["overcrest", "plan", "site.toml"], prog_name="rio")
    assert done.exit_code == 130
    assert not any(name == "write_run" for name, *_ in behind.calls)


def test_the_calls_in_the_how_to_are_such_that_it_takes(project):
    text = (project / "docs" / "howto" / "gis.md").read_text(encoding="utf-8")
    calls = re.findall(r"^rio overcrest (.+)$", text, re.MULTILINE)
    assert len(calls) >= 3
    for call in calls:
        name, *rest = shlex.split(call)
        overcrest_group.get_command(click.Context(overcrest_group), name).make_context(name, rest)
