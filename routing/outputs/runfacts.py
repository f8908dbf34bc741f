"""Facts of a run that are not in the plan: command, times, versions, hashes of the inputs."""

from __future__ import annotations

import hashlib
import platform
import sys
from dataclasses import dataclass, field
from datetime import UTC, datetime
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from typing import Any

from routing.records import Outlook, Plan, Site

#: Version of the JSON documents; raised when a name in them changes its meaning or goes.
FORMAT = 1

#: Libraries whose versions can change a result. They are looked up, not imported.
LIBRARIES: tuple[str, ...] = (
    "geopandas",
    "matplotlib",
    "numba",
    "numpy",
    "pydantic",
    "pyogrio",
    "pyproj",
    "rasterio",
    "scipy",
    "shapely",
)
#: Where each module that carries a copy of a C library says its version.
_CARRIED: dict[str, tuple[str, str]] = {
    "gdal_of_rasterio": ("rasterio", "__gdal_version__"),
    "gdal_of_pyogrio": ("pyogrio", "__gdal_version_string__"),
    "proj_of_pyproj": ("pyproj", "proj_version_str"),
    "geos_of_shapely": ("shapely", "geos_version_string"),
}


@dataclass(frozen=True, slots=True)
class RunFacts:
    """What the caller knows of a run.

    Attributes
    ----------
    command
        The command line, word by word; empty where the library was called.
    started, finished
        Times with time zone; ``None`` where not known.
    inputs
        Further input files as (role, path), beside those that the site names.
    carried
        Versions of GDAL, PROJ and the like as the caller knows them; they go before what is found here.
    """

    command: tuple[str, ...] = ()
    started: datetime | None = None
    finished: datetime | None = None
    inputs: tuple[tuple[str, Path], ...] = ()
    carried: dict[str, str] = field(default_factory=dict)


def overcrest_version() -> str:
    """Return the installed version of this program."""
    return _version("overcrest") or "not installed"


def document_head(document: str, title: str) -> dict[str, str | int]:
    """Return what every JSON document begins with: its kind, its format, this program's version, the job's title."""
    return {"document": document, "format": FORMAT, "overcrest": overcrest_version(), "title": title}


def run_document(run: RunFacts) -> dict[str, Any]:
    """Return the facts of a run, with the versions of everything that takes part."""
    return {
        "overcrest": overcrest_version(),
        "command": list(run.command),
        "started_utc": utc_text(run.started),
        "finished_utc": utc_text(run.finished),
        "python": platform.python_version(),
        "platform": platform.platform(),
        "libraries": {name: _version(name) for name in LIBRARIES},
        "carried": {**carried_versions(), **run.carried},
    }


def carried_versions() -> dict[str, str]:
    """Return the versions of GDAL, PROJ and GEOS in the modules loaded so far.

    A module that is not loaded has had no part in the result, so it is not loaded to be asked.
    """
    found = {}
    for name, (module_name, attribute) in _CARRIED.items():
        said = getattr(sys.modules.get(module_name), attribute, None)
        if said is not None:
            found[name] = str(said)
    return found


def utc_text(moment: datetime | None) -> str | None:
    """Return a time as RFC 3339 text in UTC, to the second.

    Raises
    ------
    ValueError
        If ``moment`` has no time zone: it could be any hour.
    """
    if moment is None:
        return None
    if moment.tzinfo is None:
        raise ValueError(f"the time {moment} has no time zone")
    return moment.astimezone(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")


def inputs_document(told: Plan | Outlook, run: RunFacts) -> list[dict[str, Any]]:
    """Return every input file with its SHA-256; ``None`` where the file can no longer be read."""
    site, facts = told.site, told.terrain.facts
    rows = [_input("site", site.file, site.sha256), _input("dem", Path(facts.file), facts.sha256)]
    return rows + [_input(role, path, "") for role, path in (*_named_files(site), *run.inputs)]


def _named_files(site: Site) -> list[tuple[str, Path]]:
    named = (
        ("water polygon", site.water.polygon_file),
        ("intake point", site.intake.at.file),
        (f"outlet {site.outlet.kind}", site.outlet.at.file),
    )
    zones = [(f"zone {zone.name}", zone.file) for zone in site.zones]
    return [(role, path) for role, path in named if path is not None] + zones


def _input(role: str, path: Path, sha256: str) -> dict[str, Any]:
    return {"role": role, "file": str(path), "sha256": sha256 or file_sha256(path)}


def file_sha256(path: Path) -> str | None:
    """Return the SHA-256 of a file, or ``None`` where it cannot be read."""
    try:
        with path.open("rb") as file:
            return hashlib.file_digest(file, "sha256").hexdigest()
    except OSError:
        return None


def _version(name: str) -> str | None:
    try:
        return version(name)
    except PackageNotFoundError:
        return None
