"""Writing a run: one folder, all of it or nothing.

Everything is written into a hidden sibling of the folder and renamed into place at the end, so that a fault, a
full disk or Ctrl-C on the way leaves neither half a run nor a harmed earlier one.
"""

from __future__ import annotations

import hashlib
import json
import os
import secrets
import shutil
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from routing.errors import OutputError, Problem
from routing.outputs.geojson import layer_text, points_layer, routes_layer, samples_layer, water_layer, zones_layer
from routing.outputs.pictures.quiet import quietly
from routing.outputs.pictures.subject import Wanted
from routing.outputs.runfacts import RunFacts
from routing.outputs.runfile import plan_document
from routing.outputs.tables import (
    checks_table,
    costs_table,
    crossings_table,
    fields_table,
    samples_table,
    schemes_table,
    sections_table,
)
from routing.outputs.values import json_text
from routing.records import Plan

RUN_FILE = "run.json"

#: The files of a run beside ``run.json``, each with the function that gives its text.
WRITERS: dict[str, Callable[[Plan], str]] = {
    "routes.geojson": lambda plan: layer_text(routes_layer(plan)),
    "water.geojson": lambda plan: layer_text(water_layer(plan)),
    "zones.geojson": lambda plan: layer_text(zones_layer(plan)),
    "points.geojson": lambda plan: layer_text(points_layer(plan)),
    "samples.geojson": lambda plan: layer_text(samples_layer(plan)),
    "schemes.csv": schemes_table,
    "sections.csv": sections_table,
    "checks.csv": checks_table,
    "costs.csv": costs_table,
    "crossings.csv": crossings_table,
    "samples.csv": samples_table,
    "fields.csv": lambda _: fields_table(),
}


def write_run(
    plan: Plan, folder: Path, *, replace: bool = False, run: RunFacts | None = None, pictures: Wanted = "overview"
) -> list[Path]:
    """Write every file of a plan into a new folder.

    Parameters
    ----------
    plan
        What to write.
    folder
        Where. Its parent must exist; it must not, unless ``replace`` is set.
    replace
        Put the new run in the place of an earlier one. Only a folder that holds nothing but an earlier run, or
        nothing at all, is replaced.
    run
        Command, times and further inputs, for ``run.json``.
    pictures
        ``"overview"``: one picture of the plan with its best scheme; ``"all"``: besides, one of each route;
        ``"none"``: no picture.

    Returns
    -------
    list of Path
        The files written, ``run.json`` last.

    Raises
    ------
    OutputError
        If the folder cannot be used; nothing has been changed then.
    """
    target = check_folder(folder, replace=replace)
    with _system_errors_told(folder), _scratch(target) as scratch:
        written = [_write(scratch / name, writer(plan).encode("utf-8")) for name, writer in WRITERS.items()]
        written += [_write(scratch / name, data) for name, data in _pictures(plan, pictures)]
        document = {**plan_document(plan, run), "files": written}
        written.append(_write(scratch / RUN_FILE, json_text(document).encode("utf-8")))
        check_folder(folder, replace=replace)  # again: something may have come there while this was written
        _put_in_place(scratch, target, folder)
    return [folder / str(file["name"]) for file in written]


def _pictures(plan: Plan, wanted: Wanted) -> Iterator[tuple[str, bytes]]:
    """Draw the pictures; the library that draws is loaded only here."""
    if wanted == "none":
        return
    with quietly():
        from routing.outputs.pictures.files import picture_files  # noqa: PLC0415 - takes long to load
    yield from picture_files(plan, wanted)


def check_folder(folder: Path, *, replace: bool = False) -> Path:
    """Return the real path of a folder that a run can be written to; worth calling before a long search.

    Raises
    ------
    OutputError
        If it cannot be written to, with the reason and what to do.
    """
    target = Path(os.path.realpath(folder))
    parent = target.parent
    if not parent.is_dir():
        raise _refused(folder, "the folder for the run would lie in one that does not exist", str(parent), "create it")
    if not os.access(parent, os.W_OK | os.X_OK):
        raise _refused(folder, "nothing may be written there", str(parent), "choose another folder, or ask for access")
    if not os.path.lexists(target):
        return target
    if not target.is_dir():
        raise _refused(folder, "the run needs a folder, and a file has that name", str(target), "choose another name")
    if not replace:
        raise _refused(folder, "the folder exists already", str(target), "choose another name, or use --replace")
    _check_replaceable(folder, target)
    return target


def _check_replaceable(folder: Path, target: Path) -> None:
    """Refuse to replace a folder that holds anything but an earlier run."""
    if Path.cwd().is_relative_to(target):
        raise _refused(folder, "the folder to replace is the one you are in", str(target), "change to another folder")
    try:
        inside = {path.name for path in target.iterdir()}
        known = _files_of_run(target / RUN_FILE) if inside else set()
    except OSError as error:
        raise _refused(folder, "the folder to replace cannot be read", str(error), "choose another name") from error
    if inside and not known:
        raise _refused(
            folder,
            "the folder to replace was not written by an earlier run",
            f"{target} has no {RUN_FILE} of this program",
            "choose another name, or empty the folder yourself",
        )
    strange = sorted(inside - known)
    if strange:
        raise _refused(
            folder,
            "the folder to replace holds files that no run wrote, which would be lost",
            ", ".join(strange[:5]) + (f" and {len(strange) - 5} more" if len(strange) > 5 else ""),
            "move them elsewhere, or choose another name",
        )
    if not os.access(target, os.W_OK | os.X_OK):
        raise _refused(folder, "the folder to replace may not be changed", str(target), "choose another name")


def _files_of_run(run_file: Path) -> set[str]:
    """Return the names that an earlier run wrote; none where this is no run of ours."""
    if not run_file.is_file():
        return set()
    try:
        document: Any = json.loads(run_file.read_text(encoding="utf-8"))
    except ValueError:  # no UTF-8, or no JSON
        return set()
    if not isinstance(document, dict) or "overcrest" not in document or not isinstance(document.get("files"), list):
        return set()
    return {RUN_FILE, *(str(file.get("name")) for file in document["files"] if isinstance(file, dict))}


def _refused(folder: Path, what: str, found: str, remedy: str) -> OutputError:
    allowed = "a new folder in one that exists; with --replace, the folder of an earlier run"
    return OutputError(Problem(what, found=found, allowed=allowed, remedy=remedy, file=str(folder)))


@contextmanager
def _system_errors_told(folder: Path) -> Iterator[None]:
    """Turn a failure of the file system into a message."""
    try:
        yield
    except OSError as error:
        remedy = "check free space and access, or choose another folder"
        raise _refused(folder, "the run could not be written", str(error), remedy) from error


@contextmanager
def _scratch(target: Path) -> Iterator[Path]:
    """Make a hidden sibling of ``target`` and remove whatever is left of it, however the block ends."""
    scratch = target.with_name(f".{target.name}.{secrets.token_hex(4)}.part")
    try:
        scratch.mkdir()
        yield scratch
    finally:
        shutil.rmtree(scratch, ignore_errors=True)


def _write(path: Path, data: bytes) -> dict[str, str | int]:
    """Write a file through to the disk and return its entry in ``run.json``."""
    with path.open("wb") as file:
        file.write(data)
        file.flush()
        os.fsync(file.fileno())
    return {"name": path.name, "bytes": len(data), "sha256": hashlib.sha256(data).hexdigest()}


def _put_in_place(scratch: Path, target: Path, folder: Path) -> None:
    """Rename ``scratch`` to ``target``; an earlier run steps aside first, and comes back if that fails."""
    aside = target.with_name(f".{target.name}.{secrets.token_hex(4)}.old")
    try:
        if target.exists():
            target.rename(aside)
        scratch.rename(target)
    finally:
        if aside.exists():
            if target.exists():
                _remove(aside, folder)
            else:
                aside.rename(target)


def _remove(aside: Path, folder: Path) -> None:
    try:
        shutil.rmtree(aside)
    except OSError as error:
        what = "the new run is in place, but the earlier one, set aside, could not be removed"
        raise _refused(folder, what, str(error), f"remove {aside} yourself") from error
