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


@dataclass(frozen=True, slots=True)
class Sampled:
    """A path that a weighted search found, and the smallest weight that found it."""

    weight: float
    path: PathEdges


def sampled_paths(bench: Bench, lead: Candidate, cost_factor: FloatArray | None) -> tuple[Sampled, ...]:
    """Sweep the weights for the pipe and duty of a leading candidate; each different path is told once.

    The suction limit that ground is held against is the ceiling at the intake: the highest that the ceiling is
    anywhere. Where zones make a metre dearer, that multiplies its weight.
    """
    duty = lead.appraisal.duty_m3s or 0.0
    limit = bench.limit_at(lead.pipe, duty)
    level = min(limit.ceiling_level_m, limit.cap_level_m)
    found: dict[bytes, Sampled] = {}
    for weight in WEIGHTS_PER_M:
        weights = height_penalty(bench.scene.grid.level, level, weight)
        if cost_factor is not None:
            weights = weights * cost_factor
        best = weighted_path(bench.job, np.ascontiguousarray(weights))
        if best is not None:
            found.setdefault(best[0].cells.tobytes(), Sampled(weight, best[0]))
    return tuple(found.values())
