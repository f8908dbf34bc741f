"""Placing the user's points on the DEM, whatever coordinates they were given in."""

from __future__ import annotations

from pathlib import Path

import shapely

from routing.errors import Problem, TerrainError
from routing.records import PlacedPoint, PointAsk
from routing.terrain.reading import Dem
from routing.terrain.vectors import LayerAsk, read_geometries


def place_point(dem: Dem, ask: PointAsk, site_file: Path | None = None, what: str = "intake") -> PlacedPoint:
    """Place a point on the DEM.

    Parameters
    ----------
    dem
        Open DEM.
    ask
        The point as (x, y) in the DEM's CRS, as (lon, lat) in WGS 84 degrees, or as a file (path already
        resolved) that holds exactly one point in any CRS.
    site_file
        Named in messages, with the point's own key and line.
    what
        What the point is, for messages.

    Returns
    -------
    PlacedPoint
        Position in the DEM's CRS and in WGS 84 degrees.

    Raises
    ------
    TerrainError
        If the file does not hold exactly one point, or the point lies outside the DEM.
    """
    if ask.file is not None:
        x, y = _point_of_file(dem, ask, site_file, what)
    elif ask.lon is not None and ask.lat is not None:
        x, y = dem.from_lonlat(ask.lon, ask.lat)
    elif ask.x is not None and ask.y is not None:
        x, y = ask.x, ask.y
    else:
        raise TerrainError(
            Problem(
                f"The {what} has no position.",
                allowed="x and y in the DEM's CRS, or lon and lat in degrees, or a file with one point",
                remedy="give one of them",
                file=None if site_file is None else str(site_file),
                key=ask.key or what,
                line=ask.line,
            )
        )
    if not dem.holds(x, y):
        raise _outside(dem, ask, (x, y), site_file, what)
    lon, lat = dem.to_lonlat(x, y)
    return PlacedPoint(x=x, y=y, lon=lon, lat=lat)


def _point_of_file(dem: Dem, ask: PointAsk, site_file: Path | None, what: str) -> tuple[float, float]:
    layer = LayerAsk(Path(str(ask.file)), ask.layer, ask.key or what, ask.line, site_file)
    geometries = read_geometries(layer, dem.crs)
    parts = [part for one in geometries for part in shapely.get_parts(one)]
    points = [part for part in parts if part.geom_type == "Point"]
    if len(points) != 1 or len(parts) != 1:
        kinds = sorted({part.geom_type for part in parts})
        raise layer.error(
            f"The file of the {what} must hold exactly one point: {layer.file}.",
            found=f"{len(points)} points among {len(parts)} features" + (f" ({', '.join(kinds)})" if kinds else ""),
            allowed="one point",
            remedy="export just that point, or name its layer",
        )
    return float(points[0].x), float(points[0].y)


def _outside(dem: Dem, ask: PointAsk, at: tuple[float, float], site_file: Path | None, what: str) -> TerrainError:
    in_degrees = ask.lon is not None
    if in_degrees:
        west, south, east, north = dem.bounds_lonlat
        found = f"lon {ask.lon}, lat {ask.lat}"
        allowed = f"lon {west:.6f} to {east:.6f}, lat {south:.6f} to {north:.6f}"
    else:
        west, south, east, north = dem.bounds
        digits = 6 if dem.crs.is_geographic else 2
        found = f"x {at[0]:.{digits}f}, y {at[1]:.{digits}f}"
        allowed = f"x {west:.{digits}f} to {east:.{digits}f}, y {south:.{digits}f} to {north:.{digits}f}"
        allowed += f" ({dem.crs.name})"
    return TerrainError(
        Problem(
            f"The {what} lies outside the DEM.",
            found=found,
            allowed=allowed,
            remedy=_hint(dem, ask, at) or "correct the position, or use a DEM that reaches it",
            file=None if site_file is None else str(site_file),
            key=ask.key or what,
            line=ask.line,
        )
    )


def _hint(dem: Dem, ask: PointAsk, at: tuple[float, float]) -> str:
    """Return what probably went wrong, where trying it puts the point on the DEM or near it."""
    if _near(dem, *at):
        return ""
    in_degrees = ask.lon is not None and ask.lat is not None
    x, y = (ask.lon, ask.lat) if ask.lon is not None and ask.lat is not None else at
    projected = not dem.crs.is_geographic
    guesses = (
        (in_degrees and _near(dem, x, y), "these look like coordinates in the DEM's CRS: give them as x and y"),
        (in_degrees and _near_degrees(dem, y, x), "lon and lat look swapped: exchange them"),
        (not in_degrees and _near(dem, y, x), "x and y look swapped: exchange them"),
        (projected and _near_degrees(dem, x, y), "these look like degrees: give them as lon and lat"),
        (projected and _near_degrees(dem, y, x), "these look like latitude and longitude: give them as lat and lon"),
    )
    return next((text for right, text in guesses if right), "")


def _near(dem: Dem, x: float, y: float) -> bool:
    """Return whether a position lies on the DEM or no further from it than its own size."""
    west, south, east, north = dem.bounds
    width, height = east - west, north - south
    return west - width <= x <= east + width and south - height <= y <= north + height


def _near_degrees(dem: Dem, lon: float, lat: float) -> bool:
    return abs(lon) <= 180.0 and abs(lat) <= 90.0 and _near(dem, *dem.from_lonlat(lon, lat))
