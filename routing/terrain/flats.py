"""The flat surface at the intake: what the DEM shows of the water on the day of its survey."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from routing.records import BoolArray, Cell, Terrain
from routing.terrain.shores import cells_area_m2

_EIGHT = np.ones((3, 3), dtype=np.bool_)
_FLOAT_TOLERANCE_M = 0.02
_LEAST_CELLS = 9
_MOST_LOWER_SHARE = 0.1


@dataclass(frozen=True, slots=True)
class FlatWater:
    """A flat surface around the intake.

    Attributes
    ----------
    level_m
        Median level of its cells.
    cells
        How many cells it has.
    area_m2
        Their ground area.
    """

    level_m: float
    cells: int
    area_m2: float


def flat_water(terrain: Terrain, cell: Cell, tolerance_m: float | None = None) -> FlatWater | None:
    """Find the flat surface at the intake, if there is one.

    Flat are the cells joined to the intake, side or corner, whose level is the intake's within the tolerance.
    They count as water if there are nine or more and the ground around them rises: at most a tenth of their
    ring lies lower (a dam's foot, say). On a slope, a strip of equal level has as much ground below as above.

    Parameters
    ----------
    terrain
        Ground of the window.
    cell
        Cell of the intake; if it holds no data, the nearest cell that does stands for it.
    tolerance_m
        ``None``: 0.02 m for levels stored as floating-point numbers, equal levels for whole numbers.

    Returns
    -------
    FlatWater or None
    """
    from scipy import ndimage  # noqa: PLC0415

    whole_numbers = np.dtype(terrain.facts.dtype).kind in "iu"
    if tolerance_m is None:
        tolerance_m = 1e-6 if whole_numbers else _FLOAT_TOLERANCE_M
    seed = nearest_valid(terrain, cell)
    if seed is None:
        return None
    level = terrain.elevation_m[seed.row, seed.col]
    like = terrain.valid & (np.abs(terrain.elevation_m - level) <= tolerance_m)
    labels, _ = ndimage.label(like, structure=_EIGHT)
    flat = labels == labels[seed.row, seed.col]
    count = int(np.count_nonzero(flat))
    if count < _LEAST_CELLS or _lower_share(terrain, flat, level - tolerance_m) > _MOST_LOWER_SHARE:
        return None
    return FlatWater(float(np.median(terrain.elevation_m[flat])), count, cells_area_m2(terrain, flat))


def nearest_valid(terrain: Terrain, cell: Cell) -> Cell | None:
    """Return the cell itself if it holds data, else the nearest (on the ground) that does, else ``None``.

    Parameters
    ----------
    terrain
        Ground of the window.
    cell
        Cell of the window.
    """
    if terrain.valid[cell.row, cell.col]:
        return cell
    rows, cols = np.nonzero(terrain.valid)
    if rows.size == 0:
        return None
    across = (rows - cell.row) * terrain.step_y_m[cell.row]
    along = (cols - cell.col) * terrain.step_x_m[cell.row]
    best = int(np.argmin(across**2 + along**2))
    return Cell(int(rows[best]), int(cols[best]))


def _lower_share(terrain: Terrain, flat: BoolArray, below_m: float) -> float:
    from scipy import ndimage  # noqa: PLC0415

    ring = ndimage.binary_dilation(flat, structure=_EIGHT) & ~flat & terrain.valid
    if not ring.any():
        return 0.0
    return float(np.mean(terrain.elevation_m[ring] < below_m))
