"""How wide the barrier is on the DEM where a route is highest: a thin one may be shown too low."""

from __future__ import annotations

import numpy as np

from routing.planning.scenes import Scene
from routing.records import BoolArray, Route
from routing.terrain import rowcol_of

#: Further than this many cells the width is not looked for: no DEM cuts down so wide a barrier.
FAR_CELLS = 40


def _nearest(cells: BoolArray, row: float, col: float) -> float:
    """Distance in cells to the nearest of some cells; ``FAR_CELLS`` where there is none."""
    rows, cols = np.nonzero(cells)
    if rows.size == 0:
        return float(FAR_CELLS)
    return float(min(np.sqrt((rows - row) ** 2 + (cols - col) ** 2).min(), FAR_CELLS))


def barrier_cells(scene: Scene, route: Route) -> float:
    """Return how many cells wide the ground above the present level is, straight across the route's highest place.

    It is measured from there to the nearest water on the one side and to the nearest ground at or below the present
    level on the other, so a route that runs along a thin bank does not make it wide.
    """
    crest = route.crest_index
    if route.ground_m[crest] <= scene.present_m:
        return 0.0
    place = rowcol_of(scene.terrain, route.x[crest], route.y[crest])
    row, col = (float(value) for value in place)
    top, left = max(int(row) - FAR_CELLS, 0), max(int(col) - FAR_CELLS, 0)
    part = (slice(top, int(row) + FAR_CELLS + 1), slice(left, int(col) + FAR_CELLS + 1))
    water = scene.body.cells[part]
    low = scene.terrain.valid[part] & (scene.terrain.elevation_m[part] <= scene.present_m) & ~water
    across = _nearest(water, row - top, col - left) + _nearest(low, row - top, col - left)
    return max(across - 1.0, 0.0)  # the two cells at the ends are not part of the barrier
