"""The bound by cells, against scipy's maximum spanning forest and against the search itself."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.sparse import coo_array
from scipy.sparse.csgraph import breadth_first_order, minimum_spanning_tree
from twins import grid_search as twin

from routing.search import Limitation, flooding, prepare_grid, search_grid
from routing.search.moves import move_table
from routing.search.widest import bound_by_cells, compact, spread


def by_spanning_tree(rating, neighbours):
    """Widest way between the first and last cell by the maximum spanning tree (source: scipy)."""
    rows, cols = rating.shape
    index = np.arange(rows * cols).reshape(rows, cols)
    edges = {}
    for cell in np.ndindex(rows, cols):
        for dr, dc in twin.MOVES[neighbours]:
            end = (cell[0] + dr, cell[1] + dc)
            if 0 <= end[0] < rows and 0 <= end[1] < cols and 255 not in (rating[cell], rating[end]):
                edges[index[cell], index[end]] = 300.0 - min(rating[cell], rating[end])
    if not edges:
        return -1
    ends = np.array(list(edges)).T
    tree = minimum_spanning_tree(coo_array((list(edges.values()), ends), shape=(rows * cols,) * 2).tocsr())
    both = tree + tree.T
    order, before = breadth_first_order(both, 0, directed=False)
    cell, worst = rows * cols - 1, -1.0
    if cell not in order:
        return -1
    while cell != 0:
        worst = max(worst, both[before[cell], cell])
        cell = before[cell]
    return int(300.0 - worst)


@pytest.mark.plain
@settings(max_examples=40, deadline=None)
@given(st.integers(0, 2**32 - 1), st.sampled_from([8, 16]))
def test_widest_way_equals_the_spanning_tree(seed, neighbours):
    rng = np.random.default_rng(seed)
    rating = rng.integers(0, 9, (5, 6)).astype(np.uint8)
    rating[rng.random(rating.shape) < 0.2] = flooding.NO_RATING
    rating[0, 0] = rating[-1, -1] = 8
    table = move_table(neighbours)
    at, neck = flooding.widest_way(rating.ravel(), table.drow, table.dcol, 6, 0, 29)
    assert at == by_spanning_tree(rating, neighbours)
    if at >= 0:
        assert rating.ravel()[neck] == at


@pytest.mark.plain
def test_cells_are_rated_by_ceiling_cap_and_length():
    steps = np.array([[5.0, 0.0, 9.0, 100.0], [4.0, 0.1, 9.0, 50.0], [3.0, 0.2, 2.5, 20.0]])
    level = np.array([6.0, 4.5, 2.4, 2.6, 2.4, 2.4])
    before = np.array([0.0, 1.0, 1.0, 1.0, 1.0, 1.0], dtype=np.float32)
    after = np.array([0.0, 1.0, 1.0, 1.0, 30.0, 200.0], dtype=np.float32)
    rating = np.zeros(6, dtype=np.uint8)
    flooding.rate_cells(level, before, after, steps, rating)
    assert rating.tolist() == [flooding.NO_RATING, 0, 2, 1, 1, flooding.NO_RATING]


def test_compact_lengths_stay_below():
    found = search_grid(
        prepare_grid(np.random.default_rng(1).uniform(0, 9, (40, 40)), 1.1, 1.3), [(0, 0)], Limitation()
    )
    small = compact(found)
    assert small.length_m.dtype == np.float32
    assert np.all(small.length_m.astype(np.float64) <= found.length_m)
    np.testing.assert_allclose(small.length_m, found.length_m, rtol=1e-6, atol=1e-30)
    assert small.path_to(30, 20).tolist() == found.path_to(30, 20).tolist()


def test_the_bound_holds_and_the_joined_way_runs_through_the_gap():
    ground = np.zeros((40, 41))
    ground[:, 20:22] = 6.0  # two cells wide: a move may jump over one, as far as cells alone can tell
    ground[33, 20:22] = 2.0
    grid = prepare_grid(ground, 1.0, 1.0)
    ends = ((5, 2), (5, 38))
    ways = tuple(compact(search_grid(grid, [end], Limitation(9.0))) for end in ends)
    figures = spread(0.0, 5.0)
    limits = [Limitation(6.5 - figure, 0.01 * figure, longest_m=1000.0) for figure in figures]
    bound = bound_by_cells(grid, ends, ways, limits, figures)
    length = ways[0].length_m[33, 21]
    assert bound.high == pytest.approx(4.5 / (1 + 0.01 * length), abs=2 * 5.0 / 249)  # closed form at the gap
    assert {(33, 20), (33, 21)} & {tuple(cell) for cell in bound.way.tolist()}
    assert bound.way[0].tolist() == [5, 2]
    assert bound.way[-1].tolist() == [5, 38]
