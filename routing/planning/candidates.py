"""Which routes a pipe has: the one for the largest discharge, the shortest for each duty, or the least bad."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from routing.planning.benches import Bench
from routing.records import Appraisal, Pipe, Route, Shortfall
from routing.schemes import appraise
from routing.search import Found, Limitation, PathEdges, largest_discharge, least_raise, shortest_path

# Lengths on the graph are a little shorter than the sampled long section; a few rounds settle that.
_ROUNDS = 5
_SLACK_M = 1e-6
_HAIR = 1e-9
# Share of a discharge given up for a shorter route: at the very limit rounding may hide every path.
_EASE = 1e-5
#: Deepest trench that the site file takes (search.bed_offset_m).
DEEPEST_TRENCH_M = 10.0


@dataclass(frozen=True, slots=True)
class Candidate:
    """A route with a pipe and a count, appraised at its duty."""

    route: Route
    pipe: Pipe
    count: int
    appraisal: Appraisal


@dataclass(frozen=True, slots=True)
class Offer:
    """What one pipe has to offer: candidates, and what is missing where its demand cannot be met."""

    candidates: tuple[Candidate, ...]
    shortfall: Shortfall | None
    proven: bool


def make_candidate(
    bench: Bench, pipe: Pipe, path: PathEdges, best: Found, count: int, duty: float | None, claim: str = ""
) -> Candidate:
    """Appraise a path with a pipe at a duty.

    ``best`` tells the bracket of the largest discharge of any path, ``claim`` what else is proven of this one.
    """
    line = bench.section(path)
    appraisal = appraise(pipe, bench.profile(pipe, line), bench.conditions_at(path.cells), duty)
    return Candidate(bench.route(path, line, best, claim), pipe, count, appraisal)


def carries(appraisal: Appraisal, duty: float) -> bool:
    """Whether an appraisal, on the sampled long section, confirms a duty."""
    return appraisal.reserve_left_m >= -_SLACK_M and appraisal.largest.energy_discharge_m3s >= duty


def _missed_by(bench: Bench, pipe: Pipe, path: PathEdges, duty: float) -> float | None:
    """Return ``None`` where the sampled long section of a path carries a duty; else its length over the path's."""
    line = bench.section(path)
    appraisal = appraise(pipe, bench.profile(pipe, line), bench.conditions_at(path.cells), duty)
    if carries(appraisal, duty):
        return None
    return float(line.chainage_m[-1]) / path.length_m


def _path_for_duty(bench: Bench, pipe: Pipe, best: Found, duty: float) -> tuple[PathEdges | None, bool]:
    """Find the shortest path whose sampled long section carries a duty; tell whether it is proven outside."""
    if best.shortest is not None and _missed_by(bench, pipe, best.shortest, duty) is None:
        return best.shortest, best.shortest_proven  # none is shorter: no search is needed
    stretch, proven = 1.0, True
    for _ in range(_ROUNDS):
        found = shortest_path(bench.job, bench.limit_at(pipe, duty, stretch))
        proven = proven and found.proven_outside
        if found.path is None:
            break
        longer = _missed_by(bench, pipe, found.path, duty)
        if longer is None:
            return found.path, proven
        stretch = max(stretch * 1.001, longer * (1.0 + 1e-9))
    if best.path is not None and _missed_by(bench, pipe, best.path, duty) is None:
        return best.path, proven
    return None, proven


def _words(pipe: Pipe, duty: float | None) -> str:
    return f"{pipe.name}" if duty is None else f"{pipe.name} at {duty * 1e3:.1f} l/s in each"


def _told_m(need_m: float) -> float:
    """Round a raise up to whole centimetres: what is told to help must help."""
    return math.ceil(need_m * 100.0 - _HAIR * 100.0) / 100.0


def _ways(bench: Bench, need_m: float, limitation: Limitation) -> str:
    """Say what would lift the ceiling by as much as is needed: only what the site file may still set."""
    setting, bed_m = bench.setting, bench.site.search.bed_offset_m
    trench = f"a trench {need_m:.2f} m deep" if bed_m == 0.0 else f"the pipe laid {need_m:.2f} m lower"
    ways = [
        (DEEPEST_TRENCH_M + bed_m, f"{trench} where the ground is too high"),
        (setting.present.water_m - setting.lowest.water_m, f"a lowest level {need_m:.2f} m higher"),
    ]
    capped = limitation.ceiling_level_m - limitation.cap_level_m  # how far the highest lift lies under the suction
    if capped > 0.0:
        ways.append((capped, f"a highest lift (limits.highest_lift_m) {need_m:.2f} m higher"))
    else:
        ways.append((setting.limits.reserve_m, f"a reserve {need_m:.2f} m smaller"))
    open_ways = [text for room_m, text in ways if need_m <= room_m + _HAIR]
    if not open_ways:
        return "What would help: another outlet or intake, with lower ground between; no trench or level makes up this"
    return f"What would make a route: {', or '.join(open_ways)}"


def _shortfall(
    bench: Bench, pipe: Pipe, duty: float | None, raised: Found, limitation: Limitation, missing_m: float = 0.0
) -> Shortfall:
    """Say what would make a route that keeps the suction limit."""
    if raised.path is None:
        text = (
            f"{_words(pipe, duty)}: no ground that holds data joins intake and outlet. What would help: a DEM without "
            "the gap between them, or the gap filled."
        )
        return Shortfall(pipe.name, duty, "cut off", None, text)
    need = raised.high
    if need <= 0.0:  # the search's own rule is met; the sampled long section misses by a hair
        need = max(missing_m, _SLACK_M)
    capped = limitation.cap_level_m < limitation.ceiling_level_m
    limit = "the highest lift allowed" if capped else "the suction limit"
    told = _told_m(need)
    text = f"{_words(pipe, duty)}: the ground is {told:.2f} m too high for {limit}. {_ways(bench, told, limitation)}."
    return Shortfall(pipe.name, duty, "suction", need, text)


def _too_weak(pipe: Pipe, duty: float, most: float) -> Shortfall:
    text = (
        f"{_words(pipe, duty)}: the fall drives at most {most * 1e3:.1f} l/s through one pipe by any route. What "
        "would help: a larger bore, more pipes, a lower outlet, or a smaller discharge."
    )
    return Shortfall(pipe.name, duty, "energy", None, text)


def _most_driven(bench: Bench, pipe: Pipe, known: PathEdges) -> float:
    """Return what the fall drives by any route: through the shortest way over the ground, however high it is."""
    free = shortest_path(bench.job, Limitation(rule=bench.site.search.ground_rule)).path
    return bench.flow(pipe).carried_at_length(min(known.length_m, np.inf if free is None else free.length_m))


def _least_bad(bench: Bench, pipe: Pipe, best: Found, count: int, duty: float | None) -> Offer:
    """Offer the route that is nearest to working, and say what is missing."""
    limitation: Limitation = bench.limit_at(pipe, duty or 0.0)
    reachable = duty is None or limitation.longest_m > 0.0
    raised = (
        least_raise(bench.job, limitation)
        if reachable
        else Found(None, np.inf, np.inf, proven_outside=True, searches=0)
    )
    if raised.path is not None:
        figures = replace(best, proven_outside=raised.proven_outside)
        candidate = make_candidate(bench, pipe, raised.path, figures, count, duty)
        missing = -candidate.appraisal.reserve_left_m
        shortfall = _shortfall(bench, pipe, duty, raised, limitation, missing)
        return Offer((candidate,), shortfall, raised.proven_outside)
    if duty is not None:  # more than the fall drives at any length: look at still water instead
        still = best if best.path is not None else least_raise(bench.job, bench.limit_at(pipe, 0.0))
        if still.path is not None:
            most = _most_driven(bench, pipe, still.path)
            figures = replace(best, proven_outside=still.proven_outside)
            candidate = make_candidate(bench, pipe, still.path, figures, count, duty)
            shortfall = _too_weak(pipe, duty, most)
            if best.path is None:
                shortfall = _shortfall(bench, pipe, duty, still, limitation)
                # No raise alone makes a route for this pipe, so a pipe for which one does comes into the headline.
                shortfall = replace(shortfall, raise_m=None, text=_both(pipe, duty, still, most))
            return Offer((candidate,), shortfall, still.proven_outside)
    return Offer((), _shortfall(bench, pipe, duty, raised, limitation), raised.proven_outside)


def _both(pipe: Pipe, duty: float, still: Found, most: float) -> str:
    return (
        f"{_words(pipe, duty)}: the ground is too high by {still.high:.2f} m even for still water, and the fall drives "
        f"at most {most * 1e3:.1f} l/s through one pipe."
    )


def _shortest_claim(bench: Bench, duty: float, *, proven: bool) -> str:
    """Say what the search for a duty proves; lengths are stretched by 0.1 % at a time until the long section fits."""
    whole = proven or bench.scene.terrain.window.whole
    where = "on the whole DEM" if whole else "inside the part of the DEM that was read"
    return f"No path {where} that carries the duty of {duty * 1e3:.4g} l/s is shorter, to 0.1 %."


def _counts(bench: Bench) -> Iterator[tuple[int, float]]:
    required = bench.site.demand.discharge_m3s
    if required is not None:
        for count in range(1, bench.site.demand.most_pipes + 1):
            yield count, required / count


def _straightened(bench: Bench, pipe: Pipe, path: PathEdges, discharge: float) -> PathEdges:
    """Take the shortest of the paths that carry as much: where suction governs, a search may end with a detour."""
    flow = bench.flow(pipe)
    if discharge >= flow.carried_at_length(path.length_m) * (1.0 - _HAIR):
        return path  # the fall governs: a shorter path would carry more
    found = shortest_path(bench.job, flow.limit_at(discharge * (1.0 - _EASE)))
    return found.path if found.path is not None and found.path.length_m < path.length_m else path


def offer_of(bench: Bench, pipe: Pipe) -> Offer:
    """Find every route that a pipe has to offer.

    Where a discharge is asked: the shortest route for each number of pipes that can carry it. Where none is
    asked: the route that carries most. Where neither works: the least bad, with what is missing.
    """
    best = largest_discharge(bench.job, bench.flow(pipe), tolerance=bench.site.search.tolerance)
    asked = bench.site.demand.discharge_m3s
    if asked is None:
        if best.path is None or best.low <= 0.0:
            offer = _least_bad(bench, pipe, best, 1, None)
            return replace(offer, proven=offer.proven and best.proven_outside)
        path = _straightened(bench, pipe, best.path, best.low)
        return Offer((make_candidate(bench, pipe, path, best, 1, None),), None, best.proven_outside)
    found, proven = [], best.proven_outside
    for count, duty in _counts(bench):
        if best.path is None or duty > best.high * (1.0 + bench.site.search.tolerance):
            continue
        way, outside = _path_for_duty(bench, pipe, best, duty)
        proven = proven and outside
        if way is not None:
            claim = _shortest_claim(bench, duty, proven=outside)
            found.append(make_candidate(bench, pipe, way, best, count, duty, claim))
    if found:
        return Offer(tuple(found), None, proven)
    most_pipes = bench.site.demand.most_pipes
    offer = _least_bad(bench, pipe, best, most_pipes, asked / most_pipes)
    return replace(offer, proven=offer.proven and proven)
