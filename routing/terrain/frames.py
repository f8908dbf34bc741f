"""The DEM's frame: its CRS in plan and height, its grid, and the way to degrees on its own ellipsoid."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from pyproj import CRS, Geod, Transformer
from rasterio import Affine

from routing.errors import Problem, TerrainError
from routing.records import FloatArray
from routing.terrain.telling import Teller
from routing.terrain.units import UnitSaid, unit_of_size

_KEY = "terrain.file"
_UTM_NORTH_LIMIT = 84.0  # and 80 degrees south


@dataclass(frozen=True, slots=True)
class Geodetic:
    """The way from map coordinates to degrees and lengths on the CRS's own ellipsoid (no change of datum)."""

    geod: Geod
    transformer: Transformer | None
    degrees_per_unit: float

    def degrees(self, x: ArrayLike, y: ArrayLike) -> tuple[FloatArray, FloatArray]:
        """Return longitude and latitude in degrees on the CRS's own datum; infinite where it cannot be.

        Parameters
        ----------
        x, y
            Positions in the CRS, of any one shape.
        """
        lon, lat = np.asarray(x, dtype=np.float64), np.asarray(y, dtype=np.float64)
        if self.transformer is not None:
            lon, lat = self.transformer.transform(lon, lat)
        return np.asarray(lon) * self.degrees_per_unit, np.asarray(lat) * self.degrees_per_unit


@dataclass(frozen=True, slots=True)
class VerticalPart:
    """What the CRS says of height: a text for the datum and the unit of the axis."""

    datum: str
    unit: UnitSaid
    ellipsoidal: bool
    down: bool


@dataclass(frozen=True, slots=True)
class Grid:
    """The DEM's grid as used: rows run south, columns run east, whatever the file does.

    ``flip_rows`` and ``flip_cols`` say that the file stores them the other way.
    """

    transform: Affine
    rows: int
    cols: int
    flip_rows: bool
    flip_cols: bool

    @property
    def bounds(self) -> tuple[float, float, float, float]:
        """West, south, east and north edge in the DEM's CRS."""
        t = self.transform
        return t.c, t.f + t.e * self.rows, t.c + t.a * self.cols, t.f


def horizontal_part(crs: CRS) -> CRS:
    """Return the two-dimensional CRS of the plan coordinates.

    Parameters
    ----------
    crs
        Any CRS.
    """
    if crs.is_bound and crs.source_crs is not None:
        crs = crs.source_crs
    if crs.is_compound:
        crs = crs.sub_crs_list[0]
    if crs.is_bound and crs.source_crs is not None:
        crs = crs.source_crs
    return crs.to_2d() if len(crs.axis_info) > 2 else crs


def vertical_part(crs: CRS) -> VerticalPart | None:
    """Return what the CRS says of height, or ``None`` where it is a CRS of the plan only.

    Parameters
    ----------
    crs
        Any CRS.
    """
    if crs.is_bound and crs.source_crs is not None:
        crs = crs.source_crs
    if crs.is_compound:
        for part in crs.sub_crs_list:
            plain = part.source_crs if part.is_bound and part.source_crs is not None else part
            if plain.is_vertical:
                axis = plain.axis_info[0]
                unit = unit_of_size(axis.unit_conversion_factor, axis.unit_name, "the CRS's vertical axis")
                return VerticalPart(plain.name, unit, ellipsoidal=False, down=axis.direction == "down")
        crs = crs.sub_crs_list[0]
    if len(crs.axis_info) > 2:
        axis = crs.axis_info[2]
        unit = unit_of_size(axis.unit_conversion_factor, axis.unit_name, "the CRS's vertical axis")
        datum = f"height above the ellipsoid of {crs.name}"
        return VerticalPart(datum, unit, ellipsoidal=True, down=axis.direction == "down")
    return None


def check_plan_crs(crs: CRS | None, teller: Teller) -> CRS:
    """Return the plan CRS, refused unless places on Earth can be told from it.

    Parameters
    ----------
    crs
        CRS of the file, or ``None``.
    teller
        Where the problem would stand.

    Raises
    ------
    TerrainError
        If there is none, or it is a local, geocentric or derived geographic one.
    """
    if crs is None:
        raise teller.error(
            _KEY,
            f"The DEM {teller.dem_file} does not say which coordinate system it is in.",
            found="no CRS",
            allowed="a projected or geographic CRS",
            remedy="find it in the DEM's description and store it: gdal_translate -a_srs EPSG:<code> in.tif out.tif",
        )
    plan = horizontal_part(crs)
    usable = (plan.is_projected or plan.is_geographic) and not (plan.is_geographic and plan.is_derived)
    if not usable:
        raise teller.error(
            _KEY,
            f"The CRS of {teller.dem_file} does not fix places on Earth well enough for lengths.",
            found=f"{crs.name} ({plan.type_name})",
            allowed="a projected or geographic CRS",
            remedy="resample it to a projected CRS: gdalwarp -r bilinear -t_srs EPSG:<code> in.tif out.tif",
        )
    return plan


def geodetic_of(plan: CRS) -> Geodetic:
    """Return the way from a plan CRS (projected or geographic) to degrees and lengths on its ellipsoid.

    Parameters
    ----------
    plan
        CRS of the plan coordinates.

    Raises
    ------
    TerrainError
        If the CRS names no ellipsoid.
    """
    base, geod = plan.geodetic_crs, plan.get_geod()
    if base is None or geod is None:
        raise TerrainError(
            Problem("The CRS names no ellipsoid.", found=plan.name, remedy="store a complete CRS in the DEM")
        )
    # Rounded so that the degree itself, stored in radians, comes out as exactly one degree.
    per_unit = round(math.degrees(base.axis_info[0].unit_conversion_factor), 12)
    transformer = None if plan.is_geographic else Transformer.from_crs(plan, base, always_xy=True)
    return Geodetic(geod, transformer, per_unit)


def grid_of(transform: Affine, shape: tuple[int, int], teller: Teller, plan: CRS) -> Grid:
    """Return the grid turned so that rows run south and columns run east.

    Parameters
    ----------
    transform
        Affine of the file.
    shape
        Rows and columns.
    teller
        Where the problem would stand.
    plan
        CRS of the plan coordinates.

    Raises
    ------
    TerrainError
        If the grid has no place, is rotated or sheared, or lies where its CRS cannot be.
    """
    rows, cols = shape
    if transform.is_identity or transform.a * transform.e - transform.b * transform.d == 0.0:
        raise teller.error(
            _KEY,
            f"The DEM {teller.dem_file} does not say where its cells lie.",
            found="no geotransform (or one of zero cell size)",
            allowed="a grid with origin and cell size",
            remedy="warp it by its control points: gdalwarp -r bilinear -t_srs EPSG:<code> in.tif out.tif",
        )
    if not math.isclose(abs(transform.a) + abs(transform.e), _sum_of_terms(transform), rel_tol=1e-9):
        raise teller.error(
            _KEY,
            f"The grid of {teller.dem_file} is rotated or sheared against its map axes.",
            found=f"geotransform {tuple(transform)[:6]}",
            allowed="rows and columns along the map axes (north-up or south-up)",
            remedy="resample it north-up: gdalwarp -r bilinear in.tif out.tif",
        )
    flip_rows, flip_cols = transform.e > 0.0, transform.a < 0.0
    a, e = abs(transform.a), -abs(transform.e)
    c = transform.c + transform.a * cols if flip_cols else transform.c
    f = transform.f + transform.e * rows if flip_rows else transform.f
    grid = Grid(Affine(a, 0.0, c, 0.0, e, f), rows, cols, flip_rows, flip_cols)
    _check_degrees(grid, plan, teller)
    return grid


def _sum_of_terms(transform: Affine) -> float:
    return float(sum(abs(term) for term in (transform.a, transform.b, transform.d, transform.e)))


def _check_degrees(grid: Grid, plan: CRS, teller: Teller) -> None:
    if not plan.is_geographic:
        return
    quarter = 90.0 / math.degrees(plan.axis_info[0].unit_conversion_factor)
    west, south, east, north = grid.bounds
    slack = max(grid.transform.a, -grid.transform.e)
    if max(abs(south), abs(north)) > quarter + slack or max(abs(west), abs(east)) > 4.0 * quarter + slack:
        raise teller.error(
            _KEY,
            f"The CRS of {teller.dem_file} is in degrees, but its coordinates are not.",
            found=f"CRS {plan.name}, x {west:.2f} to {east:.2f}, y {south:.2f} to {north:.2f}",
            allowed="latitudes from -90 to 90",
            remedy="the CRS stored in the file is wrong: store the right one (gdal_translate -a_srs EPSG:<code>)",
        )


def local_utm(lon: float, lat: float) -> str:
    """Return the code of the UTM zone (WGS 84) at a place, or of the polar grid beyond it.

    Parameters
    ----------
    lon, lat
        Place in degrees.
    """
    if lat > _UTM_NORTH_LIMIT:
        return "EPSG:32661"
    if lat < -80.0:
        return "EPSG:32761"
    zone = int(((lon + 180.0) % 360.0) // 6.0) + 1
    return f"EPSG:{(32600 if lat >= 0.0 else 32700) + zone}"
