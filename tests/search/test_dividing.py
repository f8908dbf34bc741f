"""The flooding kernel against a flood with a heap, and by hand."""

import heapq

import numpy as np
import pytest

from routing.search.dividing import NOBODY, RANKS, spread_marks


def flooded(rank, mark, open_cell):
    """The same rule with a heap: the lowest waiting cell first, and of equals the one that waited longest."""
    mark, count = mark.copy(), 0
    heap = []
    for cell in zip(*np.nonzero(mark), strict=True):
        heapq.heappush(heap, (int(rank[cell]), count, cell))
        count += 1
    while heap:
        level, _, (row, col) = heapq.heappop(heap)
        for to in np.ndindex(3, 3):
            at = row + to[0] - 1, col + to[1] - 1
            if 0 <= at[0] < rank.shape[0] and 0 <= at[1] < rank.shape[1] and open_cell[at] and mark[at] == NOBODY:
                mark[at] = mark[row, col]
                heapq.heappush(heap, (max(level, int(rank[at])), count, at))
                count += 1
    return mark


def spread(rank, mark, open_cell):
    found = mark.copy()
    spread_marks(rank.ravel(), found.ravel(), open_cell.ravel(), rank.shape[1])
    return found


@pytest.mark.plain
@pytest.mark.parametrize("heights", [4, 60, RANKS])
@pytest.mark.parametrize("seed", range(4))
def test_equals_a_flood_with_a_heap(seed, heights):
    """Few heights make flats and ties, which are shared from both sides in the order of waiting."""
    rng = np.random.default_rng(seed)
    rank = rng.integers(0, heights, (14, 17)).astype(np.uint16)
    mark = np.zeros(rank.shape, np.uint8)
    mark[2, 2], mark[2, 3], mark[11, 14] = 1, 1, 2
    open_cell = rng.random(rank.shape) > 0.15
    open_cell[mark > 0] = True
    np.testing.assert_array_equal(spread(rank, mark, open_cell), flooded(rank, mark, open_cell))


@pytest.mark.plain
def test_a_basin_behind_a_rim_belongs_to_who_comes_over_the_lower_side():
    rank = np.array([[0, 5, 1, 3, 0]], np.uint16)
    mark = np.array([[1, 0, 0, 0, 2]], np.uint8)
    assert spread(rank, mark, np.ones((1, 5), bool)).tolist() == [[1, 1, 2, 2, 2]]
    rank[0, 1] = 2
    assert spread(rank, mark, np.ones((1, 5), bool)).tolist() == [[1, 1, 1, 2, 2]]


@pytest.mark.plain
def test_walls_keep_no_mark_and_let_none_through():
    rank = np.zeros((3, 5), np.uint16)
    mark = np.zeros((3, 5), np.uint8)
    mark[1, 0] = 1
    open_cell = np.ones((3, 5), bool)
    open_cell[:, 2] = False
    assert spread(rank, mark, open_cell).tolist() == [[1, 1, 0, 0, 0]] * 3
