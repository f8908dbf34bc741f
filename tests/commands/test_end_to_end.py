"""The program as a process, on the demo job: exit codes, streams, files."""

from __future__ import annotations

import json
import os
import re
import signal
import subprocess
import sys
import threading
import time

import pytest

EXPECTED_FILES = {"routes.geojson", "schemes.csv", "run.json"}


def set_key(site, section, key, value):
    """Set a key of a section in a site file (the first line of it, or a new one under the section's head)."""
    text = site.read_text(encoding="utf-8")
    head, found, rest = text.partition(f"\n[{section}]\n")
    if not found:
        text = f"{text}\n[{section}]\n{key} = {value}\n"
    else:
        body, gap, tail = rest.partition("\n[")
        body = re.sub(rf"(?m)^{key}\s*=.*\n?", "", body)
        text = f"{head}{found}{key} = {value}\n{body}{gap}{tail}"
    site.write_text(text, encoding="utf-8")


def left_in(folder):
    """Return the names of all that is in a folder, hidden files included."""
    return {path.name for path in folder.iterdir()}


@pytest.fixture
def work(tmp_path):
    """The folder that the program runs in."""
    return tmp_path / "work"


def test_plan_writes_the_folder_and_prints_the_table(demo_run):
    folder, done = demo_run
    assert done.returncode == 0, done.stderr
    assert "verdict" in done.stdout
    assert "Cautions" in done.stdout
    assert done.stderr.endswith("results: site-plan\n")
    assert left_in(folder) == {"sample_dem", "site-plan"}
    assert left_in(folder / "site-plan") >= EXPECTED_FILES
    provenance = json.loads((folder / "site-plan" / "run.json").read_text(encoding="utf-8"))
    assert provenance["run"]["command"] == ["overcrest", "plan", "sample_dem/brackenmere/site.toml"]


def test_top_limits_the_table_but_not_the_files(demo, demo_run, overcrest, work):
    done = overcrest("plan", demo, "--top", 1)
    folder, usual = demo_run
    counts = [len((place / "site-plan" / "schemes.csv").read_bytes().splitlines()) for place in (work, folder)]
    assert counts[0] == counts[1] > 2
    assert f"and {counts[0] - 2} more in schemes.csv" in done.stdout
    assert len(done.stdout.splitlines()) < len(usual.stdout.splitlines())


def test_plan_with_json_is_one_document(demo, overcrest, work):
    done = overcrest("plan", demo, "--json", "--quiet")
    assert (done.returncode, done.stderr) == (0, "")
    document = json.loads(done.stdout)
    assert document["folder"] == "site-plan"
    assert len(document["schemes"]) >= 1
    assert (work / "site-plan" / "routes.geojson").is_file()


def test_look_writes_nothing(demo, overcrest, work):
    done = overcrest("look", demo)
    assert done.returncode == 0, done.stderr
    assert "Assumptions" in done.stdout
    assert left_in(work) == set()


def test_look_with_json_is_one_document(demo, overcrest):
    done = overcrest("look", demo, "--json", "--quiet")
    assert (done.returncode, done.stderr) == (0, "")
    assert json.loads(done.stdout)["document"] == "look"


def test_a_new_site_file_is_made_for_the_dem_and_asks_for_what_is_missing(demo, overcrest, work):
    dem = next(demo.parent.glob("*.tif"))
    done = overcrest("new", dem, "-o", "mine.toml")
    assert done.returncode == 0, done.stderr
    assert left_in(work) == {"mine.toml"}
    asked = overcrest("look", "mine.toml")
    assert asked.returncode == 2
    assert "lowest_level_m" in asked.stderr


def test_the_schema_is_json_schema(overcrest):
    done = overcrest("new", "--schema")
    assert done.returncode == 0, done.stderr
    assert {"terrain", "water", "intake", "outlet", "pipes"} <= set(json.loads(done.stdout)["properties"])


def test_about_is_one_document(overcrest):
    done = overcrest("about", "--json")
    assert done.returncode == 0, done.stderr
    assert json.loads(done.stdout)["kernels_compiled"] in {True, False}


def test_an_unknown_key_is_exit_2_with_file_key_and_line(demo, overcrest, work):
    set_key(demo, "limits", "reserv_m", 2.0)
    line = demo.read_text(encoding="utf-8").splitlines().index("reserv_m = 2.0") + 1
    done = overcrest("plan", demo, "--json")
    assert (done.returncode, done.stderr) == (2, "")
    (problem,) = json.loads(done.stdout)["error"]["problems"]
    assert problem["line"] == line
    assert "reserv_m" in problem["key"]
    assert "reserve_m" in problem["remedy"] + problem["allowed"]
    assert left_in(work) == set()


@pytest.mark.parametrize("name", ["no-such-site.toml", "."])
def test_a_site_file_that_is_none_is_exit_2(overcrest, name):
    done = overcrest("look", name)
    assert done.returncode == 2
    assert done.stdout == ""
    assert "Traceback" not in done.stderr


def test_a_dem_that_is_none_is_exit_2(demo, overcrest):
    next(demo.parent.glob("*.tif")).write_bytes(b"no raster")
    done = overcrest("plan", demo)
    assert done.returncode == 2
    assert "Traceback" not in done.stderr


def test_no_feasible_route_is_exit_3_and_the_folder_is_written(demo, overcrest, work):
    set_key(demo, "limits", "highest_lift_m", 0.1)
    done = overcrest("plan", demo, "--json", "--quiet")
    assert (done.returncode, done.stderr) == (3, "")
    json.loads(done.stdout)
    assert left_in(work / "site-plan") >= EXPECTED_FILES
    routes = json.loads((work / "site-plan" / "routes.geojson").read_text(encoding="utf-8"))
    assert {feature["properties"]["verdict"] for feature in routes["features"]} <= {"unfit"}
    told = overcrest("plan", demo, "--replace")
    assert told.returncode == 3
    assert "No route works" in told.stdout
    assert re.search(r"\d m\b", told.stdout)


def test_a_taken_folder_is_refused_and_kept(demo, overcrest, work):
    (work / "mine").mkdir()
    (work / "mine" / "notes.txt").write_text("mine", encoding="utf-8")
    for more in ([], ["--replace"]):
        done = overcrest("plan", demo, "--out", "mine", *more)
        assert done.returncode == 2, more
        assert left_in(work) == {"mine"}
        assert left_in(work / "mine") == {"notes.txt"}


def test_replace_replaces_an_earlier_run(demo, overcrest, work):
    assert overcrest("plan", demo, "--quiet").returncode == 0
    first = (work / "site-plan" / "run.json").stat().st_ino
    refused = overcrest("plan", demo, "--quiet")
    assert refused.returncode == 2
    assert "--replace" in refused.stderr
    assert overcrest("plan", demo, "--quiet", "--replace").returncode == 0
    assert (work / "site-plan" / "run.json").stat().st_ino != first
    assert left_in(work) == {"site-plan"}


def test_without_a_home_it_still_runs(demo, overcrest, work):
    """A home that nobody, not even root, can make: among the processes."""
    nowhere = {"HOME": "/proc/no-such-home", "XDG_CACHE_HOME": "", "TMPDIR": str(work.parent)}
    done = overcrest("look", demo, **nowhere)
    assert done.returncode == 0, done.stderr
    assert left_in(work) == set()


@pytest.mark.parametrize("signum", [signal.SIGINT, signal.SIGTERM])
def test_a_stop_is_exit_130_and_leaves_nothing(demo, work, tmp_path, signum):
    """The first run, with nothing compiled yet: it says so, and is then stopped in the midst of it."""
    work.mkdir()
    process = subprocess.Popen(
        [sys.executable, "-m", "routing.commands", "plan", str(demo)],
        cwd=work,
        env=os.environ | {"NUMBA_CACHE_DIR": str(tmp_path / "kernels"), "NUMBA_DISABLE_JIT": "0"},
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
    )
    guard = threading.Timer(120.0, process.kill)
    guard.start()
    try:
        first = process.stderr.readline()
        time.sleep(0.5)
        process.send_signal(signum)
        asked_s = time.monotonic()
        out, err = process.communicate()
        took_s = time.monotonic() - asked_s
    finally:
        guard.cancel()
    assert "compiled" in first
    assert process.returncode == 130, err
    assert "stopped as asked" in err
    assert "Traceback" not in err
    assert out == ""
    assert left_in(work) == set()
    assert took_s < 10.0
