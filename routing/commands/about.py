"""``overcrest about``: versions, threads and caches, for a fault report."""

from __future__ import annotations

import os
import platform
from importlib import metadata
from typing import Any

import click

from routing.commands.options import EXIT_DONE, json_option, verbose_option
from routing.commands.streams import emit, emit_json

_LIBRARIES = (
    "click",
    "geopandas",
    "numba",
    "numpy",
    "platformdirs",
    "pydantic",
    "pyogrio",
    "pyproj",
    "rasterio",
    "rich",
    "scipy",
    "shapely",
)
#: Set from outside, these make the libraries read another installation's data files.
_FOREIGN_DATA = ("GDAL_DATA", "GDAL_DRIVER_PATH", "PROJ_DATA", "PROJ_LIB")


@click.command(short_help="Show versions, threads and caches, for a fault report.")
@json_option
@verbose_option
def about(as_json: bool) -> int:
    """Show the versions of Overcrest and of all it stands on, threads and caches: what a fault report needs."""
    facts = gather()
    if as_json:
        emit_json(facts)
    else:
        emit(as_text(facts))
    return EXIT_DONE


def gather() -> dict[str, Any]:
    """Return the facts by name."""
    from routing.planning import cache_folder, kernels_ready

    return {
        "overcrest": _version("overcrest"),
        "python": platform.python_version(),
        "system": platform.platform(),
        "libraries": {name: _version(name) for name in _LIBRARIES},
        "gdal": _gdal_versions(),
        "proj": _proj_versions(),
        "threads": _threads(),
        "cache_folder": str(cache_folder()),
        "kernels_compiled": kernels_ready(),
        "warnings": _warnings(),
    }


def as_text(facts: dict[str, Any]) -> str:
    """Return the facts as lines of name and value."""
    rows = [("overcrest", facts["overcrest"]), ("Python", facts["python"]), ("system", facts["system"])]
    rows += list(facts["libraries"].items())
    rows += [(f"GDAL in {name}", version) for name, version in facts["gdal"].items()]
    rows += [(f"PROJ in {name}", version) for name, version in facts["proj"].items()]
    rows += [
        ("threads", str(facts["threads"])),
        ("kernel cache", facts["cache_folder"]),
        ("search kernels", "compiled" if facts["kernels_compiled"] else "not compiled yet; the first run does it"),
    ]
    width = max(len(name) for name, _ in rows)
    lines = [f"{name:{width}s}  {value}" for name, value in rows]
    return "\n".join(lines + [f"warning: {text}" for text in facts["warnings"]])


def _version(distribution: str) -> str:
    try:
        return metadata.version(distribution)
    except metadata.PackageNotFoundError:
        return "not installed"


def _gdal_versions() -> dict[str, str]:
    """Return the GDAL inside each wheel: one process carries two of them."""
    import pyogrio
    import rasterio

    return {"rasterio": rasterio.__gdal_version__, "pyogrio": pyogrio.__gdal_version_string__}


def _proj_versions() -> dict[str, str]:
    import pyproj
    import rasterio

    return {"rasterio": rasterio.__proj_version__, "pyproj": pyproj.__proj_version__}


def _threads() -> int:
    """Return how many processors this process may use."""
    allowed = getattr(os, "sched_getaffinity", None)
    return len(allowed(0)) if allowed is not None else os.cpu_count() or 1


def _warnings() -> list[str]:
    return [
        f"{name} is set from outside ({os.environ[name]}): GDAL or PROJ may read data files that do not fit them; "
        "unset it if coordinates or levels look wrong"
        for name in _FOREIGN_DATA
        if os.environ.get(name)
    ]
