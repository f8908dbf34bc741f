"""What stands beside the exact answer is appraised for every pipe and count, and named by its crossing."""

from __future__ import annotations

import pytest

ENDS = ((60, 10), (60, 60))


def two_gaps(ground):
    values = ground.reservoir(rows=140, top=112.0)
    for row, level in ((40, 102.0), (90, 101.0)):
        values[row : row + 5] = ground.valley(rows=5, top=level)
        values[row : row + 5, :2] = 110.0
    return values


@pytest.fixture
def plan(make_job, ground):
    pipe = {"wall_mm": 10.0, "darcy_factor": 0.02, "modulus_mpa": 200000.0, "material": "steel"}
    pipes = (pipe | {"name": "P", "outside_diameter_mm": 320.0}, pipe | {"name": "Q", "outside_diameter_mm": 420.0})
    return make_job(two_gaps(ground), ends=ENDS, pipes=pipes, demand={"discharge_m3s": 0.2, "most_pipes": 3}).plan()


def test_every_pipe_and_count_that_a_further_way_serves_is_a_scheme(plan):
    over = {name: {(s.pipe.name, s.count) for s in plan.schemes if s.route.crossing == name} for name in ("C1", "C2")}
    assert over["C1"] >= {("P", 2), ("P", 3), ("Q", 1), ("Q", 2), ("Q", 3)}
    assert over["C2"] >= {("P", 3), ("Q", 2), ("Q", 3)}
    for scheme in plan.schemes:
        if scheme.verdict.grade_of_made != "unfit":
            assert scheme.total_discharge_m3s >= 0.2


def test_ranks_are_one_order_over_all_ways(plan):
    assert [scheme.rank for scheme in plan.schemes] == list(range(1, len(plan.schemes) + 1))
    assert len({(s.pipe.name, s.count, s.route.name) for s in plan.schemes}) == len(plan.schemes)


def test_every_route_names_a_crossing_that_is_listed(plan):
    names = {crossing.name for crossing in plan.crossings}
    assert {scheme.route.crossing for scheme in plan.schemes} == names
    for scheme in plan.schemes:
        place = next(c for c in plan.crossings if c.name == scheme.route.crossing)
        gap = ((scheme.route.x - place.x) ** 2 + (scheme.route.y - place.y) ** 2).min() ** 0.5
        assert gap < 60.0


def test_a_crossing_lies_on_a_route_that_takes_it(plan):
    for crossing in plan.crossings:
        routes = [s.route for s in plan.schemes if s.route.crossing == crossing.name]
        gap = min(((r.x - crossing.x) ** 2 + (r.y - crossing.y) ** 2).min() ** 0.5 for r in routes)
        assert gap < 1e-6
        assert min(r.crest_m for r in routes) >= crossing.level_m - 1e-6 or len(routes) > 1
