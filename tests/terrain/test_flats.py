"""The flat surface at the intake."""

import numpy as np
import pytest

from routing.records import Cell
from routing.terrain import flat_water, nearest_valid


def basin_with_flat(level=3.0, size=11):
    rows, cols = np.mgrid[0:size, 0:size]
    return np.maximum(level, np.hypot(rows - size // 2, cols - size // 2) + level - 3.5)


def test_flat_water_in_whole_numbers(make_terrain):
    ground = np.round(basin_with_flat())
    found = flat_water(make_terrain(ground, dtype="int16", step_x=2.0, step_y=3.0), Cell(5, 5))
    assert found.level_m == 3.0
    assert found.cells == (ground == 3.0).sum()
    assert found.area_m2 == 6.0 * found.cells


def test_noise_of_a_centimetre_is_flat_in_floats_but_not_in_whole_numbers(make_terrain):
    ground = basin_with_flat()
    ground += np.random.default_rng(3).uniform(-0.009, 0.009, ground.shape)
    found = flat_water(make_terrain(ground), Cell(5, 5))
    assert found.level_m == pytest.approx(3.0, abs=0.01)
    assert found.cells >= 37
    assert flat_water(make_terrain(ground, dtype="int16"), Cell(5, 5)) is None


def test_a_slope_is_not_water(make_terrain):
    _, cols = np.mgrid[0:40, 0:40]
    assert flat_water(make_terrain(0.1 * cols), Cell(20, 20)) is None
    assert flat_water(make_terrain(np.floor(0.2 * cols), dtype="int16"), Cell(20, 22)) is None


def test_eight_cells_are_too_few(make_terrain):
    ground = np.full((7, 7), 9.0)
    ground[2:5, 2:5] = 1.0
    assert flat_water(make_terrain(ground), Cell(3, 3)).cells == 9
    ground[2, 2] = 9.0
    assert flat_water(make_terrain(ground), Cell(3, 3)) is None


def test_ground_lower_at_one_place_is_a_dam(make_terrain):
    ground = np.full((20, 20), 9.0)
    ground[3:17, 3:17] = 1.0
    ground[10, 17] = -5.0
    assert flat_water(make_terrain(ground), Cell(8, 8)).level_m == 1.0


def test_the_nearest_cell_stands_for_a_void(make_terrain):
    ground = np.full((9, 9), 9.0)
    ground[1:8, 1:8] = 2.0
    ground[3:6, 3:6] = np.nan
    assert flat_water(make_terrain(ground), Cell(4, 4)).level_m == 2.0


def test_nearest_valid_counts_ground_lengths(make_terrain):
    ground = np.full((5, 5), np.nan)
    ground[2, 4], ground[4, 2] = 1.0, 1.0
    assert nearest_valid(make_terrain(ground, step_x=1.0, step_y=3.0), Cell(2, 2)) == Cell(2, 4)
    assert nearest_valid(make_terrain(ground, step_x=3.0, step_y=1.0), Cell(2, 2)) == Cell(4, 2)
    assert nearest_valid(make_terrain(np.full((2, 2), np.nan)), Cell(0, 0)) is None


def test_the_reservoir_of_the_srtm_grid(real_ground, cases):
    case = next(one for one in cases if one["id"] == "R04c")
    found = flat_water(real_ground[case["dem"]], Cell(*case["intake_rc"]))
    assert found.level_m == case["water_level_m"]
    assert found.cells == case["lake_cells"]


def test_a_hollow_of_bare_ground_has_none(real_ground, cases):
    case = next(one for one in cases if one["id"] == "R01a")
    assert flat_water(real_ground[case["dem"]], Cell(*case["intake_rc"])) is None
