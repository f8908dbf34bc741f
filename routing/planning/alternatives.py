"""Other ways over: a route over each of the best crossings, each searched again at its own chainage.

The crossings of the routes that are known already are always among them.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from routing.planning.benches import Bench
from routing.planning.candidates import Candidate
from routing.records import Crossing, FloatArray, Route
from routing.search import (
    Divide,
    Job,
    Limitation,
    Pass,
    PathEdges,
    Reach,
    distinct_passes,
    find_divide,
    join_paths,
    path_edges,
    same_pass,
    search_back,
    search_job,
    search_on,
    with_barred,
)
from routing.terrain import xy_of

#: Routes over different crossings that are looked for.
WANTED = 3
# More places than are wanted are tried, since a way on from some may be closed.
_MOST_PASSES = 8
# The duty of a route that carries just it leaves no room for any other way: a little less is asked of the others.
_EASED = 0.995
#: Reserve missing that is worth telling: the largest discharge leaves none, give or take a rounding.
_TOLD_M = 0.001


@dataclass(frozen=True, slots=True)
class Way:
    """A crossing, and the path over it if one was looked for and found: none is where a known route takes it."""

    crossing: Crossing
    path: PathEdges | None


@dataclass(frozen=True, slots=True)
class Places:
    """The divide, the lengths over it, and the crossings of their own there, the shortest first."""

    divide: Divide
    total_m: FloatArray
    passes: tuple[Pass, ...]

    def of_route(self, route: Route) -> Pass:
        """Return the crossing that a route takes; a new one where it takes none of these."""
        cell = self._step_over(route.cells)
        place = Pass(cell, float(self.divide.level_m[cell]), route.proof.graph_length_m)
        divide = self.divide
        known = same_pass(divide.cells, self.total_m, divide.level_m, self.passes, place, step_m=divide.step_m)
        return known or place

    def _step_over(self, cells: NDArray[np.intp]) -> tuple[int, int]:
        """Return the cell of the divide that is nearest to where a path leaves the water's side for good."""
        last = self._last(cells)
        line = np.argwhere(self.divide.cells)
        row, col = line[int(np.argmin(np.sum((line - cells[last]) ** 2, axis=1)))]
        return int(row), int(col)

    def _last(self, cells: NDArray[np.intp]) -> int:
        """Return the position of the last cell of a path on the water's side."""
        return int(np.flatnonzero(self.divide.water_side[cells[:, 0], cells[:, 1]])[-1])

    def seen_on(self, route: Route, place: Pass, level_m: FloatArray) -> Pass:
        """Return a crossing where a route that takes it really crosses: at the higher cell of its step over the divide.

        A crossing is a stretch of the divide, and its best place may lie some cells beside the route.
        """
        last = self._last(route.cells)
        step = [(int(row), int(col)) for row, col in route.cells[last : last + 2]]
        cell = max(step, key=lambda one: level_m[one])
        return replace(place, cell=cell, level_m=float(level_m[cell]), length_m=route.proof.graph_length_m)

    def with_routes(self, routes: Iterable[Route]) -> tuple[Places, dict[str, Pass]]:
        """Return the places with the crossings of known routes among them, and the crossing of each route by name."""
        places, taken = self, {}
        for route in routes:
            if route.name not in taken:
                place = places.of_route(route)
                taken[route.name] = place
                if place not in places.passes:
                    passes = sorted((*places.passes, place), key=lambda one: one.length_m)
                    places = replace(places, passes=tuple(passes))
        return places, taken


@dataclass(frozen=True, slots=True)
class Ways:
    """The crossings found, best first, the names of those that known routes take, and why there are not more."""

    ways: tuple[Way, ...]
    taken: dict[str, str]
    note: str


def _limitation(bench: Bench, lead: Candidate) -> Limitation:
    """Return what the other ways must keep to: what the lead runs at; where that breaks the limit, a raised ceiling."""
    run = lead.appraisal.duty
    discharge = 0.0 if lead.appraisal.duty_m3s is None else run.discharge_m3s
    limitation = bench.limit_at(lead.pipe, discharge * _EASED)
    missing = -min(run.reserve_left_m, 0.0)
    return limitation.raised(missing * 1.001 + 0.01) if missing > 0.0 else limitation


def _over(job: Job, found: Reach, place: Pass, limitation: Limitation) -> PathEdges | None:
    """Search on from a place on the divide at its own chainage; return the whole path."""
    on = search_on(job, place.cell, float(found.length_m[place.cell]), limitation)
    if on is None:
        return None
    there = found.path_to(*place.cell)
    cells = join_paths(there, on)
    start = float(found.length_m[there[0, 0], there[0, 1]])
    return None if cells is None else path_edges(job.grid, cells, limitation, start)


def _crossing(bench: Bench, place: Pass, name: str, *, used: bool) -> Crossing:
    x, y = xy_of(bench.scene.terrain, place.cell[0], place.cell[1])
    lift = place.level_m - bench.setting.lowest.water_m
    note = "a route over it was appraised" if used else "no way on from it keeps to the limits"
    return Crossing(name, float(x), float(y), place.level_m, place.length_m, lift, used, note)


def _why(found: int, tried: int, *, missing: bool) -> str:
    """Say why there are not more ways; where all miss the suction limit, none of them is said to be crossable."""
    if found >= WANTED:
        return f"{found} ways over the divide between water and outlet are places of their own."
    if tried > found:
        return (
            f"{found} of {tried} places on the divide have a route: from the others no way on keeps to the suction "
            "limit and the fall."
        )
    if found == 0:
        return "No place on the divide can be crossed under the suction limit."
    places = "1 place" if found == 1 else f"{found} places"
    if missing:
        return (
            f"{places} on the divide may serve once what is missing is made up: no other is then within the suction "
            "limit and parted from the better ones by 5 % more length or half a metre more lift."
        )
    return (
        f"{places} on the divide can be crossed: no other keeps to the suction limit and is parted from the better "
        "ones by 5 % more length or half a metre more lift."
    )


def other_ways(bench: Bench, lead: Candidate, known: Sequence[Candidate]) -> Ways:
    """Find ways over different crossings: those of the known candidates, and more up to three.

    Lengths from the intake under the ceiling, and to the outlet, for the pipe and duty of a leading candidate, rank the
    places along the divide; from each that is a crossing of its own, and that no candidate takes, the search goes on at
    the chainage that it is reached at.
    """
    job, grid = bench.job, bench.scene.grid
    limitation = _limitation(bench, lead)
    outlet = np.zeros(grid.shape, dtype=np.bool_)
    outlet[job.goals[:, 0], job.goals[:, 1]] = True
    divide = find_divide(grid, bench.scene.body.cells, outlet)
    # Each part of a way keeps to its own side: a way to one place over another is no way of its own.
    near = replace(job, grid=with_barred(grid, ~divide.water_side))
    far = replace(job, grid=with_barred(grid, ~(divide.outlet_side | divide.cells)))
    there = search_job(near, limitation, whole=True)
    # Seen from the outlet the ceiling would rise with length: a level one keeps these lengths lower bounds.
    back = search_back(far, replace(limitation, ceiling_gradient=0.0, along=False))
    total = there.length_m + back.length_m
    total[total > limitation.longest_m] = np.inf
    passes = distinct_passes(divide.cells, total, divide.level_m, step_m=divide.step_m, most=_MOST_PASSES)
    found = Places(divide, total, tuple(passes))
    places, taken = found.with_routes(one.route for one in known)
    wanted, named = WANTED - len(set(taken.values())), dict[Pass, str]()
    by_name = {one.route.name: one.route for one in reversed(known)}
    takers = {place: by_name[route] for route, place in reversed(taken.items())}
    ways: list[Way] = []
    for place in places.passes:
        used = place in taken.values()
        if not used and wanted <= 0:
            continue
        path = None if used else _over(far, there, place, limitation)
        wanted -= path is not None
        named[place] = f"C{len(ways) + 1}"
        told = places.seen_on(takers[place], place, grid.level) if used else place
        ways.append(Way(_crossing(bench, told, named[place], used=used or path is not None), path))
    names = {route: named[place] for route, place in taken.items()}
    missing = lead.appraisal.duty.reserve_left_m < -_TOLD_M
    return Ways(tuple(ways), names, _why(sum(way.crossing.used for way in ways), len(ways), missing=missing))
