"""Between the DEM's CRS and WGS 84 longitude and latitude."""

from __future__ import annotations

import math
from functools import cached_property

import numpy as np
from pyproj import CRS, Transformer
from pyproj.exceptions import ProjError
from pyproj.transformer import AreaOfInterest

from routing.terrain.frames import Geodetic

Bounds = tuple[float, float, float, float]
_COARSE_M = 1.0


class Wgs84:
    """The transformation between a plan CRS and WGS 84 that PROJ has for a place; made when first used."""

    def __init__(self, crs: CRS, bounds: Bounds, geodetic: Geodetic) -> None:
        self._crs = crs
        self._bounds = bounds
        self._geodetic = geodetic

    @cached_property
    def _transformer(self) -> Transformer:
        return Transformer.from_crs(self._crs, "EPSG:4326", always_xy=True, area_of_interest=self._area())

    def _area(self) -> AreaOfInterest | None:
        """Return the rough extent in degrees, so that PROJ takes the transformation meant for the place."""
        west, south, east, north = self._bounds
        lon, lat = self._geodetic.degrees([west, east, west, east], [south, south, north, north])
        if not (np.isfinite(lon).all() and np.isfinite(lat).all()):
            return None
        if np.abs(lat).max() > 90.0 or np.abs(lon).max() > 180.0:
            return None
        return AreaOfInterest(float(lon.min()), float(lat.min()), float(lon.max()), float(lat.max()))

    def of(self, x: float, y: float) -> tuple[float, float]:
        """Return longitude and latitude of a map position (infinite where there is none).

        Parameters
        ----------
        x, y
            Position in the DEM's CRS.
        """
        lon, lat = self._transformer.transform(x, y)
        # A DEM whose longitudes run from 0 to 360 is legal; positions are told from -180 to 180.
        return float(lon) if abs(lon) <= 180.0 else _turned(float(lon), 0.0), float(lat)

    def back(self, lon: float, lat: float) -> tuple[float, float]:
        """Return the map position of a longitude and latitude (infinite where there is none).

        Parameters
        ----------
        lon, lat
            Position in WGS 84 degrees.
        """
        x, y = self._transformer.transform(lon, lat, direction="INVERSE")
        if self._crs.is_geographic and self._geodetic.degrees_per_unit == 1.0:
            west, _, east, _ = self._bounds
            return float(x) if west <= x <= east else _turned(float(x), 0.5 * (west + east)), float(y)
        return float(x), float(y)

    def bounds(self) -> Bounds:
        """Return west, south, east and north edge in degrees."""
        west, south, east, north = self._transformer.transform_bounds(*self._bounds)
        return west, south, east, north

    def notes(self) -> tuple[str, ...]:
        """Return what has to be told: which transformation was used, unless it is good to a metre."""
        west, south, east, north = self._bounds
        lon, _ = self.of(0.5 * (west + east), 0.5 * (south + north))
        if not math.isfinite(lon):
            return ("WGS 84 positions cannot be told from the DEM's CRS at its centre.",)
        try:
            used = self._transformer.get_last_used_operation()
        except ProjError:  # PROJ had one candidate only, which then is the transformer itself
            used = self._transformer
        if used.accuracy is not None and 0.0 <= used.accuracy <= _COARSE_M:
            return ()
        known = f"good to {used.accuracy:g} m" if used.accuracy is not None and used.accuracy >= 0.0 else "not rated"
        return (f"WGS 84 positions are told from {self._crs.name} by {used.description!r}, {known}.",)


def _turned(degrees: float, middle: float) -> float:
    """Return the same longitude, counted by whole turns as near to a middle as can be."""
    return degrees + 360.0 * round((middle - degrees) / 360.0) if math.isfinite(degrees) else degrees
