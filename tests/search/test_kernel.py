"""The rules of single moves against dense sampling, closed forms and the slow twin, compiled and as plain Python."""

import math
from itertools import product

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from twins import grid_search as twin

from routing.search import kernel, prepare_grid
from routing.search.moves import move_list, move_table

pytestmark = pytest.mark.plain

seeds = st.integers(0, 2**32 - 1)
INF = math.inf


def patch(seed, neighbours=32, **asks):
    """A grid of 7 x 7 cells (every move from its middle stays on it) and its ground."""
    ground = np.random.default_rng(seed).uniform(0.0, 10.0, (7, 7))
    return prepare_grid(ground, 1.0, 1.0, neighbours=neighbours, **asks), ground


def rules(level=INF, gradient=0.0, cap=INF, *, bilinear=True, along=False, longest=INF):
    ceiling = bool(min(level, cap) < INF)
    return kernel.Rules(level, gradient, cap, ceiling, bilinear, along, longest, -1, -1, 0.0, 1.0, 1.0)


def field_of(grid, flags=None):
    size = grid.flags.size
    return kernel.Field(np.full(size, INF), np.full(size, 255, np.uint8), grid.flags.copy() if flags is None else flags)


# ---------------------------------------------------------------- how high the ground of a move is


@settings(max_examples=15)
@given(seeds)
def test_the_highest_ground_of_every_move_is_the_twins(seed):
    grid, ground = patch(seed)
    for number, move in enumerate(move_list(32)):
        expected = twin.highest_bilinear(ground, (3, 3), move)
        assert kernel.edge_high(grid.ground, grid.moves, 3, 3, number, 0.0) == pytest.approx(expected, abs=1e-12)


@settings(max_examples=15)
@given(seeds, st.floats(0.0, 20.0))
def test_tilted_ground_equals_dense_sampling(seed, tilt):
    """Never below any sample, and above the highest by no more than a parabola can bulge between two."""
    grid, ground = patch(seed)
    for number, move in enumerate(move_list(32)):
        share, level = twin.along_edge(ground, (3, 3), move, 1.0, parts=200)
        sampled = max(float(np.max(level + tilt * (share - 1.0))), ground[3, 3] - tilt)
        found = kernel.edge_high(grid.ground, grid.moves, 3, 3, number, tilt)
        # The bend of a patch of ground in 0..10 is at most 20 per share squared, of a step of 1/200: 20 / (4 x 200^2).
        assert sampled - 1e-12 <= found <= sampled + 20.0 / (4 * 199**2)


@pytest.mark.parametrize("tilt", [0.0, 4.0, 19.0, 21.0])
def test_a_saddle_under_a_tilt_has_its_closed_form(tilt):
    """Ground 20 s (1 - s) on the diagonal; with t (s - 1) added its vertex is at 1/2 + t/40, or the far end counts."""
    grid = prepare_grid(np.array([[0.0, 10.0], [10.0, 0.0]]), 1.0, 1.0, neighbours=8)
    move = move_list(8).index((1, 1))
    expected = (20.0 + tilt) ** 2 / 80.0 - tilt if tilt < 20.0 else 0.0
    assert kernel.edge_high(grid.ground, grid.moves, 0, 0, move, tilt) == pytest.approx(expected)


@settings(max_examples=10)
@given(seeds)
def test_a_move_and_its_way_back_are_equally_high(seed):
    grid, _ = patch(seed)
    moves = move_list(32)
    for number, (row, col) in enumerate(moves):
        back = moves.index((-row, -col))
        for high in (kernel.crossed_high, kernel.corner_high):
            there = high(grid.ground, grid.moves, 3, 3, number)
            assert there == high(grid.ground, grid.moves, 3 + row, 3 + col, back)
        there = kernel.edge_high(grid.ground, grid.moves, 3, 3, number, 0.0)
        assert there == pytest.approx(kernel.edge_high(grid.ground, grid.moves, 3 + row, 3 + col, back, 0.0))


@settings(max_examples=15)
@given(seeds)
def test_corners_and_crossed_cells_are_the_twins(seed):
    grid, ground = patch(seed)
    for number, move in enumerate(move_list(32)):
        ends = [(0, 0), move]
        corners = [(r + dr, c + dc) for r, c in twin.patches(move) for dr, dc in product((0, 1), repeat=2)]
        for high, cells in ((kernel.corner_high, corners), (kernel.crossed_high, twin.crossed_cells(move))):
            expected = max(ground[3 + r, 3 + c] for r, c in [*ends, *cells])
            assert high(grid.ground, grid.moves, 3, 3, number) == expected
        between = kernel.edge_high(grid.ground, grid.moves, 3, 3, number, 0.0)
        assert kernel.corner_high(grid.ground, grid.moves, 3, 3, number) >= between - 1e-12


@settings(max_examples=10)
@given(seeds, st.booleans())
def test_the_heights_of_a_path_are_those_of_its_moves(seed, bilinear):
    grid, ground = patch(seed)
    numbers = np.arange(32)
    start = np.full(32, 3 * 7 + 3)
    found = kernel.path_highs(grid.ground, grid.moves, bilinear, start, numbers)
    rule = "bilinear" if bilinear else "cells"
    steps, free = (np.ones(7), np.ones(7)), np.zeros((7, 7), dtype=bool)
    expected = [twin.edge(ground, steps, (3, 3), move, free, rule)[1] for move in move_list(32)]
    np.testing.assert_allclose(found, expected, rtol=1e-12)


# ---------------------------------------------------------------- walls


@settings(max_examples=60)
@given(seeds, st.sampled_from([0.1, 0.3, 0.6]), st.booleans())
def test_walls_and_gaps_close_the_moves_that_the_twin_refuses(seed, share, bilinear):
    rng = np.random.default_rng(seed)
    ground = rng.uniform(0.0, 5.0, (7, 7))
    barred = rng.random((7, 7)) < share
    ground[rng.random((7, 7)) < share / 3] = np.nan
    barred[3, 3], ground[3, 3] = False, 1.0
    grid = prepare_grid(ground, 1.0, 1.0, barred=barred, neighbours=32)
    steps = (np.ones(7), np.ones(7))
    for number, move in enumerate(move_list(32)):
        found = kernel.is_open(grid.ground, grid.moves, grid.flags, bilinear, 3 * 7 + 3, number)
        expected = twin.edge(ground, steps, (3, 3), move, barred, "bilinear" if bilinear else "cells") is not None
        assert found == expected, move


def test_a_cell_beside_a_corner_alone_does_not_close_it():
    """One of the two cells at a diagonal's corner may be barred; both close it."""
    move = move_list(8).index((1, 1))
    for walls, expected in (([(0, 1)], True), ([(1, 0)], True), ([(0, 1), (1, 0)], False), ([(1, 1)], False)):
        barred = np.zeros((2, 2), dtype=bool)
        barred[tuple(zip(*walls, strict=True))] = True
        grid = prepare_grid(np.zeros((2, 2)), 1.0, 1.0, barred=barred, neighbours=8)
        assert kernel.is_open(grid.ground, grid.moves, grid.flags, True, 0, move) == expected


# ---------------------------------------------------------------- the ceiling


@settings(max_examples=60)
@given(
    seeds,
    st.floats(3.0, 11.0),
    st.sampled_from([0.0, 0.05, 1.0, 4.0]),
    st.sampled_from([INF, 6.0, 8.5]),
    st.sampled_from(["cells", "far end", "along"]),
)
def test_the_ceiling_is_held_as_dense_sampling_says(seed, level, gradient, cap, rule):
    """Moves within a hair of the ceiling are left out: there the sampling cannot tell."""
    grid, ground = patch(seed)
    start = 2.0
    level += gradient * start
    under = rules(level, gradient, cap, bilinear=rule != "cells", along=rule == "along")
    for number, move in enumerate(move_list(32)):
        length = math.hypot(*move, ground[3 + move[0], 3 + move[1]] - ground[3, 3])
        share, ground_at = twin.along_edge(ground, (3, 3), move, 1.0, parts=100)
        share, ground_at = np.append(share, 0.0), np.append(ground_at, ground[3, 3])
        if rule == "cells":
            ground_at = np.array([ground[3 + r, 3 + c] for r, c in [*twin.crossed_cells(move), move]])
        at = start + length * (share if rule == "along" else 1.0)
        room = float(np.min(np.minimum(level - gradient * at, cap) - ground_at))
        if abs(room) > 1e-3:
            found = kernel.under_ceiling(grid.ground, grid.moves, under, 24, number, start, start + length)
            assert found == (room > 0.0), (move, room)


@pytest.mark.parametrize("along", [True, False])
def test_along_the_move_the_ceiling_may_be_higher_than_at_its_far_end(along):
    """A hump of 5 m half way: the ceiling falls from 6 m at its foot to 4.6 m at its end, and is 5.3 m above it."""
    grid = prepare_grid(np.array([[0.0, 10.0], [10.0, 0.0]]), 1.0, 1.0, neighbours=8)
    move = move_list(8).index((1, 1))
    falling = rules(6.0, 1.4 / math.sqrt(2.0), along=along)
    assert kernel.under_ceiling(grid.ground, grid.moves, falling, 0, move, 0.0, math.sqrt(2.0)) == along


def test_the_cap_does_not_fall():
    grid = prepare_grid(np.array([[0.0, 10.0], [10.0, 0.0]]), 1.0, 1.0, neighbours=8)
    move = move_list(8).index((1, 1))
    for cap, fits in ((5.0 + 1e-9, True), (5.0 - 1e-9, False)):
        for along in (True, False):
            capped = rules(100.0, 1.0, cap, along=along)
            assert kernel.under_ceiling(grid.ground, grid.moves, capped, 0, move, 0.0, math.sqrt(2.0)) == fits


@pytest.mark.parametrize(
    ("ask", "start", "fits"),
    [
        ({}, 0.0, True),
        ({"level": 5.0}, 0.0, True),
        ({"level": 4.999}, 0.0, False),
        ({"level": 5.9, "gradient": 0.3}, 3.0, True),
        ({"level": 5.9, "gradient": 0.3}, 3.1, False),
        ({"level": 9.0, "cap": 5.0}, 0.0, True),
        ({"level": 9.0, "cap": 4.999}, 0.0, False),
        ({"longest": 3.0}, 3.0, True),
        ({"longest": 3.0}, 3.001, False),
    ],
)
def test_a_source_keeps_to_ceiling_cap_and_length(ask, start, fits):
    grid = prepare_grid(np.full((2, 2), 5.0), 1.0, 1.0, neighbours=8)
    assert kernel.source_fits(grid.ground, rules(**ask), field_of(grid), 0, start) == fits


def test_a_source_on_a_wall_in_a_gap_or_no_better_than_known_is_left_out():
    ground, barred = np.array([[5.0, np.nan], [5.0, 5.0]]), np.array([[True, False], [False, False]])
    grid = prepare_grid(ground, 1.0, 1.0, barred=barred, neighbours=8)
    field = field_of(grid)
    field.length[3] = 2.0
    fits = [kernel.source_fits(grid.ground, rules(), field, cell, 2.0) for cell in range(4)]
    assert fits == [False, False, True, False]
    assert kernel.source_fits(grid.ground, rules(), field, 3, 1.999)


# ---------------------------------------------------------------- all rules of a move


def test_a_blocked_move_is_refused_in_its_one_direction():
    blocked = np.zeros((2, 2, 8), dtype=bool)
    east, west = move_list(8).index((0, 1)), move_list(8).index((0, -1))
    blocked[0, 0, east] = True
    grid = prepare_grid(np.zeros((2, 2)), 1.0, 1.0, blocked_moves=blocked, neighbours=8)
    field = field_of(grid)
    assert not kernel.move_allowed(grid.ground, grid.moves, rules(), field, 0, east, 1.0)
    assert kernel.move_allowed(grid.ground, grid.moves, rules(), field, 1, west, 1.0)
    assert kernel.move_allowed(grid.ground, grid.moves, rules(), field, 2, east, 1.0)


def test_without_a_ceiling_height_does_not_matter_and_with_one_it_does():
    grid = prepare_grid(np.array([[0.0, 50.0]]), 1.0, 1.0, neighbours=8)
    field, east = field_of(grid), move_list(8).index((0, 1))
    field.length[0] = 0.0
    assert kernel.move_allowed(grid.ground, grid.moves, rules(), field, 0, east, 51.0)
    assert kernel.move_allowed(grid.ground, grid.moves, rules(50.0), field, 0, east, 51.0)
    assert not kernel.move_allowed(grid.ground, grid.moves, rules(49.9), field, 0, east, 51.0)


def test_settling_stops_for_each_reason_and_goes_on_where_it_stopped():
    """A level corridor of 40 cells of 2 m: the label of cell n is 2 n, in rising order."""
    grid = prepare_grid(np.zeros((1, 40)), 2.0, 2.0, neighbours=8)
    field = field_of(grid)
    field.flags[30] |= kernel.TARGET
    queue = kernel.Queue(
        np.full(8, -1, np.int32),
        np.empty(20, np.int32),
        np.empty(20, np.int32),
        1.0 / (2.0 * (1 - 1e-9)),
        np.zeros(1, np.int32),
        np.zeros(1),
    )
    state = np.zeros(kernel.STATE_SIZE, dtype=np.int64)
    state[kernel.FREE], state[kernel.TARGETS_LEFT] = -1, 1
    ask = (grid.ground, grid.moves, rules(), queue, field, state)
    assert kernel.settle(*ask, 10) == kernel.SLICE_OVER
    assert state[kernel.SETTLED_CELLS] == 10
    assert np.flatnonzero(field.flags & kernel.SETTLED).tolist() == list(range(10))
    assert kernel.settle(*ask, 100) == kernel.TARGETS_MET
    np.testing.assert_allclose(field.length[:31], 2.0 * np.arange(31))
    assert kernel.settle(*ask, 100) == kernel.DONE  # the target itself was not left: nothing waits
    small = queue._replace(cell=np.empty(8, np.int32), next=np.empty(8, np.int32), head=np.full(8, -1, np.int32))
    state[:] = 0
    state[kernel.FREE] = -1
    assert kernel.settle(*ask[:3], small, field_of(grid), state, 100) == kernel.POOL_SMALL


def test_the_bits_of_the_flags_do_not_overlap():
    bits = [kernel.BARRED, kernel.NO_GROUND, kernel.CAREFUL, kernel.SETTLED, kernel.TARGET]
    assert sum(bits) == np.bitwise_or.reduce(bits)
    assert max(bits) <= np.iinfo(np.uint8).max
    assert move_table(32).drow.size <= min(kernel.PARENT_NONE, kernel.PARENT_SOURCE)
