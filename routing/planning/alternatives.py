"""Other ways over: a route over each of the best crossings, each searched again at its own chainage."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from routing.planning.benches import Bench
from routing.planning.candidates import Candidate
from routing.records import Crossing
from routing.search import (
    Job,
    Limitation,
    Pass,
    PathEdges,
    Reach,
    distinct_passes,
    find_divide,
    join_paths,
    path_edges,
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


@dataclass(frozen=True, slots=True)
class Way:
    """A crossing, and the path over it if one was found."""

    crossing: Crossing
    path: PathEdges | None


@dataclass(frozen=True, slots=True)
class Ways:
    """The crossings found, best first, and why there are not more."""

    ways: tuple[Way, ...]
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


def _crossing(bench: Bench, place: Pass, name: str, path: PathEdges | None) -> Crossing:
    x, y = xy_of(bench.scene.terrain, place.cell[0], place.cell[1])
    lift = place.level_m - bench.setting.lowest.water_m
    note = "a route over it was appraised" if path is not None else "no way on from it keeps to the limits"
    return Crossing(name, float(x), float(y), place.level_m, place.length_m, lift, path is not None, note)


def _why(found: int, tried: int) -> str:
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
    return (
        f"{places} on the divide can be crossed: no other keeps to the suction limit and is parted from the better "
        "ones by 5 % more length or half a metre more lift."
    )


def other_ways(bench: Bench, lead: Candidate) -> Ways:
    """Find up to three ways over different crossings, for the pipe and duty of a leading candidate.

    The first crossing is that of the shortest way, the lead's own. Lengths from the intake under the ceiling, and to
    the outlet, rank the places along the divide; from each that is a crossing of its own the search goes on at the
    chainage that it is reached at.
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
    ways: list[Way] = []
    for place in distinct_passes(divide.cells, total, divide.level_m, _MOST_PASSES):
        path = _over(far, there, place, limitation)
        ways.append(Way(_crossing(bench, place, f"C{len(ways) + 1}", path), path))
        if sum(way.path is not None for way in ways) == WANTED:
            break
    return Ways(tuple(ways), _why(sum(way.path is not None for way in ways), len(ways)))
