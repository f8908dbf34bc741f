"""The lowest crest against fine sampling of the bilinear surface, flooded by scipy.ndimage.label."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.ndimage import label, map_coordinates

from routing.errors import InputError
from routing.search import crests, lowest_crest, prepare_grid


def masks(shape, source, goal):
    one, other = np.zeros(shape, bool), np.zeros(shape, bool)
    one[source] = other[goal] = True
    return one, other


def by_sampling(ground, source, goal, fine=24):
    """Lowest level (to 1e-3) at which a fine sampling of the surface joins the two cells."""
    rows, cols = ground.shape
    at = np.meshgrid(np.arange((rows - 1) * fine + 1) / fine, np.arange((cols - 1) * fine + 1) / fine, indexing="ij")
    surface = map_coordinates(ground, at, order=1)
    low, high = 0.0, 10.0
    while high - low > 1e-3:
        level = 0.5 * (low + high)
        parts, _ = label(surface <= level, structure=np.ones((3, 3)))
        a, b = parts[source[0] * fine, source[1] * fine], parts[goal[0] * fine, goal[1] * fine]
        low, high = (low, level) if a == b != 0 else (level, high)
    return high


@pytest.mark.plain
@settings(max_examples=25, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_equals_fine_sampling_of_the_surface(seed):
    ground = np.random.default_rng(seed).uniform(0.0, 10.0, (5, 6))
    grid = prepare_grid(ground, 1.0, 1.0)
    found = lowest_crest(grid, *masks(ground.shape, (0, 0), (4, 5)))
    assert found.level_m == pytest.approx(by_sampling(ground, (0, 0), (4, 5)), abs=0.06)
    here = map_coordinates(ground, [[found.row], [found.col]], order=1)[0]
    assert here == pytest.approx(found.level_m, abs=1e-9)


@pytest.mark.plain
def test_a_patch_saddle_is_found_in_place():
    for corner, saddle in ((2.0, 2.0), (4.0, 3.2), (6.0, 4.0)):  # (0 x 2 - 8 x corner) / (0 + 2 - 8 - corner)
        grid = prepare_grid(np.array([[0.0, 8.0], [corner, 2.0]]), 1.0, 1.0)
        assert lowest_crest(grid, *masks((2, 2), (0, 0), (1, 1))).level_m == pytest.approx(saddle)


def test_nodata_is_a_wall_and_spoils_its_patches():
    ground = np.array([[0.0, np.nan, 0.0], [np.nan, 0.0, 0.0]])
    assert lowest_crest(prepare_grid(ground, 1.0, 1.0), *masks((2, 3), (0, 0), (0, 2))) is None


def test_open_border_met_before_the_goal_is_told():
    ground = np.full((7, 7), 5.0)
    ground[3, :] = 1.0
    ground[3, 5] = 4.0
    border = np.zeros((7, 7), bool)
    border[0, :] = True
    sources, goal = masks((7, 7), (3, 1), (3, 6))
    grid = prepare_grid(ground, 1.0, 1.0)
    assert not lowest_crest(grid, sources, goal, open_border=border).border_met
    border[:, 0] = True
    assert lowest_crest(grid, sources, goal, open_border=border).border_met


def test_a_border_met_only_beyond_the_crest_leaves_no_doubt():
    """The valley beyond the crest runs to the border, all of it at the crest's level: no way out there is lower."""
    ground = np.array([[5.0, 5.0, 5.0, 5.0, 5.0], [5.0, 1.0, 3.0, 0.0, 0.0], [5.0, 5.0, 5.0, 0.0, 0.0]])
    border = np.zeros(ground.shape, bool)
    border[-1] = True
    found = lowest_crest(prepare_grid(ground, 1.0, 1.0), *masks(ground.shape, (1, 1), (1, 4)), open_border=border)
    assert found.level_m == 3.0
    assert not found.border_met


def test_slices_and_heap_growth_change_nothing(monkeypatch):
    ground = np.random.default_rng(4).uniform(0, 9, (60, 60))
    grid = prepare_grid(ground, 1.0, 1.0)
    whole = lowest_crest(grid, *masks(ground.shape, (0, 0), (59, 59)))
    monkeypatch.setattr(crests, "_SLICE_CELLS", 11)
    monkeypatch.setattr(crests, "_FIRST_HEAP", 12)
    ticks = []
    assert lowest_crest(grid, *masks(ground.shape, (0, 0), (59, 59)), tick=ticks.append) == whole
    assert ticks


def test_bad_masks_are_named():
    grid = prepare_grid(np.zeros((3, 3)), 1.0, 1.0)
    with pytest.raises(InputError, match="shape"):
        lowest_crest(grid, np.zeros((2, 2), bool), np.zeros((3, 3), bool))
    with pytest.raises(InputError, match="no source"):
        lowest_crest(grid, np.zeros((3, 3), bool), np.ones((3, 3), bool))
