"""Relief shading on the true ground steps."""

from __future__ import annotations

import math

import numpy as np

from routing.outputs.pictures.framing import Cut
from routing.records import FloatArray

#: Light from the north-west, half-way up: the convention of maps.
AZIMUTH_DEG, ALTITUDE_DEG = 315.0, 45.0
#: Slope that gentle ground is lifted to before it is shaded, and the most that it is lifted.
_SHOWN_SLOPE, _MOST_LIFT = 0.30, 6.0


def shade(cut: Cut) -> FloatArray:
    """Return how bright each block is: the cosine of the angle between ground and light (Lambert's law).

    Gentle ground is made steeper for the shading alone, so that it shows.

    Returns
    -------
    (rows, cols) array
        0 (away from the light) to 1; NaN where there is no ground.
    """
    east, north = _slopes(cut)
    steep = np.hypot(east, north)
    seen = steep[np.isfinite(steep) & cut.dry & np.isfinite(cut.level_m)]
    usual = float(np.percentile(seen, 90)) if seen.size else 0.0
    lift = min(max(_SHOWN_SLOPE / usual, 1.0), _MOST_LIFT) if usual > 0.0 else 1.0
    azimuth, altitude = math.radians(AZIMUTH_DEG), math.radians(ALTITUDE_DEG)
    light_east = math.sin(azimuth) * math.cos(altitude)
    light_north = math.cos(azimuth) * math.cos(altitude)
    lit = math.sin(altitude) - lift * (east * light_east + north * light_north)
    bright = np.clip(lit / np.sqrt(1.0 + (lift * steep) ** 2), 0.0, 1.0)
    return np.where(np.isfinite(cut.level_m), bright, np.nan)


def _slopes(cut: Cut) -> tuple[FloatArray, FloatArray]:
    """Return the rise per metre of ground to the east and to the north, by central differences."""
    level = _closed(cut.level_m)
    rows, cols = level.shape
    east = np.gradient(level, axis=1) / cut.step_x_m[:, None] if cols > 1 else np.zeros_like(level)
    north = -np.gradient(level, axis=0) / cut.step_y_m[:, None] if rows > 1 else np.zeros_like(level)
    return east, north


def _closed(level: FloatArray) -> FloatArray:
    """Fill the cells beside ground with the mean of it, so that ground at a void's edge has a slope too."""
    known = np.isfinite(level)
    if known.all():
        return level
    padded = np.pad(np.where(known, level, 0.0), 1)
    count = np.pad(known.astype(np.float64), 1)
    total = padded[:-2, 1:-1] + padded[2:, 1:-1] + padded[1:-1, :-2] + padded[1:-1, 2:]
    beside = count[:-2, 1:-1] + count[2:, 1:-1] + count[1:-1, :-2] + count[1:-1, 2:]
    mean = np.divide(total, beside, out=np.full_like(level, np.nan), where=beside > 0)
    return np.where(known, level, mean)
