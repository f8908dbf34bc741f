"""Ends left open: the best of all ends is the best of separate plans for each, on grids small enough to try them all."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
import pytest

from routing.planning.benches import Bench
from routing.planning.candidates import offer_of
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.planning.settings import resolve
from routing.terrain import open_dem

#: Ground length of a cell: UTM shrinks lengths to 0.9996 at its central meridian, where the made jobs lie.
STEP = 10.0 / 0.9996
POINT = {"level_m": None, "height_above_ground_m": 0.3}
ANYWHERE = POINT | {"kind": "anywhere", "x": None, "y": None}
SHORE = {"kind": "shore", "underwater_length_m": 0.0, "mouth_level_m": None}


@dataclass(frozen=True)
class Try:
    """What one job offers for its one pipe, without the other ways that a plan looks for besides."""

    scene: object
    setting: object
    site: object
    candidates: tuple

    @property
    def length_m(self):
        return min((one.route.proof.graph_length_m for one in self.candidates), default=np.inf)

    @property
    def discharge_m3s(self):
        return max((one.appraisal.discharge_m3s for one in self.candidates), default=0.0)

    @property
    def figure(self):
        asked = self.site.demand.discharge_m3s is not None
        return self.length_m if asked else -self.discharge_m3s


def on_bench(site, scene, setting):
    found = offer_of(Bench(site, scene, setting, lambda _: None), site.pipes[0])
    return Try(scene, setting, site, found.candidates if found.shortfall is None else ())


def offer(job):
    site = job.site
    with open_dem(site.terrain, site.lines, site.file) as dem:
        ends = place_ends(site, dem)
        scene = survey(site, dem, ends, first_window(site, dem, ends), Reporter())
    return on_bench(site, scene, resolve(site, scene))


def with_points(found, source, goal):
    """The same job with both ends given as points, by cells of the scene."""
    scene = replace(found.scene, intakes=None, outlets=None, intake_cell=source, outlet_cell=goal)
    axis = float(scene.terrain.elevation_m[goal]) + found.site.outlet.height_above_ground_m
    setting = found.setting
    return on_bench(
        found.site,
        scene,
        replace(
            setting,
            lowest=replace(setting.lowest, outlet_m=axis),
            present=replace(setting.present, outlet_m=axis),
        ),
    )


def pairs(cells):
    return [(int(row), int(col)) for row, col in cells]


def rough(rng, rows=12, cols=34, top=103.0):
    """A reservoir behind a ridge whose crest wavers, and a rough valley floor that falls away from it."""
    col = np.arange(cols)
    crest_col = 14 + 2 * np.sin(np.arange(rows) / 3.0)[:, None]
    ridge = top + rng.uniform(-1.0, 1.0, (rows, 1)) - np.abs(col - crest_col)
    ground = np.where(col < crest_col, np.maximum(ridge, 100.0), np.maximum(ridge, 95.0))
    floor = (col > crest_col) & (ground < 96.0)
    fall = np.broadcast_to(95.0 - 0.2 * np.maximum(col - 20, 0), ground.shape)
    ground[floor] = fall[floor] + rng.uniform(-0.5, 0.5, floor.sum())
    ground[:, :3] = ground[:2, :16] = ground[-2:, :16] = 110.0
    ground[:, -1] = 90.0
    return ground


DUTIES = [None, 0.06, 0.10, 0.12]


@pytest.mark.parametrize("duty", DUTIES)
@pytest.mark.parametrize(("seed", "top"), [(1, 103.0), (2, 105.5)])
def test_an_outlet_anywhere_is_the_best_of_all_outlets(make_job, seed, top, duty):
    ground = rough(np.random.default_rng(seed), top=top)
    asked = {} if duty is None else {"discharge_m3s": duty, "most_pipes": 1}
    best = offer(make_job(ground, ends=((6, 8), (6, 30)), outlet=ANYWHERE, demand=asked))
    cells = pairs(best.scene.outlets.cells)
    assert len(cells) > 100
    single = [with_points(best, (6, 8), cell) for cell in cells]
    allowed = 2e-3 if duty is None else 1e-6
    assert best.figure == pytest.approx(min(one.figure for one in single), rel=allowed)
    assert np.isfinite(best.figure)


def test_the_best_of_separate_site_files_too(make_job):
    """The same through site files of their own, each with its outlet as a point."""
    ground = rough(np.random.default_rng(3), cols=24)
    asked = {"discharge_m3s": 0.09, "most_pipes": 1}
    best = offer(make_job(ground, ends=((6, 8), (6, 20)), outlet=ANYWHERE | {"beyond_toe_m": 25.0}, demand=asked))
    cells = pairs(best.scene.outlets.cells)
    assert 20 < len(cells) < 90
    single = [offer(make_job(ground, ends=((6, 8), cell), outlet=POINT, demand=asked)) for cell in cells]
    assert best.length_m == pytest.approx(min(one.length_m for one in single), rel=1e-6)


@pytest.mark.parametrize("duty", DUTIES)
def test_a_shore_is_the_best_of_all_intakes(make_job, duty):
    ground = rough(np.random.default_rng(4), top=104.5)
    asked = {} if duty is None else {"discharge_m3s": duty, "most_pipes": 1}
    best = offer(make_job(ground, ends=((6, 8), (6, 30)), intake=SHORE, outlet=POINT, demand=asked))
    cells = pairs(best.scene.intakes.cells)
    assert 10 < len(cells) < 60
    single = [with_points(best, cell, (6, 30)) for cell in cells]
    allowed = 2e-3 if duty is None else 1e-6
    assert best.figure == pytest.approx(min(one.figure for one in single), rel=allowed)


@pytest.mark.parametrize("duty", [None, 0.10])
def test_both_ends_open_are_the_best_of_all_pairs(make_job, duty):
    ground = rough(np.random.default_rng(5), rows=9, cols=26, top=104.0)
    asked = {} if duty is None else {"discharge_m3s": duty, "most_pipes": 1}
    both = ANYWHERE | {"beyond_toe_m": 60.0}
    best = offer(make_job(ground, ends=((4, 8), (4, 20)), intake=SHORE, outlet=both, demand=asked))
    sources, goals = pairs(best.scene.intakes.cells), pairs(best.scene.outlets.cells)
    assert len(sources) * len(goals) > 200
    single = [with_points(best, source, goal) for source in sources for goal in goals]
    allowed = 2e-3 if duty is None else 1e-6
    assert best.figure == pytest.approx(min(one.figure for one in single), rel=allowed)


@pytest.mark.parametrize("duty", [None, 0.10])
def test_a_measured_bed_is_the_best_of_all_deep_cells(make_job, duty):
    """Also the cells inside the deep water are tried, which the search leaves out."""
    rng = np.random.default_rng(6)
    ground = rough(rng)
    water = ground == 100.0
    ground[water] = 96.0 + rng.uniform(-2.0, 3.9, water.sum())
    ground[6, 6] = 95.0
    asked = {} if duty is None else {"discharge_m3s": duty, "most_pipes": 1}
    best = offer(
        make_job(
            ground,
            ends=((6, 6), (6, 30)),
            terrain={"water_shown": "bed"},
            intake={"kind": "shore", "mouth_level_m": None},
            outlet=POINT,
            demand=asked,
        )
    )
    deepest = 99.0 - 0.3 - 0.32  # lowest level, submergence, outside diameter
    lake = best.scene.body.cells
    deep = pairs(np.argwhere(lake & (ground <= deepest)))
    assert set(pairs(best.scene.intakes.cells)) <= set(deep)
    single = [with_points(best, cell, (6, 30)) for cell in deep]
    allowed = 2e-3 if duty is None else 1e-6
    assert best.figure == pytest.approx(min(one.figure for one in single), rel=allowed)


def test_the_second_best_is_the_best_of_all_far_places(make_job):
    """At least a tenth of the route's length, and five cells, from the first."""
    ground = rough(np.random.default_rng(7), top=104.0)
    asked = {"discharge_m3s": 0.10, "most_pipes": 1}
    job = make_job(ground, ends=((6, 8), (6, 30)), outlet=ANYWHERE, demand=asked)
    plan, alone = job.plan(), offer(job)
    first = plan.schemes[0].route
    far = max(0.1 * first.length_m, 5 * STEP)
    lengths = {}
    for cell in pairs(alone.scene.outlets.cells):
        if np.hypot(*(np.array(cell) - first.cells[-1])) * STEP >= far * (1 - 1e-6):
            single = with_points(alone, (6, 8), cell)
            lengths |= {one.route.length_m: one.appraisal.discharge_m3s for one in single.candidates}
    least = min(lengths)
    (note,) = plan.choice_notes
    assert least > first.length_m
    assert f"Second best, {far:.0f} m or more away" in note
    assert note.count("by the checks made") == 2  # a scheme of better verdict is ranked first, though it carries less
    assert f"{least:.0f} m, carries {lengths[least] * 1e3:.1f} l/s, " in note.partition("Second best")[2]


def test_a_lake_larger_than_the_first_window_is_seen_whole_before_its_depth_is_judged(make_job):
    """The point lies in shallow water; the deep part is 150 cells away."""
    rows, cols = 40, 400
    ground = np.full((rows, cols), 110.0)
    ground[5:35, 40:340] = 98.9
    ground[5:35, 50:60] = 95.0
    ground[5:35, 345:] = 90.0 - 0.01 * np.arange(55)
    ground[5:35, 340:345] = 103.0
    job = make_job(
        ground,
        ends=((20, 330), (20, 360)),
        terrain={"water_shown": "bed"},
        intake={"kind": "shore", "mouth_level_m": None},
        outlet=POINT,
    )
    found = offer(job)
    columns = set(found.scene.intakes.cells[:, 1] + found.scene.terrain.window.col_start)
    assert columns <= set(range(50, 60))
    assert found.candidates[0].route.underwater_length_m > 270 * STEP
