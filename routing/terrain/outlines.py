"""Outlines of polygons moved to the DEM's CRS: straight edges there become curves here, and are followed closely."""

from __future__ import annotations

import math

import numpy as np
import shapely
from pyproj import CRS, Transformer
from shapely import Polygon

from routing.records import BoolArray, FloatArray

# Halvings of an edge: 2^20 parts of a meridian are 20 m long, and more would only follow a jump of a datum grid.
_MOST_HALVINGS = 20
_SHARES = (0.25, 0.5, 0.75)


def moved_polygon(polygon: Polygon, own: CRS, crs: CRS, within: float) -> Polygon | None:
    """Return a polygon moved to another CRS, its edges kept to the curves that they become there.

    Parameters
    ----------
    polygon
        In its own CRS, in which its edges are straight.
    own, crs
        Its own CRS, and the one wanted.
    within
        How far an edge may run from its true image, in units of the CRS wanted (looked at in the quarters).

    Returns
    -------
    Polygon or None
        ``None`` where a point of it has no place in the CRS wanted. In a geographic CRS rings that cross the
        antimeridian run on, beyond 180 degrees.
    """
    transformer = Transformer.from_crs(own, crs, always_xy=True)
    turn = _full_turn(crs)
    rings: list[FloatArray] = []
    for ring in (polygon.exterior, *polygon.interiors):
        moved = _moved_ring(shapely.get_coordinates(ring), transformer, within, turn)
        if not np.isfinite(moved).all():
            return None
        if turn is not None and rings:
            moved[:, 0] -= turn * np.round((moved[0, 0] - rings[0][0, 0]) / turn)
        rings.append(moved)
    return Polygon(rings[0], rings[1:])


def on_the_turn_of(polygon: Polygon, crs: CRS, middle_x: float) -> Polygon:
    """Return a polygon in a geographic CRS on the turn of longitude that lies nearest to ``middle_x``.

    Parameters
    ----------
    polygon, crs
        The polygon and its CRS; with a projected CRS it is returned as it is.
    middle_x
        Longitude in units of the CRS.
    """
    turn = _full_turn(crs)
    west, _, east, _ = polygon.bounds
    turns = 0.0 if turn is None else float(np.round((middle_x - 0.5 * (west + east)) / turn))
    if turn is None or turns == 0.0:
        return polygon
    shifted: Polygon = shapely.transform(polygon, lambda xy: xy + np.array([turns * turn, 0.0]))
    return shifted


def _full_turn(crs: CRS) -> float | None:
    """Return 360 degrees in the unit of a geographic CRS, ``None`` for other CRSs."""
    return math.tau / crs.axis_info[0].unit_conversion_factor if crs.is_geographic else None


def _moved_ring(xy: FloatArray, transformer: Transformer, within: float, turn: float | None) -> FloatArray:
    for _ in range(_MOST_HALVINGS):
        split = _strays(xy, transformer, within, turn)
        if not split.any():
            break
        after = np.flatnonzero(split)
        xy = np.insert(xy, after + 1, 0.5 * (xy[after] + xy[after + 1]), axis=0)
    moved = _images(xy, transformer)
    if turn is not None:
        moved[:, 0] = np.unwrap(moved[:, 0], period=turn)
    return moved


def _images(xy: FloatArray, transformer: Transformer) -> FloatArray:
    """Return the points in the CRS wanted; NaN where they have no place there."""
    images = np.column_stack(transformer.transform(xy[:, 0], xy[:, 1]))
    return np.where(np.isfinite(images), images, np.nan)


def _strays(xy: FloatArray, transformer: Transformer, within: float, turn: float | None) -> BoolArray:
    """Return which edges leave the images of their inner points further aside than allowed."""
    start, end = xy[:-1], xy[1:]
    ends = _images(xy, transformer)
    tail, step = ends[:-1], _shortest(ends[1:] - ends[:-1], turn)
    length = np.hypot(step[:, 0], step[:, 1])
    known: BoolArray = np.isfinite(ends[:, 0]) & np.isfinite(ends[:, 1])
    strays = np.zeros(len(start), dtype=np.bool_)
    for share in _SHARES:
        middle = _images(start + share * (end - start), transformer)
        off = _shortest(middle - tail, turn)
        with np.errstate(invalid="ignore", divide="ignore"):
            aside = np.abs(off[:, 0] * step[:, 1] - off[:, 1] * step[:, 0]) / length
        strays |= ~(np.where(length > 0.0, aside, np.hypot(off[:, 0], off[:, 1])) <= within)
    return strays & known[:-1] & known[1:]


def _shortest(step: FloatArray, turn: float | None) -> FloatArray:
    """Return steps without full turns of longitude."""
    if turn is not None:
        step[:, 0] -= turn * np.round(step[:, 0] / turn)
    return step
