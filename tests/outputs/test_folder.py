import hashlib
import json
import os
import shutil
import stat
from datetime import UTC, datetime
from functools import partial
from pathlib import Path

import pytest

from routing.errors import OutputError
from routing.outputs import folder as folder_module
from routing.outputs.folder import RUN_FILE, WRITERS, check_folder
from routing.outputs.runfacts import RunFacts

#: What is drawn does not matter here, and takes long.
write_run = partial(folder_module.write_run, pictures="none")


@pytest.fixture
def target(tmp_path):
    return tmp_path / "runs" / "first"


@pytest.fixture(autouse=True)
def parent(target):
    target.parent.mkdir()


def contents(path):
    return {str(p.relative_to(path)): p.read_bytes() for p in sorted(path.rglob("*")) if p.is_file()}


def names(path):
    return sorted(p.name for p in path.iterdir())


def failing(kind):
    def writer(_):
        raise kind

    return writer


def test_a_run_is_written_whole(plan, target):
    run = RunFacts(("overcrest", "plan", "site.toml"), datetime(2026, 3, 1, tzinfo=UTC))
    paths = write_run(plan, target, run=run)
    assert paths == [*(target / name for name in WRITERS), target / RUN_FILE]
    assert set(contents(target)) == {*WRITERS, RUN_FILE}
    assert names(target.parent) == ["first"]
    document = json.loads((target / RUN_FILE).read_text(encoding="utf-8"))
    assert document["run"]["command"] == ["overcrest", "plan", "site.toml"]
    for file in document["files"]:
        data = (target / file["name"]).read_bytes()
        assert (file["bytes"], file["sha256"]) == (len(data), hashlib.sha256(data).hexdigest())


def test_a_run_without_a_route_is_written_all_the_same(make, target):
    write_run(make.no_route(), target)
    assert json.loads((target / RUN_FILE).read_text())["feasible"] is False


def test_two_runs_of_one_plan_are_alike(plan, target):
    write_run(plan, target)
    write_run(plan, target.with_name("second"))
    assert contents(target) == contents(target.with_name("second"))


def test_the_folder_is_open_to_whom_other_new_folders_are(plan, target):
    write_run(plan, target)
    other = target.with_name("other")
    other.mkdir()
    assert stat.S_IMODE(target.stat().st_mode) == stat.S_IMODE(other.stat().st_mode)


def test_a_folder_that_exists_is_refused(plan, target):
    target.mkdir()
    (target / "mine.txt").write_text("keep")
    with pytest.raises(OutputError, match="--replace") as caught:
        write_run(plan, target)
    assert caught.value.exit_code == 2
    assert caught.value.problems[0].file == str(target)
    assert contents(target) == {"mine.txt": b"keep"}


def test_an_earlier_run_is_replaced_when_asked(make, target):
    write_run(make.no_route(), target)
    write_run(make.plan(), target, replace=True)
    assert json.loads((target / RUN_FILE).read_text())["feasible"] is True
    assert names(target.parent) == ["first"]


def test_an_empty_folder_is_replaced_when_asked(plan, target):
    target.mkdir()
    write_run(plan, target, replace=True)
    assert set(contents(target)) == {*WRITERS, RUN_FILE}


def test_replace_needs_no_earlier_run(plan, target):
    write_run(plan, target, replace=True)
    assert (target / RUN_FILE).is_file()


@pytest.mark.parametrize(
    "run_file",
    [None, "{}", "not json", "[1]", '{"overcrest": "0", "files": 3}', '{"files": [{"name": "a.txt"}]}', b"\xff\xfe"],
)
def test_a_folder_of_somebody_elses_is_never_replaced(plan, target, run_file):
    target.mkdir()
    (target / "a.txt").write_text("keep")
    if run_file is not None:
        (target / RUN_FILE).write_bytes(run_file if isinstance(run_file, bytes) else run_file.encode())
    before = contents(target)
    with pytest.raises(OutputError, match="not written by an earlier run"):
        write_run(plan, target, replace=True)
    assert contents(target) == before


def test_files_added_to_a_run_are_not_lost(plan, target):
    write_run(plan, target)
    for name in ("map.qgz", "notes.txt"):
        (target / name).write_text("mine")
    before = contents(target)
    with pytest.raises(OutputError, match=r"map\.qgz, notes\.txt"):
        write_run(plan, target, replace=True)
    assert contents(target) == before


def test_many_added_files_are_counted(plan, target):
    write_run(plan, target)
    for number in range(9):
        (target / f"n{number}").touch()
    with pytest.raises(OutputError, match="and 4 more"):
        check_folder(target, replace=True)


def test_a_missing_parent_is_told(plan, target):
    with pytest.raises(OutputError, match="lie in one that does not exist"):
        write_run(plan, target / "deeper" / "down")
    assert not target.exists()


@pytest.mark.parametrize("replace", [True, False])
def test_a_file_of_that_name_is_told(plan, target, replace):
    target.write_text("keep")
    with pytest.raises(OutputError, match="a file has that name"):
        write_run(plan, target, replace=replace)
    assert target.read_text() == "keep"


def test_a_file_as_parent_is_told(plan, target):
    target.write_text("keep")
    with pytest.raises(OutputError, match="does not exist"):
        write_run(plan, target / "run")


def test_the_folder_one_stands_in_is_not_replaced(plan, target, monkeypatch):
    write_run(plan, target)
    monkeypatch.chdir(target)
    with pytest.raises(OutputError, match="the one you are in"):
        write_run(plan, Path(), replace=True)


def test_a_relative_folder(plan, target, monkeypatch):
    monkeypatch.chdir(target.parent)
    paths = write_run(plan, Path("first"))
    assert paths[0] == Path("first/routes.geojson")
    assert (target / RUN_FILE).is_file()


def test_a_link_to_an_earlier_run_stays_a_link(make, target):
    write_run(make.no_route(), target)
    link = target.with_name("latest")
    link.symlink_to(target, target_is_directory=True)
    write_run(make.plan(), link, replace=True)
    assert link.is_symlink()
    assert json.loads((target / RUN_FILE).read_text())["feasible"] is True


@pytest.mark.parametrize("closed", ["parent", "folder"])
def test_closed_folders_are_told(plan, target, monkeypatch, closed):
    write_run(plan, target)
    shut = target.parent if closed == "parent" else target
    allowed = os.access
    monkeypatch.setattr(os, "access", lambda path, mode: Path(path) != shut and allowed(path, mode))
    before = contents(target)
    with pytest.raises(OutputError, match="may be written there" if closed == "parent" else "may not be changed"):
        write_run(plan, target, replace=True)
    assert contents(target) == before


@pytest.mark.parametrize("earlier", [True, False])
@pytest.mark.parametrize("kind", [KeyboardInterrupt, RuntimeError, OSError(28, "No space left on device")])
@pytest.mark.parametrize("name", ["routes.geojson", "fields.csv"])
def test_a_fault_on_the_way_leaves_nothing_behind(make, target, monkeypatch, earlier, kind, name):
    if earlier:
        write_run(make.no_route(), target)
    before = contents(target.parent)
    monkeypatch.setitem(WRITERS, name, failing(kind))
    with pytest.raises(OutputError if isinstance(kind, OSError) else kind):
        write_run(make.plan(), target, replace=earlier)
    assert contents(target.parent) == before
    assert names(target.parent) == (["first"] if earlier else [])


@pytest.mark.parametrize("kind", [KeyboardInterrupt, OSError(5, "Input/output error")])
def test_a_fault_between_the_two_renames_brings_the_earlier_run_back(make, target, monkeypatch, kind):
    write_run(make.no_route(), target)
    before = contents(target.parent)
    rename = Path.rename

    def once(self, other):
        if self.name.endswith(".part"):
            raise kind
        return rename(self, other)

    monkeypatch.setattr(Path, "rename", once)
    with pytest.raises(OutputError if isinstance(kind, OSError) else kind):
        write_run(make.plan(), target, replace=True)
    assert contents(target.parent) == before


def test_a_folder_that_turns_up_meanwhile_is_left_alone(plan, target, monkeypatch):
    def writer(_):
        target.mkdir()
        (target / "theirs.txt").write_text("keep")
        return ""

    monkeypatch.setitem(WRITERS, "fields.csv", writer)
    with pytest.raises(OutputError, match="exists already"):
        write_run(plan, target)
    assert contents(target.parent) == {"first/theirs.txt": b"keep"}


def test_an_earlier_run_that_cannot_be_removed_is_told(make, target, monkeypatch):
    write_run(make.no_route(), target)
    remove = shutil.rmtree

    def stuck(path, **options):
        if Path(path).name.endswith(".old"):
            raise PermissionError(13, "Permission denied", str(path))
        remove(path, **options)

    monkeypatch.setattr(folder_module.shutil, "rmtree", stuck)
    with pytest.raises(OutputError, match="the new run is in place"):
        write_run(make.plan(), target, replace=True)
    assert json.loads((target / RUN_FILE).read_text())["feasible"] is True


def test_a_failure_of_the_file_system_says_what_to_do(plan, target, monkeypatch):
    monkeypatch.setitem(WRITERS, "fields.csv", failing(OSError(28, "No space left on device")))
    with pytest.raises(OutputError, match="No space left on device") as caught:
        write_run(plan, target)
    assert "free space" in caught.value.problems[0].remedy


def test_check_folder_changes_nothing(target):
    assert check_folder(target) == Path(os.path.realpath(target))
    assert not target.exists()


@pytest.mark.parametrize(
    ("wanted", "names_of_pictures"),
    [
        ("overview", ["overview"]),
        ("all", ["overview", "R1", "R2"]),
    ],
)
def test_pictures_are_part_of_the_run(plan, target, wanted, names_of_pictures):
    paths = folder_module.write_run(plan, target, pictures=wanted)
    drawn = [f"{name}.{kind}" for name in names_of_pictures for kind in ("png", "svg")]
    assert paths == [target / name for name in (*WRITERS, *drawn, "pictures.txt", RUN_FILE)]
    listed = {file["name"]: file for file in json.loads((target / RUN_FILE).read_text())["files"]}
    for name in drawn:
        data = (target / name).read_bytes()
        assert listed[name]["sha256"] == hashlib.sha256(data).hexdigest()
        assert data.startswith(b"\x89PNG" if name.endswith("png") else b"<?xml")


def test_a_picture_is_drawn_unless_told_otherwise(plan, target):
    folder_module.write_run(plan, target)
    assert (target / "overview.png").is_file()
    assert not (target / "R1.png").exists()


def test_a_run_with_pictures_is_replaced_by_one_without(plan, target):
    folder_module.write_run(plan, target)
    write_run(plan, target, replace=True)
    assert set(contents(target)) == {*WRITERS, RUN_FILE}


@pytest.mark.parametrize("fault", [KeyboardInterrupt, MemoryError])
def test_a_drawing_that_breaks_off_leaves_nothing(plan, target, monkeypatch, fault):
    from routing.outputs.pictures import files

    monkeypatch.setattr(files, "picture", failing(fault))
    with pytest.raises(fault):
        folder_module.write_run(plan, target)
    assert names(target.parent) == []
