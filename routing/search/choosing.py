"""Searches over searches: the largest discharge, the shortest route for a duty, the least raise of the ceiling.

All rest on one fact: what a discharge allows, a smaller one allows too. So a route that is found lifts what is
known from below by its own figure, and a search that finds none lowers it from above; two or three searches
past the first are usually enough.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from routing.records import BoolArray
from routing.search.grid import Grid
from routing.search.paths import PathEdges, may_escape, path_edges, raise_needed
from routing.search.reaching import CellLike, Limitation, Reach, Tick, search_grid
from routing.search.widest import bound_by_cells, compact, spread

# Below this share of what the fall alone would drive, a route counts as carrying nothing.
_NO_FLOW = 1e-6
# A bracket this narrow is closed sooner by probes than by cells.
_COARSE = 0.01


@dataclass(frozen=True, slots=True)
class Job:
    """One search problem: from the source to the goal on a grid.

    ``band`` marks the cells from which a path may leave the window (see `border_band`).
    """

    grid: Grid
    source: CellLike
    goal: CellLike
    band: BoolArray
    tick: Tick | None = None


@dataclass(frozen=True, slots=True)
class Flow:
    """What a discharge means for the search, for one pipe at one state of the levels.

    Attributes
    ----------
    limit_at
        The limitation of a discharge (0: still water).
    carried_by
        The largest discharge that a path allows, by its edges.
    carried_at_length
        The largest discharge that the fall drives through a length in m, suction left aside.
    """

    limit_at: Callable[[float], Limitation]
    carried_by: Callable[[PathEdges], float]
    carried_at_length: Callable[[float], float]


@dataclass(frozen=True, slots=True)
class Found:
    """A path, and how good it is known to be.

    Attributes
    ----------
    path
        The path, or ``None`` where there is none.
    low, high
        Bracket of the best figure of any path (discharge in m3/s, or raise in m); both are the length in m for
        a shortest path.
    proven_outside
        Whether no path through ground outside the window could do better.
    searches
        Searches run.
    shortest
        For a largest discharge: the shortest of all paths that allow any flow, proven outside as ``shortest_proven``
        says.
    """

    path: PathEdges | None
    low: float
    high: float
    proven_outside: bool
    searches: int
    shortest: PathEdges | None = None
    shortest_proven: bool = False


@dataclass(frozen=True, slots=True)
class _Bracket:
    """The best path so far, what it carries, what no path can exceed, and whether that holds outside the window.

    ``shortest`` is the shortest path under the ceiling of still water, and ``shortest_proven`` whether none outside is
    shorter.
    """

    path: PathEdges | None
    low: float
    high: float
    proven: bool
    searches: int
    shortest: PathEdges | None = None
    shortest_proven: bool = False

    def closed(self, tolerance: float) -> bool:
        return self.high <= self.low * (1.0 + tolerance)

    def with_path(self, path: PathEdges, low: float) -> _Bracket:
        return replace(self, path=path, low=low) if low > self.low else self

    def below(self, high: float, *, proven: bool) -> _Bracket:
        return replace(self, high=high, proven=proven)


def _probe(job: Job, limitation: Limitation) -> tuple[PathEdges | None, bool]:
    """Search once; return the shortest path and whether it is (or its absence is) proven outside the window."""
    limited = replace(limitation, goal=job.goal)
    found: Reach = search_grid(job.grid, [job.source], limited, tick=job.tick)
    length = float(found.length_m[job.goal])
    if not np.isfinite(length):
        return None, not may_escape(job.grid, found, job.band, job.goal, limitation.longest_m)
    path = path_edges(job.grid, found.path_to(*job.goal), limitation)
    return path, not may_escape(job.grid, found, job.band, job.goal, length)


def shortest_path(job: Job, limitation: Limitation) -> Found:
    """Find the shortest path that keeps to a limitation.

    Returns
    -------
    Found
        With ``path`` ``None`` where no path does.
    """
    path, proven = _probe(job, limitation)
    length = path.length_m if path is not None else np.inf
    return Found(path, length, length, proven, 1)


def _carried(job: Job, flow: Flow, way: NDArray[np.intp], limitation: Limitation) -> tuple[PathEdges, float]:
    path = path_edges(job.grid, way, limitation)
    return path, flow.carried_by(path)


def _first_bracket(job: Job, flow: Flow) -> _Bracket:
    """Search under the ceiling of still water, and where suction governs narrow the bracket down by cells."""
    still = flow.limit_at(0.0)
    forward = search_grid(job.grid, [job.source], still, tick=job.tick)
    length = float(forward.length_m[job.goal])
    proven = not may_escape(job.grid, forward, job.band, job.goal, length)
    if not np.isfinite(length):
        return _Bracket(None, 0.0, 0.0, proven, 1)
    path, low = _carried(job, flow, forward.path_to(*job.goal), still)
    bracket = _Bracket(path, low, max(low, flow.carried_at_length(length)), proven, 1, path, proven)
    if bracket.closed(_COARSE):
        return bracket
    forward = compact(forward)
    level = replace(still, ceiling_gradient=0.0)  # a ceiling that falls on the way out would rise on the way back
    backward = compact(search_grid(job.grid, [job.goal], level, tick=job.tick))
    bracket = replace(bracket, searches=2)
    figures = spread(bracket.low, bracket.high)
    limits = [flow.limit_at(figure) for figure in figures]
    bound = bound_by_cells(job.grid, (job.source, job.goal), (forward, backward), limits, figures, job.tick)
    if bound.way is not None:
        bracket = bracket.with_path(*_carried(job, flow, bound.way, still))
    if bound.high >= bracket.high:
        return bracket
    longest = flow.limit_at(bound.high).longest_m
    return bracket.below(bound.high, proven=not may_escape(job.grid, forward, job.band, job.goal, longest))


def largest_discharge(job: Job, flow: Flow, *, tolerance: float = 1e-3) -> Found:
    """Find a path that carries the largest discharge, within ``tolerance`` of the best of any path.

    The first search is under the ceiling of still water: a path for any discharge also keeps to that, so none
    is shorter than the one it finds, and the fall carries no more than it does at that length. Where that
    path itself carries as much, energy governs and the search is over. Else the cells bound what any path carries
    (see `bound_by_cells`), and probes just above the best known path ("is there any better?") take turns with probes
    half way up.

    Returns
    -------
    Found
        ``low`` is what the path carries by the search's own rules, ``high`` what no path can exceed. Where even
        still water finds no path, ``path`` is ``None`` and both are 0.
    """
    bracket = _first_bracket(job, flow)
    nothing = 0.0 if bracket.shortest is None else _NO_FLOW * flow.carried_at_length(bracket.shortest.length_m)
    ask_for_better = bracket.low > 0.0
    while not bracket.closed(tolerance) and bracket.high > nothing:
        low, high = bracket.low, bracket.high
        discharge = low * (1.0 + tolerance) if ask_for_better else 0.5 * (low + high)
        path, outside = _probe(job, flow.limit_at(discharge))
        bracket = replace(bracket, searches=bracket.searches + 1)
        if path is None:
            bracket = bracket.below(discharge, proven=outside)
            ask_for_better = False
            continue
        # The search itself let the path through at this discharge: rounding in the figure may not take that back,
        # or the bracket would never close.
        bracket = bracket.with_path(path, max(flow.carried_by(path), discharge))
        at_length = flow.carried_at_length(path.length_m)
        if at_length < bracket.high:
            bracket = bracket.below(at_length, proven=outside)
        ask_for_better = not ask_for_better
    above = bracket.low * (1.0 + tolerance)
    if not bracket.proven and above > bracket.high:  # the ceiling of a little more may close the ways out of the window
        path, outside = _probe(job, flow.limit_at(above))
        bracket = replace(bracket, searches=bracket.searches + 1)
        if path is None and outside:
            bracket = bracket.below(above, proven=True)
    high = max(bracket.low, bracket.high)
    return Found(
        bracket.path, bracket.low, high, bracket.proven, bracket.searches, bracket.shortest, bracket.shortest_proven
    )


def least_raise(job: Job, limitation: Limitation, *, tolerance_m: float = 0.002) -> Found:
    """Find the least uniform raise of the ceiling that makes a path, and that path.

    Returns
    -------
    Found
        ``high`` is the raise (in m) that the path needs, 0 where it needs none; ``low`` a raise below which there is
        no path. ``path`` is ``None`` where no raise helps: no way joins the ends within ``longest_m``.
    """
    open_sky = replace(limitation, ceiling_level_m=np.inf, ceiling_gradient=0.0, cap_level_m=np.inf)
    best, outside = _probe(job, open_sky)
    searches = 1
    if best is None:
        return Found(None, np.inf, np.inf, outside, searches)
    high = raise_needed(job.grid, best.cells, limitation)
    low, proven = 0.0, True  # nothing needs less than none
    ask_for_better = False
    while high - low > tolerance_m:
        lift = high - tolerance_m if ask_for_better else 0.5 * (low + high)
        path, outside = _probe(job, limitation.raised(lift))
        searches += 1
        if path is None:
            low, proven = lift, outside
            ask_for_better = False
        else:
            # No more than it was let through at, whatever rounding says.
            best, high = path, min(lift, raise_needed(job.grid, path.cells, limitation))
            ask_for_better = not ask_for_better
    return Found(best, low, high, proven, searches)
