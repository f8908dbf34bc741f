"""The toe of the barrier: where the ground beyond it first falls back to the present level."""

from __future__ import annotations

import numpy as np

from routing.records import BoolArray, FloatArray, Terrain

_EIGHT = np.ones((3, 3), dtype=np.bool_)


def toe_cells(terrain: Terrain, water: BoolArray, present_m: float) -> BoolArray:
    """Return the cells of the toe.

    For each cell of the shore it is the dry cell at or below the present level that lies nearest, straight across the
    barrier. So the toe follows the barrier, and not the hillsides further down the valley.

    Parameters
    ----------
    terrain
        Ground of the window.
    water : (rows, cols) bool array
        Cells of the water body.
    present_m
        Present level.
    """
    from scipy import ndimage  # noqa: PLC0415 - slow to import, and seldom needed

    toe = np.zeros(terrain.shape, dtype=np.bool_)
    low = terrain.valid & (terrain.elevation_m <= present_m) & ~water
    if not low.any():
        return toe
    shore = water & ndimage.binary_dilation(~water, structure=_EIGHT)
    nearest = ndimage.distance_transform_edt(
        ~low, sampling=_steps(terrain), return_distances=False, return_indices=True
    )
    toe[nearest[0][shore], nearest[1][shore]] = True
    return toe


def toe_distance_m(terrain: Terrain, water: BoolArray, present_m: float) -> FloatArray:
    """Return how far each cell lies from the toe, from centre to centre on the map; ``inf`` where there is no toe.

    Where the ground steps of the rows differ the least of them are taken, so that no distance is told too long.

    Parameters
    ----------
    terrain, water, present_m
        As for `toe_cells`.
    """
    from scipy import ndimage  # noqa: PLC0415

    toe = toe_cells(terrain, water, present_m)
    if not toe.any():
        return np.full(terrain.shape, np.inf)
    distance: FloatArray = ndimage.distance_transform_edt(~toe, sampling=_steps(terrain))
    return distance


def _steps(terrain: Terrain) -> tuple[float, float]:
    return float(terrain.step_y_m.min()), float(terrain.step_x_m.min())
