"""Shapely geometries of the DEM's CRS as GeoJSON geometry objects (RFC 7946, section 3.1)."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from routing.errors import OutputError, Problem
from routing.outputs.lonlat import Extent, FloatArray, LonLat, cut, extent_of, joined, written

if TYPE_CHECKING:
    from shapely import LineString, MultiPolygon, Polygon

#: A ring has at least four positions, the last equal to the first (RFC 7946, section 3.1.6).
_LEAST_RING = 4
_HALF_TURN = 180.0


@dataclass(frozen=True, slots=True)
class Drawn:
    """A GeoJSON geometry object with its bounds."""

    geometry: dict[str, Any]
    extent: Extent


def draw_point(x: float, y: float, lonlat: LonLat) -> Drawn:
    """Return a Point."""
    position = lonlat.positions(np.array([x]), np.array([y]))
    return Drawn({"type": "Point", "coordinates": written(position)[0]}, extent_of(position))


def draw_line(line: LineString, lonlat: LonLat) -> Drawn:
    """Return a LineString, or a MultiLineString where the antimeridian cuts it."""
    xy = np.asarray(line.coords, dtype=float)
    path = lonlat.path(xy[:, 0], xy[:, 1])
    parts = [part for part in map(written, cut(path)) if len(part) > 1]
    if not parts:
        # The whole line is shorter than the last decimal; a LineString needs two positions all the same.
        parts = [written(path[:1]) * 2]
    if len(parts) == 1:
        return Drawn({"type": "LineString", "coordinates": parts[0]}, extent_of(path))
    return Drawn({"type": "MultiLineString", "coordinates": parts}, extent_of(path))


def draw_polygon(shape: Polygon | MultiPolygon, lonlat: LonLat) -> Drawn:
    """Return a Polygon or MultiPolygon: exteriors counter-clockwise, holes clockwise, cut at the antimeridian.

    Raises
    ------
    OutputError
        If a ring goes round a pole, which longitude and latitude cannot draw.
    """
    pieces: list[list[list[list[float]]]] = []
    extents: list[Extent] = []
    for polygon in getattr(shape, "geoms", [shape]):
        rings = _rings(polygon, lonlat)
        extents.append(extent_of(rings[0]))
        pieces += [piece for piece in map(_oriented, _cut_rings(rings)) if piece]
    if len(pieces) == 1:
        return Drawn({"type": "Polygon", "coordinates": pieces[0]}, joined(extents))
    return Drawn({"type": "MultiPolygon", "coordinates": pieces}, joined(extents))


def _rings(polygon: Polygon, lonlat: LonLat) -> list[FloatArray]:
    """Return the rings with continuous longitudes, holes on the same turn as their exterior."""
    rings: list[FloatArray] = []
    for ring in (polygon.exterior, *polygon.interiors):
        xy = np.asarray(ring.coords, dtype=float)
        path = lonlat.path(xy[:, 0], xy[:, 1])
        if abs(path[-1, 0] - path[0, 0]) > _HALF_TURN:
            raise OutputError(
                Problem(
                    "a polygon goes round a pole, which longitude and latitude cannot draw",
                    found=f"a ring of {len(xy)} points from latitude {path[:, 1].min():.3f} to {path[:, 1].max():.3f}",
                    allowed="water bodies and zones that hold neither pole",
                    remedy="use a DEM that leaves the pole out",
                )
            )
        if rings:
            path[:, 0] -= 360.0 * np.round((path[0, 0] - rings[0][0, 0]) / 360.0)
        rings.append(path)
    return rings


def _cut_rings(rings: list[FloatArray]) -> list[list[FloatArray]]:
    """Return the polygons that the antimeridian cuts a polygon into, each a list of rings in [-180, 180]."""
    west, east = float(rings[0][:, 0].min()), float(rings[0][:, 0].max())
    first = int(np.floor((west + _HALF_TURN) / 360.0))
    last = int(np.ceil((east + _HALF_TURN) / 360.0)) - 1
    if last <= first:
        return [[ring - np.array([360.0 * first, 0.0]) for ring in rings]]

    from shapely import Polygon, box  # noqa: PLC0415 - only for water across the antimeridian

    whole = Polygon(rings[0], rings[1:])
    cut_up = []
    for turn in range(first, last + 1):
        middle = 360.0 * turn
        piece = whole.intersection(box(middle - _HALF_TURN, -90.0, middle + _HALF_TURN, 90.0))
        areas = [part for part in getattr(piece, "geoms", [piece]) if part.geom_type == "Polygon"]
        for area in areas:
            found = [np.asarray(ring.coords, dtype=float) for ring in (area.exterior, *area.interiors)]
            cut_up.append([ring - np.array([middle, 0.0]) for ring in found])
    return cut_up


def _oriented(rings: list[FloatArray]) -> list[list[list[float]]]:
    """Return one polygon's coordinates by the right-hand rule; rings smaller than the last decimal are dropped."""
    kept = []
    for number, ring in enumerate(rings):
        counter_clockwise = _twice_area(ring) > 0.0
        positions = written(ring if counter_clockwise == (number == 0) else ring[::-1])
        if positions[0] != positions[-1]:
            positions.append(positions[0])
        if len(positions) >= _LEAST_RING:
            kept.append(positions)
        elif number == 0:
            return []
    return kept


def _twice_area(ring: FloatArray) -> float:
    """Return twice the signed area, taken from the first point so that nothing is lost to rounding."""
    x, y = (ring - ring[0]).T
    return float(np.sum(x[:-1] * y[1:] - x[1:] * y[:-1]))
