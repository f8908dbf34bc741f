"""`plan` and `look`: what they say of one job, together and in order."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from routing.errors import TerrainError
from routing.planning import inspect_dem


@pytest.fixture
def job(make_job, ground, pipe):
    pipes = [pipe | {"supply_per_m": 30.0}, pipe | {"name": "Q", "outside_diameter_mm": 260.0, "supply_per_m": 0.0}]
    return make_job(ground.reservoir(), pipes=pipes)


def test_look_and_plan_understand_the_same(job):
    outlook, plan = job.look(), job.plan()
    assert outlook.lowest_crest == plan.lowest_crest
    assert outlook.setting == plan.setting
    assert outlook.assumptions == plan.assumptions
    assert outlook.warnings == plan.warnings
    assert outlook.water_body.area_m2 == plan.water_body.area_m2
    np.testing.assert_array_equal(outlook.terrain.elevation_m, plan.terrain.elevation_m)


def test_shares_and_ranges_are_those_of_the_cells_with_ground(make_job, ground):
    values = ground.reservoir()
    values[:, 70:] = np.nan
    values[0, 0], values[39, 69] = 140.0, 77.5
    outlook = make_job(values).look()
    assert outlook.nodata_share == pytest.approx(10 / 80)
    assert outlook.elevation_range_m == (77.5, 140.0)
    assert outlook.flat_water_level_m == 100.0


def test_no_assumption_is_said_twice_and_none_is_lost(job):
    plan = job.plan()
    assert len(set(plan.assumptions)) == len(plan.assumptions)
    for source in (plan.site.assumptions, plan.terrain.facts.assumptions, plan.setting.assumptions):
        assert set(source) <= set(plan.assumptions)


def test_every_pipe_gets_its_schemes_with_cost_and_one_name_a_path(job):
    plan = job.plan()
    assert [scheme.rank for scheme in plan.schemes] == list(range(1, len(plan.schemes) + 1))
    by_pipe = {scheme.pipe.name: scheme for scheme in plan.schemes}
    assert set(by_pipe) == {"P", "Q"}
    assert by_pipe["P"].cost.total == pytest.approx(30.0 * by_pipe["P"].route.length_m)
    assert by_pipe["Q"].cost.total == 0.0
    paths = {scheme.route.cells.tobytes(): scheme.route.name for scheme in plan.schemes}
    assert len(set(paths.values())) == len(paths)


def test_the_lift_of_every_scheme_is_at_least_that_of_the_lowest_crest(job):
    plan = job.plan()
    for scheme in plan.schemes:
        crown = scheme.pipe.outside_diameter_m - scheme.pipe.wall_m
        assert scheme.route.crest_m >= plan.lowest_crest.level_m - 1e-9
        assert scheme.appraisal.lift_m >= plan.lowest_crest.level_m + crown - plan.setting.lowest.water_m - 1e-9


def test_progress_tells_each_stage_from_beginning_to_end_and_times_are_kept(job):
    told = []
    plan = job.plan(lambda stage, share: told.append((stage, share)))
    stages = list(dict.fromkeys(stage for stage, _ in told))
    assert stages[0] == "ground and water body"
    assert [stage for stage in stages if stage.startswith("routes")] == [f"routes for pipe {n} of 2" for n in (1, 2)]
    for stage in stages:
        shares = [share for name, share in told if name == stage]
        assert (shares[0], shares[-1]) == (0.0, 1.0)
        assert all(0.0 <= share <= 1.0 for share in shares)
    assert set(plan.timings_s) == set(stages)
    assert all(seconds >= 0.0 for seconds in plan.timings_s.values())


@pytest.mark.parametrize("stage", ["ground and water body", "routes for pipe 2 of 2"])
def test_progress_may_stop_the_run(job, stage):
    def stop(name, _share):
        if name == stage:
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        job.plan(stop)


def test_the_same_job_gives_the_same_plan(job):
    one, two = job.plan(), job.plan()
    assert [scheme.route.name for scheme in one.schemes] == [scheme.route.name for scheme in two.schemes]
    for a, b in zip(one.schemes, two.schemes, strict=True):
        np.testing.assert_array_equal(a.route.cells, b.route.cells)
        assert a.appraisal.discharge_m3s == b.appraisal.discharge_m3s
        assert a.verdict == b.verdict


def test_a_window_that_proves_nothing_is_told_with_its_size(make_job, ground):
    """The way over the wall's low place lies 90 rows off, where a window that may not grow does not reach."""
    values = np.full((600, 600), 150.0)
    values[100:300, 200:210], values[100:300, 220:230] = 100.0, 90.0
    values[150, 209:221] = 106.0
    values[230, 209:221] = 101.0
    job = make_job(values, ends=((140, 205), (140, 225)), search={"largest_window_cells": 97 * 117})
    plan = job.plan()
    assert any("proven only inside the 97 x 117 cells" in text for text in plan.warnings)
    free = make_job(values, ends=((140, 205), (140, 225))).plan()
    assert not any("proven only inside" in text for text in free.warnings)
    assert free.schemes[0].route.proof.whole_dem
    assert not plan.schemes[0].route.proof.whole_dem
    found = [scheme.route.crest_m for scheme in (plan.schemes[0], free.schemes[0])]
    assert found == [pytest.approx(106.0, abs=0.05), pytest.approx(101.0, abs=0.05)]
    assert free.schemes[0].appraisal.discharge_m3s > 1.1 * plan.schemes[0].appraisal.discharge_m3s


def test_a_dem_is_inspected_without_a_site_file(job, tmp_path):
    facts = inspect_dem(tmp_path / "dem.tif")
    assert (facts.rows, facts.cols) == (40, 80)
    assert Path(facts.file).name == "dem.tif"
    with pytest.raises(TerrainError):
        inspect_dem(tmp_path / "none.tif")


def test_a_window_grows_where_a_shorter_way_may_run_outside(make_job):
    """Lake, lowest way and all of it lie in the first window, but that way winds; a straight one leaves the window."""
    values = np.full((500, 600), 150.0)
    values[260:341, 300:310], values[260:341, 320:330] = 100.0, 90.0
    for leg, col in enumerate(range(311, 320, 2)):  # up and down between lake and valley
        values[265:336, col] = 101.0
        values[335 if leg % 2 else 265, col : col + 2] = 101.0
    values[265, 319:321] = 101.0
    values[335, 310:312] = 101.0
    values[341:366, 305] = values[341:366, 325] = values[365, 305:326] = 102.0
    job = make_job(values, ends=((300, 305), (300, 325)))
    plan = job.plan()
    best = plan.schemes[0]
    assert plan.lowest_crest.level_m == 101.0
    assert best.route.crest_m == pytest.approx(102.0)
    assert best.route.length_m == pytest.approx((65 + 20 + 65) * 10 / 0.9996, rel=0.02)
    assert plan.terrain.window.rows > 97
    kept = make_job(values, ends=((300, 305), (300, 325)), search={"largest_window_cells": 97 * 117}).plan()
    assert kept.lowest_crest.proven
    assert kept.schemes[0].route.crest_m == pytest.approx(101.0)
    assert any("proven only inside the 97 x 117 cells" in text for text in kept.warnings)


def test_a_small_dem_is_read_whole_at_once(make_job, ground, small_dems_whole):
    values = np.vstack([ground.reservoir(), np.full((200, 80), 90.0)])  # taller than a first window would be
    plan = make_job(values).plan()
    assert plan.terrain.window.whole
