"""How many metres of a long section lie in each zone."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import shapely
from numpy.typing import NDArray
from shapely import MultiPolygon, Polygon

from routing.records import FloatArray, GroundLine, Route, Zone, ZoneLength


def lengths_in_zones(line: GroundLine | Route, zones: Sequence[Zone]) -> tuple[ZoneLength, ...]:
    """Measure what of a long section lies in each cost zone.

    Each piece between two samples is cut by the zone on the map (by shapely), and the share that lies in it is taken of
    the piece's length along the ground. Where zones overlap, a piece counts for the dearest alone. The outline is in.

    Parameters
    ----------
    line
        Sampled long section.
    zones
        Zones in the DEM's CRS; barred ones are left out.

    Returns
    -------
    tuple of ZoneLength
        From the dearest on; zones that the line misses are left out.
    """
    ends = np.column_stack([line.x, line.y])
    rest = shapely.linestrings(np.stack([ends[:-1], ends[1:]], axis=1))
    whole = np.hypot(*np.diff(ends, axis=0).T)
    ground = np.diff(line.chainage_m)
    found = []
    for zone in sorted((zone for zone in zones if zone.kind == "cost"), key=lambda zone: -zone.cost_factor):
        before = _lengths(rest)
        rest = _outside(rest, zone.shape)
        inside = np.divide(before - _lengths(rest), whole, out=np.zeros(whole.size), where=whole > 0.0)
        length = float(np.sum(np.clip(inside, 0.0, 1.0) * ground))
        if length > 0.0:
            found.append(ZoneLength(zone.name, zone.cost_factor, length))
    return tuple(found)


def _lengths(pieces: NDArray[np.object_]) -> FloatArray:
    lengths: FloatArray = shapely.length(pieces)
    return lengths


def _outside(pieces: NDArray[np.object_], shape: Polygon | MultiPolygon) -> NDArray[np.object_]:
    """Return the pieces without what lies in the shape; only those that its outline meets have to be cut."""
    shapely.prepare(shape)
    left = pieces.copy()
    met = np.flatnonzero(shapely.intersects(shape, pieces))
    within = shapely.covers(shape, pieces[met])
    left[met[within]] = shapely.LineString()
    cut = met[~within]
    left[cut] = shapely.difference(pieces[cut], shape)
    return left
