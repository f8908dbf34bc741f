"""The gatekeeper: masks, steps, and the free ratio of oblong cells."""

import numpy as np
import pytest
from scipy.ndimage import maximum_filter

from routing.search import Limitation, free_ratio, prepare_grid, search_grid
from routing.search.grid import _highest_within


@pytest.mark.parametrize("reach", [1, 2, 3])
def test_highest_within_bounds_the_neighbourhood(reach):
    level = np.random.default_rng(2).normal(0, 1000, (15, 17))
    high = _highest_within(level, reach).reshape(level.shape)
    exact = maximum_filter(level, size=2 * reach + 1, mode="nearest")
    assert np.all(high >= exact)
    np.testing.assert_allclose(high, exact, rtol=1e-6)


@pytest.mark.parametrize(("neighbours", "ratio"), [(8, 1.0824), (16, 1.0275), (32, 1.0131)])
def test_free_ratio_of_square_cells(neighbours, ratio):
    assert free_ratio(prepare_grid(np.zeros((9, 9)), 2.0, 2.0, neighbours=neighbours)) == pytest.approx(ratio, abs=1e-4)


@pytest.mark.parametrize("neighbours", [8, 16, 32])
def test_free_ratio_bounds_oblong_cells(neighbours):
    grid = prepare_grid(np.zeros((301, 301)), 75.0, 92.5, neighbours=neighbours)
    length = search_grid(grid, [(150, 150)], Limitation()).length_m
    rows, cols = np.mgrid[-150:151, -150:151]
    straight = np.hypot(rows * 92.5, cols * 75.0)
    far = straight > 8000
    worst = (length[far] / straight[far]).max()
    assert worst <= free_ratio(grid) * (1 + 1e-12)
    assert worst == pytest.approx(free_ratio(grid), rel=1e-3)


def test_a_mask_of_valid_cells_and_nan_say_the_same():
    ground = np.random.default_rng(0).uniform(0, 3, (8, 9))
    holes = np.random.default_rng(1).random((8, 9)) < 0.3
    holes[0, 0] = False
    by_mask = search_grid(prepare_grid(ground, 1.0, 1.0, valid=~holes), [(0, 0)], Limitation()).length_m
    by_nan = search_grid(prepare_grid(np.where(holes, np.nan, ground), 1.0, 1.0), [(0, 0)], Limitation()).length_m
    np.testing.assert_array_equal(by_mask, by_nan)


def test_integer_and_float32_ground_are_taken():
    ground = np.arange(12).reshape(3, 4)
    exact = search_grid(prepare_grid(ground.astype(float), 1.0, 1.0), [(0, 0)], Limitation()).length_m
    for dtype in (np.int16, np.float32, np.uint8):
        found = search_grid(prepare_grid(ground.astype(dtype), 1.0, 1.0), [(0, 0)], Limitation()).length_m
        np.testing.assert_array_equal(found, exact)
