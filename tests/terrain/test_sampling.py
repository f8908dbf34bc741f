"""Bilinear sampling, held against scipy's interpolators."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.interpolate import RegularGridInterpolator
from scipy.ndimage import map_coordinates

from routing.records import Cell
from routing.terrain import SampleState, cell_at, rowcol_of, sample, sample_rowcol, xy_of


def test_equals_scipy_on_real_ground(real_ground):
    rng = np.random.default_rng(5)
    for terrain in real_ground.values():
        rows, cols = terrain.shape
        r, c = rng.uniform(0, rows - 1, 3000), rng.uniform(0, cols - 1, 3000)
        level, state = sample_rowcol(terrain, r, c)
        grid = RegularGridInterpolator((np.arange(rows), np.arange(cols)), terrain.elevation_m)
        assert (state == SampleState.VALID).all()
        assert level == pytest.approx(grid(np.column_stack([r, c])), abs=1e-3)
        assert level == pytest.approx(map_coordinates(terrain.elevation_m, [r, c], order=1), abs=1e-9)


def test_map_positions_hit_cell_centres(real_ground):
    for terrain in real_ground.values():
        rows, cols = terrain.shape
        r, c = np.mgrid[0:rows:7, 0:cols:5]
        level, state = sample(terrain, *xy_of(terrain, r, c))
        assert not state.any()
        assert np.array_equal(level, terrain.elevation_m[r, c])


@given(st.lists(st.floats(-100, 100), min_size=4, max_size=4), st.floats(0, 1), st.floats(0, 1))
def test_a_patch_is_the_textbook_blend(make_terrain_once, corners, u, v):
    terrain = make_terrain_once(np.array(corners).reshape(2, 2))
    level, _ = sample_rowcol(terrain, u, v)
    z00, z01, z10, z11 = corners
    top, bottom = z00 + v * (z01 - z00), z10 + v * (z11 - z10)
    assert float(level) == pytest.approx(top + u * (bottom - top), abs=1e-3)


@pytest.fixture(scope="module")
def make_terrain_once(request):
    """The terrain maker for property tests, which may not use fixtures made anew for each test."""
    from dataclasses import replace

    base = request.getfixturevalue("real_ground")["volcano_10m.tif"]

    def make(elevation):
        shape = elevation.shape
        steps = np.ones(shape[0])
        return replace(base, elevation_m=elevation, valid=np.ones(shape, dtype=bool), step_x_m=steps, step_y_m=steps)

    return make


def test_valid_nodata_and_outside_are_told_apart(make_terrain):
    terrain = make_terrain([[1.0, 2.0, 3.0], [4.0, np.nan, 6.0], [7.0, 8.0, 9.0]])
    level, state = sample_rowcol(terrain, [0.0, 0.5, -0.4, 2.2, 0.0], [0.5, 0.5, 1.0, 0.0, 2.0])
    assert state.tolist() == [SampleState.VALID, SampleState.NODATA, SampleState.OUTSIDE, SampleState.OUTSIDE, 0]
    assert np.isnan(level[1:4]).all()
    assert level[[0, 4]].tolist() == [1.5, 3.0]


def test_corners_without_weight_are_ignored(make_terrain):
    terrain = make_terrain([[1.0, 3.0], [np.nan, np.nan]])
    level, state = sample_rowcol(terrain, [0.0, 0.0, 1e-8], [0.0, 0.25, 1.0 - 1e-8])
    assert not state.any()
    assert level.tolist() == [1.0, 1.5, 3.0]
    assert sample_rowcol(terrain, 0.01, 0.5)[1] == SampleState.NODATA


def test_one_row(make_terrain):
    terrain = make_terrain([[1.0, 3.0, 5.0]])
    level, state = sample_rowcol(terrain, [0.0, 0.1], [1.5, 1.5])
    assert level[0] == 4.0
    assert state.tolist() == [SampleState.VALID, SampleState.OUTSIDE]


def test_any_shape_and_single_numbers(make_terrain):
    terrain = make_terrain([[0.0, 1.0], [2.0, 3.0]])
    assert sample_rowcol(terrain, 0.5, 0.5)[0].shape == ()
    assert sample_rowcol(terrain, np.zeros((2, 3)), 0.5)[0].shape == (2, 3)


def test_positions_go_there_and_back(make_terrain):
    terrain = make_terrain(np.zeros((4, 5)))
    row, col = rowcol_of(terrain, *xy_of(terrain, [0.0, 2.5], [1.25, 4.0]))
    assert row.tolist() == [0.0, 2.5]
    assert col.tolist() == [1.25, 4.0]


def test_cell_at(make_terrain):
    terrain = make_terrain(np.zeros((4, 5)))
    assert cell_at(terrain, 0.0, 4.0) == Cell(0, 0)
    assert cell_at(terrain, 2.999, 0.001) == Cell(3, 2)
    assert cell_at(terrain, 5.0, 0.0) == Cell(3, 4)
    assert cell_at(terrain, 5.01, 1.0) is None
    assert cell_at(terrain, 1.0, 4.2) is None
