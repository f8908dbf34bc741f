"""What a DEM file says of itself, gathered into ``TerrainFacts``."""

from __future__ import annotations

import hashlib
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from pyproj import CRS

from routing.records import TerrainAsk, TerrainFacts
from routing.terrain.frames import (
    Geodetic,
    Grid,
    VerticalPart,
    check_plan_crs,
    geodetic_of,
    grid_of,
    vertical_part,
)
from routing.terrain.telling import Teller
from routing.terrain.units import METRES_PER_UNIT, UnitSaid, VerticalUnit, read_unit_text, settle_unit

LARGEST_HASHED_FILE = 256 * 1024 * 1024
_HEADER_BYTES = 1024 * 1024
_FILE_KEY = "terrain.file"


@dataclass(frozen=True, slots=True)
class Understood:
    """A DEM as understood: its facts, and the working forms of its frame."""

    facts: TerrainFacts
    crs: CRS
    geodetic: Geodetic
    grid: Grid


def understand(dataset: Any, ask: TerrainAsk, teller: Teller, *, unit_needed: bool) -> Understood:
    """Gather the facts of an open DEM.

    Parameters
    ----------
    dataset
        Open rasterio dataset.
    ask
        What the user says of it.
    teller
        Where a problem would stand.
    unit_needed
        Whether an unknown unit of height is an error.

    Raises
    ------
    TerrainError
        If the band, CRS, grid or unit of height cannot be used.
    """
    _check_band(dataset, ask, teller)
    full_crs = _full_crs(dataset)
    plan = check_plan_crs(full_crs, teller)
    grid = grid_of(dataset.transform, (dataset.height, dataset.width), teller, plan)
    part = vertical_part(full_crs) if full_crs is not None else None
    unit = settle_unit(_units_said(dataset, ask, part), teller, needed=unit_needed)
    datum, datum_notes = _datum(ask, part, teller)
    sources = [Path(name) for name in dataset.files] if dataset.driver == "VRT" else []
    digest, digest_notes = fingerprint(ask.file, sources)
    facts = TerrainFacts(
        file=str(ask.file),
        sha256=digest,
        driver=dataset.driver,
        dtype=dataset.dtypes[ask.band - 1],
        rows=grid.rows,
        cols=grid.cols,
        transform=_six(grid),
        crs_wkt=plan.to_wkt(),
        crs_name=full_crs.name if full_crs is not None else plan.name,
        horizontal_unit=plan.axis_info[0].unit_name,
        vertical_unit=unit.unit,
        vertical_unit_source=unit.source,
        vertical_datum=datum,
        metres_per_vertical_unit=unit.metres,
        datum_offset_m=ask.datum_offset_m,
        nodata=dataset.nodatavals[ask.band - 1],
        vertical_error_m=ask.vertical_error_m,
        surface=ask.surface,
        water_shown=ask.water_shown,
        assumptions=(
            *_grid_notes(grid),
            *_band_notes(dataset, ask, unit),
            *unit.assumptions,
            *datum_notes,
            *digest_notes,
        ),
    )
    return Understood(facts, plan, geodetic_of(plan), grid)


def fingerprint(file: Path, sources: Sequence[Path] = ()) -> tuple[str, tuple[str, ...]]:
    """Return a SHA-256 that tells whether the DEM is still the same, and a note where it is not the file's own.

    Parameters
    ----------
    file
        The DEM. Up to 256 MB its content is hashed; beyond, and for anything that is not one plain file,
        name, size, time of change and the first megabyte.
    sources
        Files that it only points to (a VRT), to be covered too.
    """
    if not sources and file.is_file() and file.stat().st_size <= LARGEST_HASHED_FILE:
        with file.open("rb") as stream:
            return hashlib.file_digest(stream, "sha256").hexdigest(), ()
    inside = file.glob("**/*") if file.is_dir() else [file, *sources]
    digest = hashlib.sha256(file.name.encode())
    for part in sorted({one for one in inside if one.is_file()}):
        state = part.stat()
        digest.update(f"{part.name} {state.st_size} {state.st_mtime_ns}".encode())
        with part.open("rb") as stream:
            digest.update(stream.read(_HEADER_BYTES))
    note = f"The hash of {file.name} covers names, sizes, times of change and beginnings, not the whole content."
    return digest.hexdigest(), (note,)


def _check_band(dataset: Any, ask: TerrainAsk, teller: Teller) -> None:
    if dataset.count == 0:
        raise teller.error(
            _FILE_KEY,
            f"The file {ask.file} holds no grid of its own.",
            found=", ".join(dataset.subdatasets) or "no band",
            allowed="a file with an elevation band",
            remedy="export the elevation grid in it to a GeoTIFF: gdal_translate <name of the grid> out.tif",
        )
    if not 1 <= ask.band <= dataset.count:
        raise teller.error(
            "terrain.band",
            f"The DEM {ask.file} has no such band.",
            found=str(ask.band),
            allowed=f"1 to {dataset.count}",
            remedy="name the band that holds elevations",
        )
    if "complex" in dataset.dtypes[ask.band - 1]:
        raise teller.error(
            "terrain.band",
            f"The band holds complex numbers, not elevations: {ask.file}.",
            found=dataset.dtypes[ask.band - 1],
            allowed="whole or floating-point numbers",
            remedy="name the file or band that holds elevations",
        )


def _full_crs(dataset: Any) -> CRS | None:
    if dataset.crs is None or not dataset.crs.wkt:
        return None
    return CRS.from_wkt(dataset.crs.to_wkt(version="WKT2_2019"))


def _units_said(dataset: Any, ask: TerrainAsk, part: VerticalPart | None) -> list[UnitSaid]:
    said = [read_unit_text(dataset.units[ask.band - 1], "the band's unit text"), part.unit if part else None]
    if ask.vertical_unit is not None:
        said.append(UnitSaid(ask.vertical_unit, METRES_PER_UNIT[ask.vertical_unit], "the site file"))
    return [one for one in said if one is not None]


def _datum(ask: TerrainAsk, part: VerticalPart | None, teller: Teller) -> tuple[str, tuple[str, ...]]:
    if part is None:
        return ask.vertical_datum or "not stated", ()
    if part.down:
        raise teller.error(
            _FILE_KEY,
            f"The vertical axis of {teller.dem_file} points down: it holds depths, not levels.",
            found=part.datum,
            allowed="levels that grow upwards",
            remedy="change the sign of the values and store a CRS whose vertical axis points up",
        )
    notes: list[str] = []
    if part.ellipsoidal:
        notes.append(
            f"Levels are {part.datum}, not above the sea: differences are right, altitudes can be off by up to 110 m."
        )
    if ask.vertical_datum and ask.vertical_datum != part.datum:
        notes.append(f"The DEM names its vertical datum {part.datum!r}; the site file's name for it is used.")
    return ask.vertical_datum or part.datum, tuple(notes)


def _six(grid: Grid) -> tuple[float, float, float, float, float, float]:
    t = grid.transform
    return t.a, t.b, t.c, t.d, t.e, t.f


def _grid_notes(grid: Grid) -> tuple[str, ...]:
    notes = []
    if grid.flip_rows:
        notes.append("The file stores its rows from south to north; they are used from north to south.")
    if grid.flip_cols:
        notes.append("The file stores its columns from east to west; they are used from west to east.")
    return tuple(notes)


def _band_notes(dataset: Any, ask: TerrainAsk, unit: VerticalUnit) -> tuple[str, ...]:
    notes = []
    place = ask.band - 1
    if dataset.count > 1:
        notes.append(f"Band {ask.band} of {dataset.count} is taken as the elevation.")
    scale, offset = dataset.scales[place], dataset.offsets[place]
    if (scale, offset) != (1.0, 0.0):
        notes.append(f"Stored numbers are scaled as the file says: level = number x {scale:g} + {offset:g}.")
    text = dataset.units[place]
    if text and read_unit_text(text, "") is None:
        notes.append(f"The band's unit text {text!r} is not a known unit of height and is not used ({unit.source}).")
    return tuple(notes)
