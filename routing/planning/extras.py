"""What stands beside the exact answer: routes over other crossings, and candidates by weights."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace

from routing.planning.alternatives import Ways, other_ways
from routing.planning.benches import Bench
from routing.planning.candidates import Candidate, carries, make_candidate
from routing.planning.samples import sampled_paths
from routing.records import Crossing, FloatArray, Pipe, Proof, Sample
from routing.schemes import SLIM_RESERVE_M
from routing.search import Found, PathEdges, shortest_path

# The sampled long section is a little longer than the path on the graph: so much is kept in hand for it.
_MARGIN_M = 0.02


@dataclass(frozen=True, slots=True)
class Extras:
    """Candidates over other crossings, the crossings, why there are not more, and the weighted samples."""

    candidates: tuple[Candidate, ...]
    crossings: tuple[Crossing, ...]
    crossings_note: str
    samples: tuple[Sample, ...]


def _bracket(proof: Proof) -> Found:
    """Return the bracket of the largest discharge that a route's proof tells."""
    low, high = proof.discharge_low_m3s, proof.discharge_high_m3s
    return Found(None, low, high, proven_outside=proof.whole_dem, searches=0)


def _combinations(bench: Bench, known: dict[str, Proof]) -> Iterator[tuple[Pipe, int, float | None]]:
    """Yield pipe, count and duty of everything that a further route might serve."""
    required = bench.site.demand.discharge_m3s
    for pipe in bench.site.pipes:
        if pipe.name not in known:
            continue
        if required is None:
            yield pipe, 1, None
        else:
            for count in range(1, bench.site.demand.most_pipes + 1):
                yield pipe, count, required / count


def _works(candidate: Candidate, duty: float | None) -> bool:
    return candidate.appraisal.largest.runs if duty is None else carries(candidate.appraisal, duty)


def _served(bench: Bench, path: PathEdges, known: dict[str, Proof]) -> list[Candidate]:
    """Appraise a further path for every pipe and count, and keep those that it serves."""
    served = []
    for pipe, count, duty in _combinations(bench, known):
        candidate = make_candidate(bench, pipe, path, _bracket(known[pipe.name]), count, duty)
        if _works(candidate, duty):
            served.append(candidate)
    return served


def _sturdier(bench: Bench, candidates: Iterable[Candidate], known: dict[str, Proof]) -> list[Candidate]:
    """Beside each route that just carries its duty, find the shortest that leaves the reserve that is wanted.

    The shortest route for a duty climbs as high as it may to save a few metres; a little more length often keeps much
    more water above the crest.
    """
    found = []
    for one in candidates:
        duty, left = one.appraisal.duty_m3s, one.appraisal.reserve_left_m
        if duty is None or not 0.0 <= left < SLIM_RESERVE_M:
            continue
        lower = bench.limit_at(one.pipe, duty).raised(-(SLIM_RESERVE_M + _MARGIN_M))
        path = shortest_path(bench.job, lower).path
        if path is None:
            continue
        sturdy = make_candidate(bench, one.pipe, path, _bracket(known[one.pipe.name]), one.count, duty)
        if sturdy.appraisal.reserve_left_m >= SLIM_RESERVE_M:
            found.append(sturdy)
    return found


def _at_lead(bench: Bench, lead: Candidate, path: PathEdges, known: dict[str, Proof]) -> Candidate:
    """Appraise a further path for the leading pipe, count and duty, whatever comes of it."""
    proof = _bracket(known[lead.pipe.name])
    return make_candidate(bench, lead.pipe, path, proof, lead.count, lead.appraisal.duty_m3s)


def _named(candidate: Candidate, crossing: str) -> Candidate:
    return replace(candidate, route=replace(candidate.route, crossing=crossing))


def find_extras(
    bench: Bench, lead: Candidate, candidates: tuple[Candidate, ...], cost_factor: FloatArray | None
) -> tuple[Extras, tuple[Candidate, ...]]:
    """Find routes over other crossings and weighted samples for the leading candidate.

    Parameters
    ----------
    bench
        The job.
    lead
        The best candidate so far: its pipe and duty decide what other ways must keep to.
    candidates
        All candidates so far.
    cost_factor : (rows, cols) array or None
        What a metre costs in each cell, where that differs: the weighted candidates then compete too.

    Returns
    -------
    Extras, candidates
        The extras, and the given candidates with the name of the crossing that each takes.
    """
    known = {one.pipe.name: one.route.proof for one in candidates}
    sturdy = _sturdier(bench, candidates, known)
    ways = other_ways(bench, lead, (*candidates, *sturdy))
    named = tuple(_named(one, ways.taken[one.route.name]) for one in candidates)
    fresh = [_named(one, ways.taken[one.route.name]) for one in sturdy]
    for way in ways.ways:
        if way.path is not None:
            served = _served(bench, way.path, known) or [_at_lead(bench, lead, way.path, known)]
            fresh += [_named(one, way.crossing.name) for one in served]
    samples = []
    for sampled in sampled_paths(bench, lead, cost_factor):
        same = bench.names.get(sampled.path.cells.tobytes(), "")
        one = _at_lead(bench, lead, sampled.path, known)
        missing = -one.appraisal.reserve_left_m
        samples.append(Sample(lead.pipe.name, sampled.weight, one.route, one.appraisal, missing, same))
        if cost_factor is not None and not same:
            fresh += _served(bench, sampled.path, known)
    fresh = [_near(bench, one, ways) for one in fresh]
    crossings = tuple(way.crossing for way in ways.ways)
    return Extras(tuple(fresh), crossings, ways.note, tuple(samples)), named


def _near(bench: Bench, candidate: Candidate, ways: Ways) -> Candidate:
    """Name the crossing that a route takes: the one that it comes nearest to, on the ground."""
    if candidate.route.crossing or not ways.ways:
        return candidate
    steps = float(bench.scene.terrain.step_x_m.mean()), float(bench.scene.terrain.step_y_m.mean())
    a, _, _, _, e, _ = bench.scene.terrain.transform

    def gap(crossing: Crossing) -> float:
        across = (candidate.route.x - crossing.x) / a * steps[0]
        down = (candidate.route.y - crossing.y) / e * steps[1]
        return float((across**2 + down**2).min())

    best = min((way.crossing for way in ways.ways), key=gap)
    return _named(candidate, best.name)
