"""Windows of the DEM: how large they begin, and that they grow until water and lowest way lie inside."""

from __future__ import annotations

from contextlib import ExitStack
from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest

from routing.errors import SiteError
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import grown_window, survey
from routing.terrain import open_dem

STEP = 10.0 / 0.9996  # ground length of a 10 m cell at the central meridian of UTM


@pytest.fixture
def opened():
    """Open the DEMs of jobs for as long as a test runs."""
    with ExitStack() as stack:
        yield lambda job: stack.enter_context(open_dem(job.site.terrain, job.site.lines, job.site.file))


def scene_of(site, dem, window=None, reporter=None):
    ends = place_ends(site, dem)
    return survey(site, dem, ends, window or first_window(site, dem, ends), reporter or Reporter())


def sheet(rows=600, cols=700):
    """High ground, larger than any first window of ends some 20 cells apart."""
    return np.full((rows, cols), 150.0)


# ---------------------------------------------------------------- the first window


@pytest.mark.parametrize(
    ("ends", "first", "size"),
    [
        (((200, 300), (200, 320)), (152, 252), (97, 117)),  # 48 cells on every side are the least
        (((200, 200), (230, 400)), (100, 100), (231, 401)),  # half of 200 cells
        (((10, 20), (30, 25)), (0, 0), (79, 74)),  # cut by the DEM's edge
    ],
)
def test_it_holds_both_ends_with_half_their_distance_round_them(make_job, opened, ends, first, size):
    job = make_job(sheet(), ends=ends)
    dem = opened(job)
    window = first_window(job.site, dem, place_ends(job.site, dem))
    assert (window.row_start, window.col_start) == first
    assert (window.rows, window.cols) == size
    assert (window.dem_rows, window.dem_cols) == (600, 700)


def test_a_margin_that_is_too_much_is_halved_before_anything_is_refused(make_job, opened):
    """Ends 200 cells apart: 401 x 201 cells with a margin of 100, 301 x 101 with 50, 297 x 97 with 48."""
    ends = ((300, 200), (300, 400))
    sizes = {}
    for most in (401 * 201, 401 * 201 - 1, 301 * 101 - 1, 297 * 97):
        job = make_job(sheet(), ends=ends, search={"largest_window_cells": most})
        dem = opened(job)
        window = first_window(job.site, dem, place_ends(job.site, dem))
        sizes[most] = (window.cols, window.rows)
    assert list(sizes.values()) == [(401, 201), (301, 101), (297, 97), (297, 97)]
    job = make_job(sheet(), ends=ends, search={"largest_window_cells": 297 * 97 - 1})
    dem = opened(job)
    with pytest.raises(SiteError, match="too far apart") as caught:
        first_window(job.site, dem, place_ends(job.site, dem))
    (problem,) = caught.value.problems
    assert problem.key == "search.largest_window_cells"
    assert problem.line == job.line_of("largest_window_cells")
    assert problem.found == "97 x 297 cells around both, 28,809 in all"
    assert problem.allowed == "at most 28,808 cells"


def test_a_window_doubles_until_the_dem_or_the_limit_ends_it(make_job, opened):
    job = make_job(sheet(), ends=((300, 340), (300, 360)), search={"largest_window_cells": 200_000})
    dem = opened(job)
    window = first_window(job.site, dem, place_ends(job.site, dem))
    sizes = [(window.rows, window.cols)]
    while (larger := grown_window(job.site, dem, window)) is not None:
        assert larger.row_start <= window.row_start
        assert larger.col_start + larger.cols >= window.col_start + window.cols
        window = larger
        sizes.append((window.rows, window.cols))
    assert sizes[0] == (97, 117)
    for (rows, cols), (more_rows, more_cols) in pairwise(sizes):
        assert abs(more_rows - 2 * rows) <= 1
        assert abs(more_cols - 2 * cols) <= 1
    assert 4 * window.rows * window.cols > 200_000  # twice the sides would have been too much
    assert grown_window(job.site, dem, dem.whole) is None


def test_ends_that_cannot_be_placed_are_told_both(make_job, opened):
    job = make_job(sheet(60, 80), ends=((-5, 10), (20, 90)))
    with pytest.raises(SiteError) as caught:
        place_ends(job.site, opened(job))
    assert [problem.key.split(".")[0] for problem in caught.value.problems] == ["intake", "outlet"]


# ---------------------------------------------------------------- growth


def far_saddle():
    """A narrow lake 20 columns from the outlet's valley; the wall between is low only 150 rows further south."""
    values = sheet()
    values[100:400, 300:310] = 100.0
    values[100:400, 320:330] = 90.0
    values[250, 309:321] = 101.0
    return values, ((110, 305), (110, 325))


def long_lake():
    """A lake that runs far beyond the first window, with the lowest way beside the ends."""
    values = sheet()
    values[100:130, 20:310] = 100.0
    values[100:130, 320:330] = 90.0
    values[110, 309:321] = 101.0
    return values, ((110, 305), (110, 325))


@pytest.mark.parametrize(("make", "level", "row"), [(far_saddle, 101.0, 250), (long_lake, 101.0, 110)])
def test_a_lake_or_saddle_outside_the_first_window_is_found(make_job, opened, make, level, row):
    values, ends = make()
    job = make_job(values, ends=ends)
    dem = opened(job)
    begun = first_window(job.site, dem, place_ends(job.site, dem))
    scene = scene_of(job.site, dem)
    whole = scene_of(job.site, dem, dem.whole)
    assert not begun.whole
    assert begun.rows < scene.terrain.window.rows or begun.cols < scene.terrain.window.cols
    assert scene.proven
    assert scene.crest.level_m == whole.crest.level_m == level
    assert (scene.crest.x, scene.crest.y) == (whole.crest.x, whole.crest.y)
    assert scene.crest.y == 5_000_000.0 - 10.0 * (row + 0.5)
    assert scene.crest.proven
    assert scene.body.area_m2 == pytest.approx(np.count_nonzero(values == 100.0) * STEP**2, rel=1e-3)
    assert scene.body.area_m2 == pytest.approx(whole.body.area_m2, rel=1e-9)
    # One cell of the DEM, wherever the window begins.
    corner = scene.terrain.window
    assert (scene.intake_cell[0] + corner.row_start, scene.intake_cell[1] + corner.col_start) == ends[0]
    assert (scene.outlet_cell[0] + corner.row_start, scene.outlet_cell[1] + corner.col_start) == ends[1]


@pytest.mark.parametrize("make", [far_saddle, long_lake])
def test_a_window_that_may_not_grow_proves_nothing_and_says_so(make_job, opened, make):
    values, ends = make()
    job = make_job(values, ends=ends, search={"largest_window_cells": 97 * 117})
    scene = scene_of(job.site, opened(job))
    assert (scene.terrain.window.rows, scene.terrain.window.cols) == (97, 117)
    assert not scene.proven
    (text,) = [text for text in scene.warnings if "not proven" in text]
    assert f"search.largest_window_cells = {97 * 117}" in text


def test_a_first_window_that_is_enough_is_not_grown(make_job, opened, ground):
    values = np.full((500, 500), 110.0)
    values[200:240, 200:280] = ground.reservoir()
    job = make_job(values, ends=((220, 210), (220, 260)))
    stages = []
    scene = scene_of(job.site, opened(job), reporter=Reporter(lambda *told: stages.append(told)))
    assert scene.proven
    assert [share for _, share in stages].count(0.0) >= 1
    assert sum(told == ("ground and water body", 1.0) for told in stages) == 1
    assert (scene.terrain.window.rows, scene.terrain.window.cols) == (97, 147)


# ---------------------------------------------------------------- water


def test_the_spill_is_the_lower_of_both_ways_out(make_job, opened, ground):
    """Over the barrier at 103 m, or over the bank to the DEM's edge at the notch's level."""
    for notch, level, towards in ((102.0, 102.0, "edge"), (104.0, 103.0, "outlet")):
        values = ground.reservoir()
        values[20, :2] = notch
        scene = scene_of((job := make_job(values)).site, opened(job))
        assert (scene.body.spill.level_m, scene.body.spill.towards) == (level, towards)
        assert scene.crest.level_m == 103.0


def test_the_present_level_is_read_off_flat_water_and_asked_for_where_there_is_none(make_job, opened, ground, rng):
    job = make_job(ground.reservoir(), water={"present_level_m": None})
    scene = scene_of(job.site, opened(job))
    assert scene.present_m == scene.flat.level_m == 100.0
    rough = ground.reservoir() + rng.uniform(0.0, 0.5, (40, 80))
    job = make_job(rough, water={"present_level_m": None})
    with pytest.raises(SiteError) as caught:
        scene_of(job.site, opened(job))
    (problem,) = caught.value.problems
    assert (problem.key, problem.found) == ("water.present_level_m", "nothing")


def test_where_the_dem_shows_more_water_than_there_is_its_level_stands_for_the_ground(make_job, opened, ground):
    """Drawn down by a metre since the survey: what lies between is unknown."""
    job = make_job(ground.reservoir(), water={"present_level_m": 99.5})
    scene = scene_of(job.site, opened(job))
    assert (scene.present_m, scene.body.level_m) == (99.5, 100.0)
    assert any("shows the water at 100.00 m, above the present level" in text for text in scene.warnings)
    job = make_job(ground.reservoir(), water={"present_level_m": 100.8})
    scene = scene_of(job.site, opened(job))
    assert (scene.present_m, scene.body.level_m) == (100.8, 100.8)
    assert not any("above the present level" in text for text in scene.warnings)


def test_water_said_to_be_flat_that_is_not_is_told(make_job, opened, ground, rng):
    values = ground.reservoir() - np.where(ground.reservoir() == 100.0, rng.uniform(0.1, 0.9, (40, 80)), 0.0)
    said = "No flat water surface was found at the intake"
    for shown, told in (("surface", True), ("bed", False)):
        job = make_job(values, terrain={"water_shown": shown})
        scene = scene_of(job.site, opened(job))
        assert any(text.startswith(said) for text in scene.warnings) == told


def test_voids_in_the_water_are_ground_for_the_search_and_others_are_not(make_job, opened, ground):
    values = ground.reservoir()
    values[18:22, 12:16] = values[8:10, 50:52] = np.nan
    job = make_job(values)
    scene = scene_of(job.site, opened(job))
    assert scene.grid.has_ground[18:22, 12:16].all()
    assert not scene.grid.has_ground[8:10, 50:52].any()
    assert scene.body.void_cells == 16


def test_by_cells_moves_over_gaps_are_blocked_so_that_long_sections_can_be_drawn(make_job, opened, ground):
    values = ground.reservoir()
    for rule, gap, blocked in (("cells", True, True), ("cells", False, False), ("bilinear", True, False)):
        values[30, 60] = np.nan if gap else 90.0
        job = make_job(values, search={"ground_rule": rule})
        assert scene_of(job.site, opened(job)).grid.ground.blocked.any() == blocked


def test_an_end_on_the_dems_own_edge_lies_in_its_last_cell(make_job, opened, ground):
    job = make_job(ground.valley(), ends=((20, 10), (39.5, 79.5)))
    scene = scene_of(job.site, opened(job))
    assert scene.outlet_cell == (39, 79)


def test_a_scene_is_not_changed_by_its_warnings(make_job, opened, ground):
    job = make_job(ground.valley())  # the edge cuts the lake
    scene = scene_of(job.site, opened(job))
    assert len(scene.warnings) == 1
    assert replace(scene, warnings=()).body is scene.body
