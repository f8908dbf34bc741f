"""Lines and rings of a DEM's CRS as WGS 84 longitude and latitude, cut at the antimeridian.

A straight line of the DEM's CRS is a curve in longitude and latitude, and GeoJSON draws straight lines between
positions (RFC 7946, section 3.1.1). So positions are added until no drawn segment strays from the true line by
more than ``TOLERANCE_M``.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from pyproj import CRS, Transformer
from pyproj.exceptions import ProjError

from routing.errors import OutputError, Problem

FloatArray = NDArray[np.float64]

#: Furthest that a drawn segment may stray from the true line, before rounding.
TOLERANCE_M = 0.01
#: 1e-7 degree of latitude is 0.011 m (RFC 7946, section 11.2 has 6 decimals at about 10 cm).
DECIMALS = 7
#: A degree of latitude at the poles of WGS 84, where it is longest: pi/180 a / sqrt(1 - e^2), rounded up.
_METRES_PER_DEGREE = 111_695.0
_MOST_HALVINGS = 24


@dataclass(frozen=True, slots=True)
class Extent:
    """Bounds in degrees; ``east`` is larger than 180 where the antimeridian is crossed."""

    west: float
    south: float
    east: float
    north: float

    def bbox(self) -> list[float]:
        """Return the RFC 7946 ``bbox``: west is larger than east across the antimeridian (section 5.2)."""
        if self.east - self.west >= 360.0:
            return [-180.0, _rounded(self.south), 180.0, _rounded(self.north)]
        east = self.east - 360.0 if self.east > 180.0 else self.east
        return [_rounded(value) for value in (self.west, self.south, east, self.north)]


def extent_of(lonlat: FloatArray) -> Extent:
    """Return the bounds of (n, 2) positions with continuous longitudes; ``west`` lies in [-180, 180)."""
    west, south = lonlat.min(axis=0)
    east, north = lonlat.max(axis=0)
    turn = 360.0 * np.floor((west + 180.0) / 360.0)
    return Extent(float(west - turn), float(south), float(east - turn), float(north))


def joined(extents: list[Extent]) -> Extent:
    """Return the bounds of several bounds, each taken on the side of the earth nearest to the first.

    Raises
    ------
    ValueError
        If ``extents`` is empty.
    """
    if not extents:
        raise ValueError(f"no bounds to join: {extents}")
    middle = 0.5 * (extents[0].west + extents[0].east)
    corners = []
    for extent in extents:
        turn = 360.0 * np.round((0.5 * (extent.west + extent.east) - middle) / 360.0)
        corners += [(extent.west - turn, extent.south), (extent.east - turn, extent.north)]
    return extent_of(np.array(corners))


class LonLat:
    """Turns map positions of one CRS into WGS 84 longitude and latitude.

    Parameters
    ----------
    crs_wkt
        The CRS, in any form that PROJ reads. A vertical part is left out: heights are not written.

    Raises
    ------
    OutputError
        If the CRS has no known place on the earth.
    """

    def __init__(self, crs_wkt: str) -> None:
        try:
            crs = CRS.from_user_input(crs_wkt).to_2d()
            self._transformer = Transformer.from_crs(crs, "OGC:CRS84", always_xy=True)
        except ProjError as error:
            raise OutputError(
                Problem(
                    "the CRS of the DEM cannot be turned into WGS 84 longitude and latitude, which GeoJSON needs",
                    found=f"{crs_wkt[:80]!r} ({error})",
                    allowed="a projected or geographic CRS that PROJ can relate to WGS 84",
                    remedy="give the DEM a CRS that says where on the earth it lies",
                )
            ) from error

    def positions(self, x: FloatArray, y: FloatArray) -> FloatArray:
        """Return (n, 2) longitudes and latitudes, each longitude in [-180, 180].

        Raises
        ------
        OutputError
            If a position lies outside the area where the CRS can be turned.
        """
        lon, lat = self._transformer.transform(np.asarray(x, dtype=float), np.asarray(y, dtype=float))
        found = np.column_stack([lon, lat])
        bad = ~np.isfinite(found).all(axis=1)
        if bad.any():
            k = int(np.flatnonzero(bad)[0])
            raise OutputError(
                Problem(
                    "a map position cannot be turned into WGS 84 longitude and latitude",
                    found=f"x {np.ravel(x)[k]:.3f}, y {np.ravel(y)[k]:.3f}",
                    allowed="positions inside the area of use of the DEM's CRS",
                    remedy="check the CRS and the transform of the DEM",
                )
            )
        return found

    def path(self, x: FloatArray, y: FloatArray) -> FloatArray:
        """Return a polyline as (m, 2) positions that stray nowhere by more than ``TOLERANCE_M``.

        Longitudes are continuous (they may leave [-180, 180]); every vertex is kept.
        """
        u = np.arange(len(x), dtype=float)
        unchecked = np.ones(len(x) - 1, dtype=bool)
        for _ in range(_MOST_HALVINGS):
            at = np.flatnonzero(unchecked)
            if not at.size:
                break
            at = at[self._stray_m(x, y, u[at], u[at + 1]) > TOLERANCE_M]
            u = np.insert(u, at + 1, 0.5 * (u[at] + u[at + 1]))
            new = at + 1 + np.arange(at.size)
            unchecked = np.zeros(u.size - 1, dtype=bool)
            unchecked[new - 1] = True
            unchecked[new] = True
        found = self._along(x, y, u)
        found[:, 0] = np.unwrap(found[:, 0], period=360.0)
        return found

    def _along(self, x: FloatArray, y: FloatArray, u: FloatArray) -> FloatArray:
        """Return positions at vertex numbers ``u``, fractions between vertices."""
        k = np.arange(len(x), dtype=float)
        return self.positions(np.interp(u, k, x), np.interp(u, k, y))

    def _stray_m(self, x: FloatArray, y: FloatArray, start: FloatArray, end: FloatArray) -> FloatArray:
        """Return how far the quarter points of each piece lie off its chord, in metres (a safe upper figure)."""
        head, tail = self._along(x, y, start), self._along(x, y, end)
        scale = np.column_stack([np.cos(np.radians(head[:, 1])), np.ones(len(head))]) * _METRES_PER_DEGREE
        chord = _turned(tail - head) * scale
        length = np.hypot(*chord.T)
        worst = np.zeros(len(head))
        for share in (0.25, 0.5, 0.75):
            off = _turned(self._along(x, y, start + share * (end - start)) - head) * scale
            across = np.abs(chord[:, 0] * off[:, 1] - chord[:, 1] * off[:, 0])
            apart = np.divide(across, length, out=np.hypot(*off.T), where=length > 0.0)
            worst = np.maximum(worst, apart)
        return worst

    def operation(self, x: float, y: float) -> dict[str, str | float | None]:
        """Return what PROJ does at a map position and how exact it says that is (``None``: not known).

        Raises
        ------
        OutputError
            If the position lies outside the area where the CRS can be turned.
        """
        self.positions(np.array([x]), np.array([y]))
        try:
            used = self._transformer.get_last_used_operation()
        except ProjError:  # PROJ had nothing to do: the DEM is in WGS 84 longitude and latitude
            used = self._transformer
        return {"operation": used.description, "accuracy_m": None if used.accuracy < 0 else float(used.accuracy)}


def _turned(difference: FloatArray) -> FloatArray:
    """Return differences of position with the longitude brought into [-180, 180)."""
    turned = difference.copy()
    turned[:, 0] = (turned[:, 0] + 180.0) % 360.0 - 180.0
    return turned


def _rounded(value: float) -> float:
    return round(float(value), DECIMALS) + 0.0


def cut(path: FloatArray) -> list[FloatArray]:
    """Cut a polyline at the antimeridian (RFC 7946, section 3.1.9).

    Parameters
    ----------
    path : (n, 2) array
        Longitudes, continuous, and latitudes.

    Returns
    -------
    list of (m, 2) arrays
        The parts in order, each with longitudes in [-180, 180].
    """
    points = _with_crossings(path)
    zone = np.floor((0.5 * (points[:-1, 0] + points[1:, 0]) + 180.0) / 360.0)
    breaks = np.flatnonzero(np.diff(zone)) + 1
    starts, ends = [0, *breaks], [*breaks, len(points) - 1]
    return [
        points[start : end + 1] - np.array([360.0 * zone[start], 0.0]) for start, end in zip(starts, ends, strict=True)
    ]


def _with_crossings(path: FloatArray) -> FloatArray:
    """Return the polyline with a position added wherever it passes 180 degrees (or 180 plus whole turns)."""
    west = np.minimum(path[:-1, 0], path[1:, 0])
    east = np.maximum(path[:-1, 0], path[1:, 0])
    meridian = 360.0 * np.ceil((west - 180.0) / 360.0) + 180.0
    at = np.flatnonzero((meridian > west) & (meridian < east))
    if not at.size:
        return path
    share = (meridian[at] - path[at, 0]) / (path[at + 1, 0] - path[at, 0])
    lat = path[at, 1] + share * (path[at + 1, 1] - path[at, 1])
    return np.insert(path, at + 1, np.column_stack([meridian[at], lat]), axis=0)


def written(part: FloatArray) -> list[list[float]]:
    """Return positions as they stand in a file: 7 decimals, no position twice in a row."""
    rounded = np.round(part, DECIMALS) + 0.0
    fresh = np.ones(len(rounded), dtype=bool)
    fresh[1:] = (np.diff(rounded, axis=0) != 0.0).any(axis=1)
    kept: list[list[float]] = rounded[fresh].tolist()
    return kept
