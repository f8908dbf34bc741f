"""The heap, the passes of patches and the flooding, by laws and closed forms, compiled and as plain Python."""

import heapq
import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from routing.search import flooding
from routing.search.moves import move_table

pytestmark = pytest.mark.plain

seeds = st.integers(0, 2**32 - 1)


def heap_of(size):
    return flooding.Heap(np.zeros(size), np.zeros(size, np.int32)), np.zeros(flooding.STATE_SIZE, np.int64)


def basin_of(level, walls=(), goals=()):
    rows, cols = level.shape
    flags = np.zeros(level.shape, np.uint8)
    for bit, cells in ((flooding.WALL, walls), (flooding.GOAL, goals)):
        for cell in cells:
            flags[cell] |= bit
    table = move_table(8)
    size = level.size
    return flooding.Basin(
        level.ravel().astype(float),
        flags.ravel(),
        np.full(size, math.inf),
        np.full(size, flooding.PARENT_NONE, np.uint8),
        table.drow,
        table.dcol,
        rows,
        cols,
    )


def start(basin, cell, room=1000):
    heap, state = heap_of(room)
    basin.crest[cell] = basin.level[cell]
    basin.parent[cell] = flooding.PARENT_SOURCE
    flooding.heap_push(heap, state, basin.level[cell], cell)
    return heap, state


# ---------------------------------------------------------------- the heap


@given(st.lists(st.one_of(st.floats(-1e3, 1e3), st.integers(0, 3).map(float), st.none()), max_size=60))
def test_the_heap_gives_what_pythons_own_gives(actions):
    """Numbers are pushed, ``None`` pops (ties included); at the end all is taken out, in rising order."""
    heap, state = heap_of(60)
    keys, own = [], []
    for action in [*actions, *[None] * len(actions)]:
        if action is not None:
            flooding.heap_push(heap, state, action, len(keys))
            heapq.heappush(own, action)
            keys.append(action)
        elif own:
            assert keys[flooding.heap_pop(heap, state)] == heapq.heappop(own)
        assert state[flooding.WAITING] == len(own)


def test_no_entry_is_lost_or_taken_twice():
    heap, state = heap_of(200)
    keys = np.random.default_rng(0).integers(0, 9, 200)
    for cell, key in enumerate(keys):
        flooding.heap_push(heap, state, float(key), cell)
    assert sorted(flooding.heap_pop(heap, state) for _ in keys) == list(range(200))


# ---------------------------------------------------------------- the pass between two cells


@given(st.lists(st.floats(0.0, 10.0), min_size=4, max_size=4))
def test_a_patch_is_passed_at_its_saddle_only_where_both_other_corners_are_higher(corners):
    """The saddle is where both slopes of the bilinear patch are zero: worked out from that, not from the formula."""
    here, one, other, there = corners
    basin = basin_of(np.array([[here, one], [other, there]]))
    found = flooding.pass_level(basin, 0, 0, 1, 1)
    assert found == pytest.approx(flooding.pass_level(basin, 1, 1, 0, 0))
    if min(one, other) <= max(here, there):
        assert found == max(here, there)
        return
    assert max(here, there) - 1e-9 <= found <= min(one, other) + 1e-9
    along, down, twist = one - here, other - here, here + there - one - other
    col, row = -down / twist, -along / twist
    assert found == pytest.approx(here + along * col + down * row + twist * row * col, abs=1e-9)


@given(st.floats(0.0, 10.0), st.floats(0.0, 10.0))
def test_along_a_grid_line_the_higher_end_counts(here, there):
    basin = basin_of(np.array([[here, there], [50.0, 50.0]]), walls=[(1, 0), (1, 1)])
    assert flooding.pass_level(basin, 0, 0, 0, 1) == max(here, there)


@pytest.mark.parametrize("wall", [(0, 1), (1, 0)])
def test_a_patch_with_a_wall_has_no_pass(wall):
    assert flooding.pass_level(basin_of(np.zeros((2, 2)), walls=[wall]), 0, 0, 1, 1) == math.inf


# ---------------------------------------------------------------- the flooding


def by_relaxing(level, source):
    """Lowest highest ground on the way to each cell, by going over all cells until nothing changes."""
    basin = basin_of(level)
    rows, cols = level.shape
    crest = np.full(level.shape, math.inf)
    crest[source] = level[source]
    while True:
        before = crest.copy()
        for (row, col), _ in np.ndenumerate(level):
            for drow, dcol in zip(basin.drow, basin.dcol, strict=True):
                near = (row + drow, col + dcol)
                if 0 <= near[0] < rows and 0 <= near[1] < cols:
                    over = flooding.pass_level(basin, int(near[0]), int(near[1]), row, col)
                    crest[row, col] = min(crest[row, col], max(crest[near], over))
        if np.array_equal(before, crest):
            return crest


@settings(max_examples=10)
@given(seeds)
def test_crests_are_those_of_relaxing_until_nothing_changes(seed):
    level = np.random.default_rng(seed).uniform(0.0, 9.0, (4, 5))
    basin = basin_of(level)
    heap, state = start(basin, 0)
    assert flooding.flood(basin, heap, state, 1000) == flooding.DONE
    assert state[flooding.COUNT] == level.size
    np.testing.assert_allclose(basin.crest.reshape(level.shape), by_relaxing(level, (0, 0)))


@settings(max_examples=15)
@given(seeds)
def test_cells_are_taken_one_by_one_in_rising_order(seed):
    basin = basin_of(np.random.default_rng(seed).uniform(0.0, 9.0, (6, 6)))
    heap, state = start(basin, 14)
    taken, seen = [], np.zeros(36, bool)
    while flooding.flood(basin, heap, state, 1) == flooding.SLICE_OVER:
        now = (basin.flags & flooding.TAKEN) != 0
        (new,) = np.flatnonzero(now & ~seen)
        taken.append(basin.crest[new])
        seen = now
    assert len(taken) in {35, 36}
    assert taken == sorted(taken)


def test_a_full_heap_is_told_before_it_runs_over():
    basin = basin_of(np.zeros((3, 3)))
    heap, state = start(basin, 4, room=8)
    assert flooding.flood(basin, heap, state, 100) == flooding.HEAP_SMALL
    assert state[flooding.WAITING] == 1
    assert not (basin.flags & flooding.TAKEN).any()


def test_the_goal_that_is_lowest_to_reach_ends_the_flooding():
    level = np.array([[9.0, 4.0, 0.0, 6.0, 9.0]])
    basin = basin_of(level, goals=[(0, 0), (0, 4)])
    basin.level[3] = 3.0
    heap, state = start(basin, 2)
    assert flooding.flood(basin, heap, state, 100) == flooding.GOAL_MET
    assert state[flooding.GOAL_CELL] in {0, 4}
    basin = basin_of(np.array([[8.0, 4.0, 0.0, 6.0, 7.5]]), goals=[(0, 0), (0, 4)])
    heap, state = start(basin, 2)
    assert flooding.flood(basin, heap, state, 100) == flooding.GOAL_MET
    assert state[flooding.GOAL_CELL] == 4
    assert basin.crest[4] == 7.5


def test_walls_end_it_without_a_goal():
    basin = basin_of(np.zeros((1, 5)), walls=[(0, 3)], goals=[(0, 4)])
    heap, state = start(basin, 0)
    assert flooding.flood(basin, heap, state, 100) == flooding.DONE
    assert (basin.flags & flooding.TAKEN).nonzero()[0].tolist() == [0, 1, 2]


# ---------------------------------------------------------------- ratings


@given(seeds)
def test_ratings_are_the_last_step_of_the_table_that_fits(seed):
    """Against going through the table step by step; all its columns fall."""
    rng = np.random.default_rng(seed)
    steps = np.sort(rng.uniform(0.0, 9.0, (12, 4)), axis=0)[::-1].copy()
    steps[:, 1] = steps[::-1, 1] * 0.05  # the gradient grows with the discharge
    steps[:, 3] *= 10.0
    level = rng.uniform(0.0, 9.0, 40)
    before, after = rng.uniform(0.0, 40.0, (2, 40)).astype(np.float32)
    rating = np.zeros(40, np.uint8)
    flooding.rate_cells(level, before, after, steps, rating)
    for cell in range(40):
        whole = before[cell] + after[cell]
        fits = [level[cell] <= min(a - b * before[cell], c) and whole <= d for a, b, c, d in steps]
        assert fits == sorted(fits, reverse=True)
        assert rating[cell] == (sum(fits) - 1 if any(fits) else flooding.NO_RATING)


def test_the_widest_way_names_its_narrowest_cell():
    """Two ways round a wall of 255: by 5 above and by 7 below, where the 6 beside the goal is narrower still."""
    rating = np.array([[9, 5, 9], [9, 255, 9], [9, 7, 6]], np.uint8)
    table = move_table(8)
    orthogonal = (table.drow == 0) | (table.dcol == 0)
    at, neck = flooding.widest_way(rating.ravel(), table.drow[orthogonal], table.dcol[orthogonal], 3, 3, 5)
    assert (at, neck) == (6, 8)
    rating[2, 1] = 255
    assert flooding.widest_way(rating.ravel(), table.drow[orthogonal], table.dcol[orthogonal], 3, 3, 5) == (5, 1)
    rating[0, 1] = 255
    assert flooding.widest_way(rating.ravel(), table.drow[orthogonal], table.dcol[orthogonal], 3, 3, 5) == (-1, -1)
