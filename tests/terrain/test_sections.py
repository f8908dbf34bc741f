"""Long sections, held against brute force."""

import time

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from routing.errors import TerrainError
from routing.terrain import ground_along, long_section, rowcol_of, sample_rowcol

MOVES = [(0, 1), (1, 0), (1, 1), (1, 2), (2, 1), (1, 3), (3, 1), (2, 3), (3, 2)]


def random_path(rng, shape, legs):
    """Return a path of allowed moves that stays on the grid."""
    path = [(shape[0] // 2, shape[1] // 2)]
    while len(path) <= legs:
        move = np.array(MOVES[rng.integers(len(MOVES))]) * rng.choice([-1, 1], 2)
        place = tuple(np.array(path[-1]) + move)
        if 0 <= place[0] < shape[0] and 0 <= place[1] < shape[1]:
            path.append(place)
    return np.array(path)


def brute_force(terrain, path, per_leg):
    """Return level and 3-D length of a path sampled very finely."""
    part = np.linspace(0, 1, per_leg + 1)[:-1]
    row = np.append((path[:-1, :1] + part * np.diff(path[:, :1], axis=0)).ravel(), path[-1, 0])
    col = np.append((path[:-1, 1:] + part * np.diff(path[:, 1:], axis=0)).ravel(), path[-1, 1])
    level, _ = sample_rowcol(terrain, row, col)
    rows = np.arange(terrain.shape[0])
    middle = 0.5 * (row[1:] + row[:-1])
    across = np.diff(row) * np.interp(middle, rows, terrain.step_y_m)
    along = np.diff(col) * np.interp(middle, rows, terrain.step_x_m)
    return level, np.sqrt(across**2 + along**2 + np.diff(level) ** 2).sum()


@given(seed=st.integers(0, 10**6))
def test_maximum_minimum_and_length_equal_brute_force(real_ground, seed):
    rng = np.random.default_rng(seed)
    terrain = list(real_ground.values())[seed % 3]
    path = random_path(rng, terrain.shape, 12)
    line = long_section(terrain, path)
    level, length = brute_force(terrain, path, 600)
    assert line.ground_m.max() >= level.max() - 1e-9
    assert line.ground_m.max() == pytest.approx(level.max(), abs=2e-3)
    assert line.ground_m.min() <= level.min() + 1e-9
    assert line.chainage_m[-1] == pytest.approx(length, rel=2e-3)
    assert line.chainage_m[-1] <= length + 1e-6


@given(seed=st.integers(0, 10**6))
def test_samples_lie_on_the_ground_rise_in_chainage_and_are_close(real_ground, seed):
    terrain = list(real_ground.values())[seed % 3]
    path = random_path(np.random.default_rng(seed), terrain.shape, 9)
    line = long_section(terrain, path, most_spacing_cells=0.5)
    row, col = rowcol_of(terrain, line.x, line.y)
    level, state = sample_rowcol(terrain, row, col)
    assert not state.any()
    assert level == pytest.approx(line.ground_m, abs=1e-4)
    assert line.chainage_m[0] == 0.0
    assert (np.diff(line.chainage_m) > 0).all()
    assert np.hypot(np.diff(row), np.diff(col)).max() <= 0.5 + 1e-6
    assert {tuple(place) for place in path.tolist()} <= {
        (round(r), round(c)) for r, c in zip(row, col, strict=True) if abs(r - round(r)) + abs(c - round(c)) < 1e-6
    }


def test_ridge_between_cells_is_hit_exactly(make_terrain):
    # Along the diagonal of one patch z = 0 + 10 s (1 - s) * 2: highest 5 at the middle, between two cells at 0.
    terrain = make_terrain([[0.0, 10.0], [10.0, 0.0]])
    assert long_section(terrain, [(0, 0), (1, 1)], most_spacing_cells=9.0).ground_m.tolist() == [0.0, 5.0, 0.0]


def test_hump_away_from_the_middle(make_terrain):
    # z(s) = s (12 - 8 s) along the diagonal; its top is 4.5 at s = 3/4 (by hand).
    terrain = make_terrain([[0.0, 6.0], [6.0, 4.0]])
    line = long_section(terrain, [(0, 0), (1, 1)], most_spacing_cells=9.0)
    assert line.ground_m == pytest.approx([0.0, 4.5, 4.0])
    assert line.x[1] == pytest.approx(0.5 + 0.75)


def test_knight_move_is_sampled_at_its_crossings(make_terrain):
    terrain = make_terrain(np.zeros((3, 3)))
    line = long_section(terrain, [(0, 0), (2, 1)], most_spacing_cells=9.0)
    assert line.x.tolist() == [0.5, 1.0, 1.5]


def test_length_on_a_plane_is_pythagoras(make_terrain):
    rows, cols = np.mgrid[0:8, 0:8]
    terrain = make_terrain(3.0 * rows + 4.0 * cols, step_x=5.0, step_y=12.0)
    line = long_section(terrain, [(0, 0), (2, 1), (7, 7)])
    by_hand = np.sqrt(24.0**2 + 5.0**2 + 10.0**2) + np.sqrt(60.0**2 + 30.0**2 + 39.0**2)
    assert line.chainage_m[-1] == pytest.approx(by_hand, rel=1e-12)


def test_steps_are_those_of_the_rows(make_terrain):
    terrain = make_terrain(np.zeros((3, 3)), step_x=[10.0, 20.0, 30.0], step_y=[1.0, 2.0, 3.0])
    assert long_section(terrain, [(2, 0), (2, 2)]).chainage_m[-1] == pytest.approx(60.0)
    assert long_section(terrain, [(0, 1), (1, 1)]).chainage_m[-1] == pytest.approx(1.5)


def test_repeated_cells_do_no_harm(make_terrain):
    terrain = make_terrain(np.zeros((3, 3)))
    line = long_section(terrain, [(0, 0), (0, 0), (0, 2), (0, 2)])
    assert line.chainage_m[-1] == 2.0
    assert (np.diff(line.chainage_m) > 0).all()


def test_both_ways_are_the_same(real_ground):
    terrain = real_ground["lidar_potholes_1m.tif"]
    path = random_path(np.random.default_rng(2), terrain.shape, 40)
    there, back = long_section(terrain, path), long_section(terrain, path[::-1])
    assert there.chainage_m[-1] == pytest.approx(back.chainage_m[-1], rel=1e-12)
    assert there.ground_m == pytest.approx(back.ground_m[::-1], abs=1e-9)


def test_any_polyline_equals_its_fine_sampling(real_ground):
    terrain = real_ground["jacksboro_srtm3.tif"]
    path = np.array([[3.3, 4.7], [50.1, 20.9], [50.1, 90.2], [12.6, 90.2]])
    a, _, c, _, e, f = terrain.transform
    line = ground_along(terrain, c + a * (path[:, 1] + 0.5), f + e * (path[:, 0] + 0.5))
    level, length = brute_force(terrain, path, 40000)
    assert line.ground_m.max() == pytest.approx(level.max(), abs=1e-3)
    assert line.ground_m.max() >= level.max() - 1e-9
    assert line.chainage_m[-1] == pytest.approx(length, rel=2e-4)


def test_a_line_beside_a_void_passes_and_one_through_it_does_not(make_terrain):
    terrain = make_terrain([[1.0, 2.0, 3.0], [4.0, np.nan, 6.0], [7.0, 8.0, 9.0]])
    assert long_section(terrain, [(0, 0), (0, 2), (2, 2)]).ground_m.tolist() == [1, 1.5, 2, 2.5, 3, 4.5, 6, 7.5, 9]
    with pytest.raises(TerrainError, match="ground without data"):
        long_section(terrain, [(0, 0), (2, 1)])


def test_a_line_off_the_window_is_refused(make_terrain):
    with pytest.raises(TerrainError, match="outside the part of the DEM"):
        long_section(make_terrain(np.zeros((3, 3))), [(0, 0), (0, 5)])


def test_a_line_without_length_is_refused(make_terrain):
    with pytest.raises(TerrainError, match="needs a line with a length"):
        long_section(make_terrain(np.zeros((3, 3))), [(1, 1), (1, 1)])


def test_a_long_path_takes_milliseconds(real_ground):
    terrain = real_ground["lidar_potholes_1m.tif"]
    path = random_path(np.random.default_rng(4), terrain.shape, 2000)
    long_section(terrain, path)
    start = time.perf_counter()
    long_section(terrain, path)
    assert time.perf_counter() - start < 0.25  # a few ms alone; the machine may be busy
