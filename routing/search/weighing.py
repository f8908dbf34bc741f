"""Weighted searches: what a metre counts for differs from cell to cell. They explore; the ceiling decides.

"Length plus a penalty for ground above the suction limit" is no longer a question that shortest labels answer
exactly under a ceiling, since an arrival with more length may have cost less. So these paths are candidates, to be
appraised beside the exact answer.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from routing.records import FloatArray
from routing.search.ends import Job
from routing.search.grid import Grid, weighted_grid
from routing.search.paths import PathEdges, path_edges
from routing.search.reaching import Limitation, Reach, search_grid

_HOPELESS_M = 30.0


def weighted_path(job: Job, cell_weight: ArrayLike) -> tuple[PathEdges, float] | None:
    """Find the path with the least weighted length, ceilings left aside.

    Parameters
    ----------
    job
        The search problem; with open ends, length already behind a source counts once, and every goal alike.
    cell_weight : (rows, cols) array
        What a metre counts for in each cell, above 0.

    Returns
    -------
    PathEdges and its weighted length, or None
        ``None`` where no way joins the ends. The edges have true lengths.

    Raises
    ------
    InputError
        If the weights cannot be used.
    """
    grid, scale = weighted_grid(job.grid, cell_weight)
    found = _weighted_search(job, grid, scale)
    goals = job.goals
    costs = found.length_m[goals[:, 0], goals[:, 1]]
    best = int(np.argmin(costs))
    if not np.isfinite(costs[best]):
        return None
    cells = found.path_to(int(goals[best][0]), int(goals[best][1]))
    start = _start_length_m(job, cells[0])
    return path_edges(job.grid, cells, Limitation(along=True), start), float(costs[best]) * scale


def _weighted_search(job: Job, grid: Grid, scale: float) -> Reach:
    ends = job.open_ends
    if ends is None:
        return search_grid(grid, [job.source], Limitation(goal=job.goal), tick=job.tick)
    return search_grid(grid, ends.sources, Limitation(), start_length_m=ends.start_length_m / scale, tick=job.tick)


def _start_length_m(job: Job, cell: NDArray[np.intp]) -> float:
    """Return the length already behind a source."""
    if job.open_ends is None:
        return 0.0
    here = np.all(job.open_ends.sources == cell, axis=1)
    return float(job.open_ends.start_length_m[here].min())


def height_penalty(level_m: FloatArray, limit_m: FloatArray | float, weight_per_m: float) -> FloatArray:
    """Return weights that add ``weight_per_m`` to each metre of route for every metre of ground above a limit.

    No more than 30 m are counted: no siphon lifts so high, and the queue grows with the largest weight.
    """
    return 1.0 + weight_per_m * np.clip(level_m - limit_m, 0.0, _HOPELESS_M)
