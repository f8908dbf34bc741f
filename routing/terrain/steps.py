"""True ground steps: how far apart neighbouring cell centres are on the ellipsoid, row by row."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from routing.records import FloatArray
from routing.terrain.frames import Geodetic, local_utm
from routing.terrain.telling import Teller

LARGEST_SCALE_CHANGE = 1e-3
_MOST_CHECKED_ROWS = 33


@dataclass(frozen=True, slots=True)
class GroundSteps:
    """Ground steps of a window.

    Attributes
    ----------
    step_x_m, step_y_m
        (rows,) arrays: ground distance of one cell along the row and across it, at the centre column.
    scale_change
        Largest relative difference of a step along a row, between its ends and its middle.
    skew
        Largest relative error of a diagonal reckoned from the two steps by Pythagoras.
    """

    step_x_m: FloatArray
    step_y_m: FloatArray
    scale_change: float
    skew: float


def ground_steps(
    geodetic: Geodetic, transform: tuple[float, float, float, float, float, float], shape: tuple[int, int]
) -> GroundSteps:
    """Measure the ground steps of a window by geodesics on the CRS's own ellipsoid.

    A step along the row reaches from half a cell west to half a cell east of the cell centre at the window's
    centre column, a step across it from half a cell north to half a cell south. So the map scale of any
    CRS, and any unit of its axes, are taken out.

    Parameters
    ----------
    geodetic
        Way from map coordinates to degrees.
    transform
        Affine of the window.
    shape
        Its rows and columns.

    Notes
    -----
    Geodesics by Karney, C. F. F. (2013), Algorithms for geodesics, J. Geodesy 87, 43-55, as in PROJ.
    """
    rows, cols = shape
    centre = 0.5 * cols
    every_row = np.arange(rows, dtype=np.float64) + 0.5
    step_x, step_y = _steps_at(geodetic, transform, every_row, np.full(rows, centre, dtype=np.float64))
    some = np.unique(np.linspace(0, rows - 1, min(rows, _MOST_CHECKED_ROWS)).round().astype(np.intp))
    change, skew = 0.0, 0.0
    for col in (0.5, centre, cols - 0.5):
        at = np.full(some.size, col, dtype=np.float64)
        end_x, end_y = _steps_at(geodetic, transform, every_row[some], at)
        with np.errstate(divide="ignore", invalid="ignore"):
            change = max(change, _largest(end_x / step_x[some] - 1.0), _largest(end_y / step_y[some] - 1.0))
            skew = max(skew, _largest(_skew_at(geodetic, transform, every_row[some], at) / np.hypot(end_x, end_y)))
    return GroundSteps(step_x, step_y, change, skew)


def check_steps(steps: GroundSteps, place: tuple[float, float], teller: Teller) -> None:
    """Refuse steps that one number a row cannot describe.

    Parameters
    ----------
    steps
        As measured.
    place
        Longitude and latitude of the window's centre, for the remedy.
    teller
        Where the problem would stand.

    Raises
    ------
    TerrainError
        If a step is not a positive number, the scale changes by more than 0.1 % along a row, or the ground
        under a square of the map is skewed by more than that.
    """
    both = np.concatenate([steps.step_x_m, steps.step_y_m])
    if not (np.isfinite(both).all() and (both > 0.0).all()):
        raise teller.error(
            "terrain.file",
            f"Ground lengths cannot be told everywhere in the part of {teller.dem_file} that is needed.",
            found="cells at or beyond a pole, or outside the range of the CRS",
            allowed="cells with a length along and across the row",
            remedy="check that the CRS stored in the file is right; near a pole, resample to a polar projection",
        )
    code = local_utm(*place)
    remedy = f"resample to a local projection: gdalwarp -r bilinear -t_srs {code} {teller.dem_file} out.tif"
    if steps.scale_change > LARGEST_SCALE_CHANGE:
        raise teller.error(
            "terrain.file",
            f"The map scale of {teller.dem_file} changes too much along a row of the part that is needed.",
            found=f"{100.0 * steps.scale_change:.3f} %",
            allowed=f"at most {100.0 * LARGEST_SCALE_CHANGE:.1f} %",
            remedy=remedy,
        )
    if steps.skew > LARGEST_SCALE_CHANGE:
        raise teller.error(
            "terrain.file",
            f"The CRS of {teller.dem_file} skews the ground: lengths depend on the diagonal that is taken.",
            found=f"diagonals off by {100.0 * steps.skew:.3f} %",
            allowed=f"at most {100.0 * LARGEST_SCALE_CHANGE:.1f} %",
            remedy=remedy,
        )


def _largest(difference: FloatArray) -> float:
    """Return the largest size; a value that is not a number counts as none (steps themselves are checked)."""
    finite = np.abs(difference[np.isfinite(difference)])
    return float(finite.max()) if finite.size else 0.0


def _steps_at(
    geodetic: Geodetic, transform: tuple[float, ...], row: FloatArray, col: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return the ground length of one cell along x and along y, at places counted in cells from the corner."""
    step_x = _distance(geodetic, transform, (row, col - 0.5), (row, col + 0.5))
    step_y = _distance(geodetic, transform, (row - 0.5, col), (row + 0.5, col))
    return step_x, step_y


def _skew_at(geodetic: Geodetic, transform: tuple[float, ...], row: FloatArray, col: FloatArray) -> FloatArray:
    """Return half the difference of the two diagonals of a cell: zero where the map axes cross at right angles."""
    falling = _distance(geodetic, transform, (row - 0.5, col - 0.5), (row + 0.5, col + 0.5))
    rising = _distance(geodetic, transform, (row + 0.5, col - 0.5), (row - 0.5, col + 0.5))
    return 0.5 * (falling - rising)


def _distance(
    geodetic: Geodetic,
    transform: tuple[float, ...],
    start: tuple[FloatArray, FloatArray],
    end: tuple[FloatArray, FloatArray],
) -> FloatArray:
    a, _, c, _, e, f = transform
    from_lon, from_lat = geodetic.degrees(a * start[1] + c, e * start[0] + f)
    to_lon, to_lat = geodetic.degrees(a * end[1] + c, e * end[0] + f)
    usable = np.isfinite(from_lat) & np.isfinite(to_lat) & (np.abs(from_lat) <= 90.0) & (np.abs(to_lat) <= 90.0)
    length = np.full(from_lat.shape, np.nan)
    _, _, length[usable] = geodetic.geod.inv(from_lon[usable], from_lat[usable], to_lon[usable], to_lat[usable])
    return length
