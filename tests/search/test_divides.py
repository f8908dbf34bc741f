"""The divide against scikit-image's watershed, and crossings on made ridges."""

import numpy as np
import pytest
from scipy.ndimage import gaussian_filter
from skimage.segmentation import watershed

from routing.search import (
    Limitation,
    Pass,
    distinct_passes,
    find_divide,
    join_paths,
    prepare_grid,
    same_pass,
    search_grid,
)
from routing.search.dividing import spread_marks


def seeds(shape, water, outlet):
    one, other = np.zeros(shape, bool), np.zeros(shape, bool)
    one[water] = other[outlet] = True
    return one, other


@pytest.mark.parametrize("seed", range(5))
def test_sides_equal_a_watershed_of_two_markers(seed):
    """skimage.segmentation.watershed (source: scikit-image) floods from the same markers."""
    ground = gaussian_filter(np.random.default_rng(seed).normal(size=(60, 70)), 4)
    ground = (ground - ground.min()) / np.ptp(ground)
    rank = (ground * 65_535).astype(np.uint16)
    mark = np.zeros(ground.shape, np.uint8)
    mark[10, 10], mark[45, 60] = 1, 2
    markers = mark.astype(np.int32)
    spread_marks(rank.ravel(), mark.ravel(), np.ones(ground.size, bool), 70)
    expected = watershed(rank, markers, connectivity=2)
    assert (mark == expected).mean() > 0.995  # ties in rank may fall to either side


def test_ground_without_data_parts_the_sides():
    ground = np.zeros((9, 11))
    ground[:, 5] = 3.0
    ground[0:4, 5] = np.nan
    divide = find_divide(prepare_grid(ground, 1.0, 1.0), *seeds(ground.shape, (4, 1), (4, 9))).cells
    assert not divide[0:3].any()
    assert divide[5:, 4:7].any(axis=1).all()


def test_a_step_over_the_divide_rises_to_the_lower_neighbour():
    ground = np.array([[0.0, 3.0, 4.0, 1.0]] * 3)
    ground[1, 2] = 3.5
    divide = find_divide(prepare_grid(ground, 1.0, 1.0), *seeds(ground.shape, (1, 0), (1, 3)))
    rows, cols = np.nonzero(divide.cells)
    for row, col in zip(rows, cols, strict=True):
        near = ground[max(row - 1, 0) : row + 2, max(col - 1, 0) : col + 2]
        other = divide.outlet_side[max(row - 1, 0) : row + 2, max(col - 1, 0) : col + 2]
        assert divide.level_m[row, col] == max(ground[row, col], near[other].min())
    assert rows.size >= 3


def ridge(gaps, *, height=6.0, rows=200, cols=81):
    """A ridge across the middle with gaps: {row: level}."""
    ground = np.zeros((rows, cols))
    ground[:, 38:43] = height
    for row, level in gaps.items():
        ground[row - 2 : row + 3, 38:43] = level
    return ground


def passes_of(ground, ceiling, intake=(100, 5), outlet=(100, 75)):
    grid = prepare_grid(ground, 1.0, 1.0)
    there = search_grid(grid, [intake], Limitation(ceiling)).length_m
    back = search_grid(grid, [outlet], Limitation(ceiling)).length_m
    divide = find_divide(grid, *seeds(ground.shape, intake, outlet))
    return distinct_passes(divide.cells, there + back, divide.level_m), there + back


def test_gaps_far_apart_are_crossings_of_their_own():
    found, length = passes_of(ridge({30: 2.0, 100: 3.0, 160: 1.0}), ceiling=4.0)
    assert [abs(p.cell[0] - row) <= 2 for p, row in zip(found, (100, 160, 30), strict=True)] == [True] * 3
    assert [p.length_m for p in found] == sorted(p.length_m for p in found)
    for p in found:
        assert p.length_m == length[p.cell]


def test_a_wiggle_of_one_gap_is_no_crossing_of_its_own():
    ground = ridge({100: 3.0, 106: 3.0})
    ground[102:105, 38:43] = 3.3  # 0.3 m between them: less than half a metre
    assert len(passes_of(ground, ceiling=5.0)[0]) == 1
    ground[102:105, 38:43] = 3.6
    assert len(passes_of(ground, ceiling=5.0)[0]) == 2


def test_ground_too_high_between_two_gaps_counts_by_its_height():
    ground = ridge({100: 3.9, 106: 3.9})
    ground[102:105, 38:43] = 4.2  # above the ceiling, yet only 0.3 m higher
    assert len(passes_of(ground, ceiling=4.0)[0]) == 1
    ground[102:105, 38:43] = 4.5
    assert len(passes_of(ground, ceiling=4.0)[0]) == 2


def test_much_length_parts_places_of_equal_height():
    """A level plateau: the ends of a long ridge are joined by ever longer ways, so it is all one crossing."""
    assert len(passes_of(ridge({}, height=2.0), ceiling=4.0)[0]) == 1


def test_a_longer_way_over_a_lower_place_is_another_way():
    """A crest that falls steadily to one side: the shortest way and the lowest are not the same."""
    ground = ridge({}, height=3.0)
    ground[150:, 38:43] = np.linspace(3.0, 1.5, 50)[:, None]
    found, _ = passes_of(ground, ceiling=4.0)
    assert len(found) == 2
    assert found[0].cell[0] == pytest.approx(100, abs=2)
    assert found[1].level_m == pytest.approx(1.5)
    ground[150:, 38:43] = np.linspace(3.0, 2.6, 50)[:, None]
    assert len(passes_of(ground, ceiling=4.0)[0]) == 1


def test_of_two_places_on_one_slope_the_lower_stands_for_both():
    ground = ridge({}, height=3.0)
    ground[150:155, 38:43] = np.array([2.4, 1.6, 1.0, 1.6, 2.4])[:, None]  # a notch, far from the straight way
    found, _ = passes_of(ground, ceiling=4.0)
    assert len(found) == 2
    assert found[1].level_m == pytest.approx(1.0)


def test_the_flank_of_a_saddle_is_no_crossing_of_its_own():
    """A deep saddle close by: the shortest way climbs its flank, 5 % shorter and half a metre higher, and is no choice."""
    ground = ridge({}, height=6.0)
    ground[108:125, 38:43] = (1.0 + np.abs(np.arange(108, 125) - 116) * 0.35)[:, None]
    found, _ = passes_of(ground, ceiling=4.0)
    assert len(found) == 1


def test_no_place_allowed_no_crossing():
    assert passes_of(ridge({}), ceiling=4.0)[0] == []
    assert distinct_passes(np.zeros((4, 4), bool), np.zeros((4, 4)), np.zeros((4, 4))) == []


def test_paths_are_joined_where_they_do_not_meet_again():
    one, other = np.array([[0, 0], [0, 1]]), np.array([[0, 1], [1, 1]])
    assert join_paths(one, other).tolist() == [[0, 0], [0, 1], [1, 1]]
    assert join_paths(one, np.array([[0, 1], [0, 0]])) is None


def wandering(rng, rows):
    """A divide that wanders from row to row, with lengths and levels that wander too; some rows are closed."""
    col = np.clip(4 + np.cumsum(rng.integers(-1, 2, rows)), 1, 7)
    divide = np.zeros((rows, 9), bool)
    divide[np.arange(rows), col] = True
    along = np.abs(100.0 + np.cumsum(rng.normal(0.0, 2.0, rows))) + 50.0
    along[rng.random(rows) < 0.1] = np.inf
    level = np.cumsum(rng.normal(0.0, 0.25, rows))
    return divide, np.where(divide, along[:, None], np.inf), np.where(divide, level[:, None], 0.0)


@pytest.mark.parametrize("seed", range(40))
def test_no_two_crossings_are_one_and_the_shortest_comes_first(seed):
    divide, length, level = wandering(np.random.default_rng(seed), 80)
    passes = distinct_passes(divide, length, level)
    lengths = [one.length_m for one in passes]
    assert lengths == sorted(lengths)
    assert lengths[0] == length.min()
    for k, one in enumerate(passes):
        assert same_pass(divide, length, level, passes[:k], one) is None
        assert same_pass(divide, length, level, passes[k:], one) == one


def test_the_crossing_of_a_place_is_the_one_that_a_way_along_the_divide_joins_it_with():
    divide, length, level = np.zeros((60, 3), bool), np.full((60, 3), np.inf), np.zeros((60, 3))
    divide[:, 1] = True
    length[:, 1] = 100.0 + np.abs(np.arange(60) - 10)
    level[:, 1] = np.where(np.abs(np.arange(60) - 45) < 5, 1.0, 3.0)
    passes = distinct_passes(divide, length, level)
    assert [one.cell[0] for one in passes] == [10, 41]
    beside = Pass((13, 1), 3.0, 104.0)
    assert same_pass(divide, length, level, passes, beside) == passes[0]
    assert same_pass(divide, length, level, passes[1:], beside) is None
    length[54:], level[50:53] = np.inf, 4.0  # closed by what was asked of the others, yet a way is known
    assert same_pass(divide, length, level, passes, Pass((58, 1), 3.0, 200.0)) is None
    level[50:53] = 3.4
    assert same_pass(divide, length, level, passes, Pass((58, 1), 3.0, 200.0)) == passes[0]
