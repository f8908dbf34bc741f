"""Other ways over: crossings on made ridges with gaps, and on real ground."""

from __future__ import annotations

import numpy as np
import pytest

CREST_COL = 30


def gapped(ground, gaps, *, top=104.0, rows=140):
    """A reservoir's ridge with gaps of 5 rows: {first row: level}."""
    values = ground.reservoir(rows=rows, top=top)
    for row, level in gaps.items():
        values[row : row + 5] = ground.valley(rows=5, top=level)
        values[row : row + 5, :2] = 110.0
    return values


def crest_row(route):
    return int(route.cells[np.argmin(np.abs(route.cells[:, 1] - CREST_COL))][0])


ENDS = ((60, 10), (60, 60))


def test_each_gap_is_a_crossing_with_a_route_of_its_own(make_job, ground):
    job = make_job(gapped(ground, {30: 102.0, 95: 101.5}), ends=ENDS, demand={"discharge_m3s": 0.1, "most_pipes": 2})
    plan = job.plan()
    assert [crossing.name for crossing in plan.crossings] == ["C1", "C2", "C3"]
    assert all(crossing.used for crossing in plan.crossings)
    by_name = {scheme.route.crossing: scheme for scheme in reversed(plan.schemes)}
    assert set(by_name) == {"C1", "C2", "C3"}
    assert crest_row(by_name["C1"].route) == 60  # straight over the ridge
    assert 30 <= crest_row(by_name["C2"].route) < 35 or 30 <= crest_row(by_name["C3"].route) < 35
    assert 95 <= crest_row(by_name["C3"].route) < 100 or 95 <= crest_row(by_name["C2"].route) < 100
    lengths = [by_name[name].route.length_m for name in ("C1", "C2", "C3")]
    assert lengths == sorted(lengths)
    for crossing in plan.crossings:
        scheme = by_name[crossing.name]
        assert scheme.verdict.grade_of_made != "unfit"
        assert crossing.length_m == pytest.approx(scheme.route.proof.graph_length_m, rel=0.01)
        assert crossing.lift_m == pytest.approx(crossing.level_m - 99.0)
        assert scheme.route.crest_m >= crossing.level_m - 1e-6
    assert "3 ways" in plan.crossings_note


def test_the_best_scheme_is_not_changed_by_other_ways(make_job, ground):
    values = gapped(ground, {30: 102.0})
    demand = {"discharge_m3s": 0.1, "most_pipes": 1}
    with_gap = make_job(values, ends=ENDS, demand=demand).plan()
    alone = make_job(gapped(ground, {}), ends=ENDS, demand=demand).plan()
    assert with_gap.schemes[0].route.length_m == pytest.approx(alone.schemes[0].route.length_m)
    assert len(alone.crossings) == 1
    assert "1 place" in alone.crossings_note


def test_a_way_that_cannot_go_on_is_told(make_job, ground):
    """Beyond the second gap lies a hollow rim higher than the ceiling at that chainage: a wall behind it."""
    values = gapped(ground, {30: 101.0})
    values[26:40, 36:38] = 108.0
    values[26, 31:38] = values[39, 31:38] = 108.0
    plan = make_job(values, ends=ENDS, demand={"discharge_m3s": 0.1, "most_pipes": 1}).plan()
    told = [crossing for crossing in plan.crossings if not crossing.used]
    assert all("no way on" in crossing.note for crossing in told)
    assert {scheme.route.crossing for scheme in plan.schemes} <= {c.name for c in plan.crossings if c.used}


def test_where_nothing_is_feasible_the_least_bad_ways_are_shown(make_job, ground):
    plan = make_job(
        gapped(ground, {30: 107.6, 95: 107.9}, top=112.0), ends=ENDS, demand={"discharge_m3s": 0.1, "most_pipes": 1}
    ).plan()
    assert not plan.feasible
    assert plan.shortfalls
    crests = {crest_row(scheme.route) // 5 * 5 for scheme in plan.schemes}
    assert crests >= {30}
    for scheme in plan.schemes:
        assert scheme.verdict.grade == "unfit"
        assert scheme.appraisal.reserve_left_m < 0.0


@pytest.mark.parametrize("duty", [0.02, 5.0])
def test_the_least_bad_way_has_a_crossing_also_where_the_fall_is_too_small(make_job, ground, duty):
    plan = make_job(
        gapped(ground, {30: 107.6}, top=112.0), ends=ENDS, demand={"discharge_m3s": duty, "most_pipes": 1}
    ).plan()
    assert not plan.feasible
    assert plan.crossings
    assert plan.schemes[0].route.crossing == "C1"
    assert "can be crossed" not in plan.crossings_note


def test_no_discharge_asked_every_crossing_tells_what_it_carries(make_job, ground, hand):
    plan = make_job(gapped(ground, {30: 102.0}), ends=ENDS).plan()
    by_name = {scheme.route.crossing: scheme for scheme in plan.schemes}
    assert len(by_name) == 2
    for scheme in by_name.values():
        route = scheme.route
        fall = hand.energy_m3s(9.0, route.length_m)
        assert scheme.appraisal.discharge_m3s <= fall * 1.001
        assert scheme.appraisal.discharge_m3s > 0.3 * fall


def test_the_crossing_of_the_best_route_is_listed_however_many_are_shorter(make_job, ground):
    """Of five gaps the farthest carries most: it is a crossing, and so are the two shortest."""
    gaps = {73: 106.6, 58: 106.0, 43: 105.3, 28: 104.6, 13: 102.0}
    plan = make_job(gapped(ground, gaps, top=109.0, rows=150), ends=((75, 8), (75, 52))).plan()
    best = plan.schemes[0].route
    assert 13 <= crest_row(best) < 28
    rows = {crossing.name: (5000000.0 - crossing.y) / 10.0 for crossing in plan.crossings}
    assert 12 < rows[best.crossing] < 19
    assert len(rows) == 3
    for scheme in plan.schemes:
        assert abs(crest_row(scheme.route) - rows[scheme.route.crossing]) < 8
    assert {scheme.route.crossing for scheme in plan.schemes} == set(rows)
