"""Candidates by weights: length plus a penalty for ground above the suction limit, swept, beside the exact answer."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from routing.planning.benches import Bench
from routing.planning.candidates import Candidate
from routing.records import FloatArray
from routing.search import PathEdges, height_penalty, weighted_path

#: Metres of route that one metre of route over ground one metre too high counts for.
WEIGHTS_PER_M = (0.0, 0.1, 0.3, 1.0, 3.0, 10.0, 30.0, 100.0)
_HAIR = 1e-12


@dataclass(frozen=True, slots=True)
class Sampled:
    """A path that a weighted search found, and the smallest weight that found it."""

    weight: float
    path: PathEdges


def _least_chainage_m(bench: Bench) -> FloatArray:
    """Straight distance of each cell from the intake, 0 where it might lie anywhere."""
    grid, job = bench.scene.grid, bench.job
    if job.open_ends is not None:
        return np.zeros(grid.shape)
    rows, cols = np.indices(grid.shape, sparse=True)
    across, down = (cols - job.source[1]) * grid.step_x_m.min(), (rows - job.source[0]) * grid.step_y_m.min()
    far: FloatArray = np.hypot(across, down)
    return far


def sampled_paths(bench: Bench, lead: Candidate, cost_factor: FloatArray | None) -> tuple[Sampled, ...]:
    """Sweep the weights for the pipe and duty of a leading candidate; each different path is told once.

    The suction limit that ground is held against is the ceiling at the straight distance from the intake, which no
    chainage is below: so ground that is told too high is too high for any route. Where zones make a metre dearer, that
    multiplies its weight.
    """
    duty = lead.appraisal.duty_m3s or 0.0
    limit = bench.limit_at(lead.pipe, duty)
    falling = limit.ceiling_level_m - limit.ceiling_gradient * _least_chainage_m(bench)
    level = np.minimum(falling, limit.cap_level_m)
    found: dict[bytes, Sampled] = {}
    last = 0.0
    for weight in WEIGHTS_PER_M:
        weights = height_penalty(bench.scene.grid.level, level, weight)
        if cost_factor is not None:
            weights = weights * cost_factor
        best = weighted_path(bench.job, np.ascontiguousarray(weights))
        if best is None:
            break  # no weight joins what no way joins
        path, cost = best
        if cost <= last * (1.0 + _HAIR):
            break  # it pays no penalty, so it is the best for every larger weight too
        last = cost
        found.setdefault(path.cells.tobytes(), Sampled(weight, path))
    return tuple(found.values())
