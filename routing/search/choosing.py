"""Searches over searches: the largest discharge, the shortest route for a duty, the least raise of the ceiling.

All rest on one fact: what a discharge allows, a smaller one allows too. So a route that is found lifts what is
known from below by its own figure, and a search that finds none lowers it from above; two or three searches
past the first are usually enough.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from routing.search.ends import Job, arrival, most_by_energy, search_back, search_job
from routing.search.paths import PathEdges, may_escape, path_edges, raise_needed, with_highest
from routing.search.reaching import Limitation, Reach
from routing.search.widest import bound_by_cells, compact, spread

# Below this share of what the fall alone would drive, a route counts as carrying nothing.
_NO_FLOW = 1e-6
# A bracket this narrow is closed sooner by probes than by cells.
_COARSE = 0.01
# Each round brings the highest places some ten times closer, in metres; what is then left is within rounding.
_TOUCHES = 20
_HAIR_M = 1e-9


@dataclass(frozen=True, slots=True)
class Flow:
    """What a discharge means for the search, for one pipe at one state of the levels.

    Attributes
    ----------
    limit_at
        The limitation of a discharge (0: still water).
    carried_by
        The largest discharge that a path allows, by the places of its edges that it holds. Between those of the rule
        along edges ground can stand a little higher (centimetres on large cells), so what the search lets through may
        be less, by some 1e-4 of it; `largest_discharge` looks at the very highest place.
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


@dataclass(frozen=True, slots=True)
class _Answer:
    """What one search says: the path or none, whether that is proven outside, and the shortest length to any goal."""

    path: PathEdges | None
    proven: bool
    shortest_m: float
    found: Reach


def _escapes(job: Job, found: Reach, longest_m: float) -> bool:
    goals = None if job.goals_outside else job.goals
    return may_escape(job.grid, found, job.band, goals, longest_m)


def _answer(job: Job, found: Reach, limitation: Limitation, *, most_slack: bool) -> _Answer:
    """Read the answer off a field."""
    end = arrival(job, found, limitation, most_slack=most_slack)
    if end is None:
        return _Answer(None, not _escapes(job, found, limitation.longest_m), np.inf, found)
    cells = found.path_to(*end.goal)
    start = float(found.length_m[cells[0, 0], cells[0, 1]])
    path = path_edges(job.grid, cells, limitation, start)
    return _Answer(path, not _escapes(job, found, end.shortest_m), end.shortest_m, found)


def _probe(job: Job, limitation: Limitation, *, most_slack: bool = False) -> _Answer:
    """Search once; return the path (the shortest, or the one with most head to spare) or its absence."""
    return _answer(job, search_job(job, limitation), limitation, most_slack=most_slack)


def _most(job: Job, flow: Flow, answer: _Answer) -> float:
    """Return what the fall drives at most by any path no shorter than those of an answer."""
    most = flow.carried_at_length(answer.shortest_m)
    return most if job.open_ends is None else most_by_energy(job, answer.found, flow.limit_at, most)


def shortest_path(job: Job, limitation: Limitation) -> Found:
    """Find the shortest path that keeps to a limitation.

    Returns
    -------
    Found
        With ``path`` ``None`` where no path does.
    """
    answer = _probe(job, limitation)
    return Found(answer.path, answer.shortest_m, answer.shortest_m, answer.proven, 1)


def _figure(job: Job, flow: Flow, path: PathEdges) -> float:
    """Return what a path carries: by its samples, then by the highest place of each edge under the ceiling found."""
    figure = flow.carried_by(path)
    for _ in range(_TOUCHES):
        limitation = flow.limit_at(figure)
        if raise_needed(job.grid, path, limitation) <= _HAIR_M:
            break
        figure = flow.carried_by(with_highest(job.grid, path, limitation))
    return figure


def _first_bracket(job: Job, flow: Flow) -> _Bracket:
    """Search under the ceiling of still water, and where suction governs narrow the bracket down by cells."""
    still = flow.limit_at(0.0)
    answer = _answer(job, search_job(job, still, whole=True), still, most_slack=False)
    if answer.path is None:
        return _Bracket(None, 0.0, 0.0, answer.proven, 1)
    low = _figure(job, flow, answer.path)
    high = max(low, _most(job, flow, answer))
    bracket = _Bracket(answer.path, low, high, answer.proven, 1, answer.path, answer.proven)
    if bracket.closed(_COARSE) or job.open_ends is not None:
        return bracket
    forward = compact(answer.found)
    level = replace(still, ceiling_gradient=0.0)  # a ceiling that falls on the way out would rise on the way back
    backward = compact(search_back(job, level))
    bracket = replace(bracket, searches=2)
    figures = spread(bracket.low, bracket.high)
    limits = [flow.limit_at(figure) for figure in figures]
    bound = bound_by_cells(job.grid, (job.source, job.goal), (forward, backward), limits, figures, job.tick)
    if bound.way is not None:
        path = path_edges(job.grid, bound.way, still)
        bracket = bracket.with_path(path, _figure(job, flow, path))
    if bound.high >= bracket.high:
        return bracket
    longest = flow.limit_at(bound.high).longest_m
    return bracket.below(bound.high, proven=not _escapes(job, forward, longest))


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
        still water finds no path, ``path`` is ``None`` and both are 0. At ``low`` itself rounding may hide the path
        from a further search; a billionth less finds it.
    """
    bracket = _first_bracket(job, flow)
    nothing = 0.0 if bracket.shortest is None else _NO_FLOW * flow.carried_at_length(bracket.shortest.length_m)
    ask_for_better = bracket.low > 0.0
    while not bracket.closed(tolerance) and bracket.high > nothing:
        low, high = bracket.low, bracket.high
        discharge = low * (1.0 + tolerance) if ask_for_better else 0.5 * (low + high)
        answer = _probe(job, flow.limit_at(discharge), most_slack=True)
        bracket = replace(bracket, searches=bracket.searches + 1)
        if answer.path is None:
            bracket = bracket.below(discharge, proven=answer.proven)
            ask_for_better = False
            continue
        # The search itself let the path through at this discharge: rounding in the figure may not take that back,
        # or the bracket would never close.
        bracket = bracket.with_path(answer.path, max(_figure(job, flow, answer.path), discharge))
        most = _most(job, flow, answer)
        if most < bracket.high:
            bracket = bracket.below(most, proven=answer.proven)
        ask_for_better = not ask_for_better
    above = bracket.low * (1.0 + tolerance)
    if not bracket.proven and above > bracket.high:  # the ceiling of a little more may close the ways out of the window
        answer = _probe(job, flow.limit_at(above))
        bracket = replace(bracket, searches=bracket.searches + 1)
        if answer.path is None and answer.proven:
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
    open_sky = replace(limitation, ceiling_level_m=np.inf, cap_level_m=np.inf)
    first = _probe(job, open_sky)
    best, searches = first.path, 1
    if best is None:
        return Found(None, np.inf, np.inf, first.proven, searches)
    high = raise_needed(job.grid, best, limitation)
    low, proven = 0.0, True  # nothing needs less than none
    ask_for_better = False
    while high - low > tolerance_m:
        lift = high - tolerance_m if ask_for_better else 0.5 * (low + high)
        answer = _probe(job, limitation.raised(lift))
        searches += 1
        if answer.path is None:
            low, proven = lift, answer.proven
            ask_for_better = False
        else:
            # No more than it was let through at, whatever rounding says.
            best, high = answer.path, min(lift, raise_needed(job.grid, answer.path, limitation))
            ask_for_better = not ask_for_better
    return Found(best, low, high, proven, searches)
