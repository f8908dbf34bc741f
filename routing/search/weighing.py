"""Weighted searches: what a metre counts for differs from cell to cell. They explore; the ceiling decides.

"Length plus a penalty for ground above the suction limit" is no longer a question that shortest labels answer
exactly under a ceiling, since an arrival with more length may have cost less. So these paths are candidates, to be
appraised beside the exact answer.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from routing.records import FloatArray
from routing.search.ends import Job
from routing.search.grid import weighted_grid
from routing.search.paths import PathEdges, path_edges
from routing.search.reaching import Limitation, search_grid

_HOPELESS_M = 30.0


def weighted_path(job: Job, cell_weight: ArrayLike) -> tuple[PathEdges, float] | None:
    """Find the path with the least weighted length, ceilings left aside.

    Parameters
    ----------
    job
        The search problem.
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
    found = search_grid(grid, [job.source], Limitation(goal=job.goal), tick=job.tick)
    cost = float(found.length_m[job.goal])
    if not np.isfinite(cost):
        return None
    return path_edges(job.grid, found.path_to(*job.goal), Limitation(along=True)), cost * scale


def height_penalty(level_m: FloatArray, limit_m: FloatArray | float, weight_per_m: float) -> FloatArray:
    """Return weights that add ``weight_per_m`` to each metre of route for every metre of ground above a limit.

    No more than 30 m are counted: no siphon lifts so high, and the queue grows with the largest weight.
    """
    return 1.0 + weight_per_m * np.clip(level_m - limit_m, 0.0, _HOPELESS_M)
