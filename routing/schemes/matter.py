"""What is judged: one scheme, and what the ground and the user say of it."""

from __future__ import annotations

from dataclasses import dataclass

from routing.records import Appraisal, Cost, Pipe, SurfaceKind
from routing.schemes.appraising import Conditions

#: What rounding may leave of a limit that is just kept: in m, and relative.
ROUNDING_M = 1e-6
ROUNDING = 1e-6

PRACTICE = "common practice"


@dataclass(frozen=True, slots=True)
class Matter:
    """What is judged: a pipe, its appraisal and cost, and what the ground and the user say.

    ``barrier_cells`` is how many cells wide the ground above the present level is at the crest;
    ``required_m3s`` and ``budget`` are ``None`` where nothing is asked.
    """

    pipe: Pipe
    count: int
    appraisal: Appraisal
    cost: Cost
    conditions: Conditions
    required_m3s: float | None
    budget: float | None
    vertical_error_m: float | None
    surface: SurfaceKind
    barrier_cells: float
