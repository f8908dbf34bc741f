"""Weighted candidates beside the exact answer."""

from __future__ import annotations

import numpy as np
import pytest


def ridge_with_gap(ground, *, top, gap):
    values = ground.reservoir(rows=100, top=top)
    values[70:75] = ground.valley(rows=5, top=gap)
    values[70:75, :2] = 110.0
    return values


ENDS = ((40, 10), (40, 60))


def test_growing_weights_leave_the_ridge_for_the_gap(make_job, ground):
    plan = make_job(
        ridge_with_gap(ground, top=112.0, gap=102.0), ends=ENDS, demand={"discharge_m3s": 0.1, "most_pipes": 1}
    ).plan()
    weights = [sample.weight for sample in plan.samples]
    assert weights == sorted(weights)
    assert weights[0] == 0.0
    assert len({sample.route.name for sample in plan.samples}) == len(plan.samples)
    first, last = plan.samples[0], plan.samples[-1]
    assert first.missing_m > 4.0  # straight over the top
    assert last.missing_m < 0.5  # by the gap
    assert first.route.length_m < last.route.length_m
    exact = plan.schemes[0].route
    # The exact answer is the shortest that keeps to the limit: no sample that does is shorter.
    for sample in plan.samples:
        if sample.missing_m <= 0.0:
            assert sample.route.length_m >= exact.length_m * (1 - 1e-3)
        if sample.same_as:
            assert sample.same_as == sample.route.name


def test_missing_metres_are_those_of_the_appraisal_at_duty(make_job, ground):
    plan = make_job(ridge_with_gap(ground, top=112.0, gap=108.0), ends=ENDS, demand={"discharge_m3s": 0.05}).plan()
    assert not plan.feasible
    for sample in plan.samples:
        assert sample.missing_m == pytest.approx(-sample.appraisal.reserve_left_m)
        assert sample.missing_m > 0.0
    # On ground that is too high everywhere, the exact least raise is no more than any sample needs.
    raise_m = min(shortfall.raise_m for shortfall in plan.shortfalls)
    assert raise_m <= min(sample.missing_m for sample in plan.samples) + 0.02


def test_on_ground_below_the_limit_all_weights_find_the_same(make_job, ground):
    plan = make_job(ground.reservoir(), demand={"discharge_m3s": 0.05}).plan()
    assert len(plan.samples) == 1
    assert plan.samples[0].same_as == plan.schemes[0].route.name
    np.testing.assert_array_equal(plan.samples[0].route.cells, plan.schemes[0].route.cells)


def test_samples_begin_and_end_where_the_ends_were_left_open(make_job, ground):
    """The shore lies 11 cells before the point in the water; a stated length of pipe lies before it."""
    values = ridge_with_gap(ground, top=112.0, gap=102.0)
    values[:, -1] = 85.0  # the valley drains to the edge of the DEM
    shore = {"kind": "shore", "underwater_length_m": 35.0, "mouth_level_m": None}
    anywhere = {"kind": "anywhere", "x": None, "y": None, "level_m": None, "height_above_ground_m": 0.3}
    plan = make_job(
        values, ends=ENDS, intake=shore, outlet=anywhere, demand={"discharge_m3s": 0.08, "most_pipes": 1}
    ).plan()
    assert plan.samples
    lake = plan.water_body.cells
    for sample in plan.samples:
        (row, col), goal = sample.route.cells[0], tuple(sample.route.cells[-1])
        assert lake[row, col]
        assert not lake[row - 1 : row + 2, col - 1 : col + 2].all()
        assert not lake[goal]
        assert sample.route.underwater_length_m == 35.0
        assert sample.route.outlet_m == pytest.approx(values[goal] + 0.3, abs=1e-3)
    assert plan.samples[0].route.length_m <= plan.schemes[0].route.length_m * (1 + 1e-9)
