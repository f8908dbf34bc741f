"""Ends of a search: one source and one goal, or many of each.

Many goals may receive at different levels. A discharge loses S (the gradient of its ceiling) of head per metre, so a
goal that receives higher by h may be reached at h / S less length: each goal has its own deadline.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from routing.errors import InputError, Problem
from routing.records import BoolArray, FloatArray
from routing.search.grid import Grid
from routing.search.reaching import CellLike, Limitation, Reach, Tick, search_grid

_HALVINGS = 50


@dataclass(frozen=True, slots=True)
class OpenEnds:
    """Many sources and many goals.

    Attributes
    ----------
    sources : (n, 2) int array
        Cells where a path may start.
    start_length_m : (n,) array
        Length already behind each source.
    goals : (m, 2) int array
        Cells where a path may end.
    goal_above_m : (m,) array
        How much higher each goal receives than the lowest of them, whose energy limit limitations tell.
    more_outside
        Whether there may be goals outside the grid too.
    """

    sources: NDArray[np.intp]
    start_length_m: FloatArray
    goals: NDArray[np.intp]
    goal_above_m: FloatArray
    more_outside: bool = False

    def __post_init__(self) -> None:
        """Refuse tables that do not fit each other."""
        for cells, figures, name in (
            (self.sources, self.start_length_m, "sources"),
            (self.goals, self.goal_above_m, "goals"),
        ):
            if cells.ndim != 2 or cells.shape[1:] != (2,) or len(cells) == 0 or figures.shape != (len(cells),):
                found = f"cells {cells.shape}, figures {figures.shape}"
                raise InputError(Problem("ends must be cells with a figure each", found=found, key=name))
        if self.goal_above_m.min() != 0.0:
            raise InputError(
                Problem("goals count from the lowest", found=f"{self.goal_above_m.min()}", allowed="0", key="goals")
            )


@dataclass(frozen=True, slots=True)
class Job:
    """One search problem: from the source to the goal on a grid, or between many of them.

    ``band`` marks the cells from which a path may leave the window (see `border_band`). Moves that are blocked must be
    blocked in both directions, since lengths are also taken from the goals backwards. With ``open_ends``, source
    and goal are not used.
    """

    grid: Grid
    source: CellLike
    goal: CellLike
    band: BoolArray
    tick: Tick | None = None
    open_ends: OpenEnds | None = None

    @property
    def goals(self) -> NDArray[np.intp]:
        """Cells where a path may end."""
        return np.array([self.goal], dtype=np.intp) if self.open_ends is None else self.open_ends.goals

    @property
    def goals_outside(self) -> bool:
        """Whether there may be goals outside the grid too."""
        return self.open_ends is not None and self.open_ends.more_outside


@dataclass(frozen=True, slots=True)
class Arrival:
    """Where a search arrived: the goal taken, and the shortest length to any goal that may be used."""

    goal: CellLike
    shortest_m: float


def search_job(job: Job, limitation: Limitation, *, whole: bool = False) -> Reach:
    """Search for a job; with one goal, stop there unless the whole field is wanted."""
    ends = job.open_ends
    if ends is None:
        aimed = limitation if whole else replace(limitation, goal=job.goal)
        return search_grid(job.grid, [job.source], aimed, tick=job.tick)
    return search_grid(job.grid, ends.sources, limitation, start_length_m=ends.start_length_m, tick=job.tick)


def search_back(job: Job, limitation: Limitation) -> Reach:
    """Search from the goals."""
    return search_grid(job.grid, job.goals, limitation, tick=job.tick)


def _slack_m(job: Job, found: Reach, limitation: Limitation) -> FloatArray:
    """How much longer the way to each goal might be; negative or NaN where it may not be used."""
    goals = job.goals
    lengths = found.length_m[goals[:, 0], goals[:, 1]]
    longest = np.full(lengths.shape, limitation.longest_m)
    if job.open_ends is not None and limitation.ceiling_gradient > 0.0:
        longest = longest - job.open_ends.goal_above_m / limitation.ceiling_gradient
    with np.errstate(invalid="ignore"):
        slack: FloatArray = longest - lengths
    return slack


def arrival(job: Job, found: Reach, limitation: Limitation, *, most_slack: bool = False) -> Arrival | None:
    """Return the goal to take: the nearest, or the one with most head to spare; ``None`` where none may be used."""
    goals = job.goals
    lengths = found.length_m[goals[:, 0], goals[:, 1]]
    slack = _slack_m(job, found, limitation)
    usable = np.isfinite(lengths) & ~(slack < 0.0)
    if not usable.any():
        return None
    nearest = int(np.argmin(np.where(usable, lengths, np.inf)))
    best = int(np.argmax(np.where(usable, slack, -np.inf))) if most_slack and np.isfinite(slack[nearest]) else nearest
    return Arrival((int(goals[best][0]), int(goals[best][1])), float(lengths[nearest]))


def most_by_energy(job: Job, found: Reach, limit_at: Callable[[float], Limitation], upper: float) -> float:
    """Return a discharge that the fall drives to no goal, or to one by a hair, at the lengths found.

    ``upper`` is a discharge known to be a bound; it is halved towards the answer.
    """
    low, high = 0.0, upper
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        slack = _slack_m(job, found, limit_at(middle))
        if np.any(slack >= 0.0):
            low = middle
        else:
            high = middle
    return high


def search_on(job: Job, cell: CellLike, start_length_m: float, limitation: Limitation) -> NDArray[np.intp] | None:
    """Search on from a cell that was reached at some length; return the cells of the path to the nearest goal."""
    above = np.zeros(1) if job.open_ends is None else job.open_ends.goal_above_m
    here = OpenEnds(np.array([cell], dtype=np.intp), np.array([start_length_m]), job.goals, above, job.goals_outside)
    onward = replace(job, open_ends=here)
    found = search_job(onward, limitation)
    end = arrival(onward, found, limitation)
    return None if end is None else found.path_to(*end.goal)
