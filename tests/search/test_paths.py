"""Paths as the search judges them, against the slow twin; ways out of the window, by closed forms."""

import math
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from twins import grid_search as twin

from routing.errors import InputError
from routing.search import Limitation, border_band, may_escape, move_list, path_edges, prepare_grid, search_grid

seeds = st.integers(0, 2**32 - 1)
neighbour_counts = st.sampled_from([8, 16, 32])


def walk(seed, neighbours, steps=12, size=9):
    """Ground, steps of the rows and a random walk on it."""
    rng = np.random.default_rng(seed)
    ground = rng.uniform(0.0, 8.0, (size, size))
    step_x, step_y = rng.uniform(0.5, 3.0, (2, size))
    cells = [(4, 4)]
    while len(cells) <= steps:
        move = twin.MOVES[neighbours][rng.integers(neighbours)]
        cell = (cells[-1][0] + move[0], cells[-1][1] + move[1])
        if min(cell) >= 0 and max(cell) < size:
            cells.append(cell)
    return ground, (step_x, step_y), np.array(cells)


def edges_by_twin(ground, steps, cells, rule):
    free = np.zeros(ground.shape, dtype=bool)
    for one, other in pairwise(cells.tolist()):
        move = (other[0] - one[0], other[1] - one[1])
        yield (tuple(one), move, *twin.edge(ground, steps, tuple(one), move, free, rule))


@pytest.mark.plain
@settings(max_examples=40)
@given(seeds, neighbour_counts, st.sampled_from(["bilinear", "cells"]), st.sampled_from([0.0, 17.5]))
def test_by_the_far_end_rule_a_path_is_the_twins(seed, neighbours, rule, start):
    ground, steps, cells = walk(seed, neighbours)
    found = path_edges(prepare_grid(ground, *steps, neighbours=neighbours), cells, Limitation(rule=rule), start)
    lengths, highs = zip(*[edge[2:] for edge in edges_by_twin(ground, steps, cells, rule)], strict=True)
    np.testing.assert_allclose(found.at_length_m, start + np.concatenate([[0.0], np.cumsum(lengths)]))
    np.testing.assert_allclose(found.at_level_m, [ground[4, 4], *highs])
    assert found.length_m == pytest.approx(start + sum(lengths))
    np.testing.assert_array_equal(found.cells, cells)


@pytest.mark.plain
@settings(max_examples=40)
@given(seeds, neighbour_counts)
def test_along_the_edge_a_path_is_the_twins_place_by_place(seed, neighbours):
    ground, steps, cells = walk(seed, neighbours)
    grid = prepare_grid(ground, *steps, neighbours=neighbours)
    found = path_edges(grid, cells, Limitation(along=True))
    count = len(cells) - 1
    at, level = found.at_length_m[1 : 1 + 24 * count], found.at_level_m[1 : 1 + 24 * count]
    highest_at, highest = found.at_length_m[1 + 24 * count :], found.at_level_m[1 + 24 * count :]
    assert found.at_level_m[0] == ground[4, 4]
    before = 0.0
    for edge, (cell, move, length, high) in enumerate(edges_by_twin(ground, steps, cells, "bilinear")):
        places = slice(24 * edge, 24 * edge + 24)
        np.testing.assert_allclose(at[places], before + length * np.arange(1, 25) / 24)
        on_edge, ground_there = twin.along_edge(ground, cell, move, 1.0, parts=481)
        if 0 in move:  # ground is straight along a grid line
            ground_there = np.array([ground[cell], ground_there[-1]])
            on_edge = np.array([0.0, 1.0])
        np.testing.assert_allclose(level[places], np.interp(np.arange(1, 25) / 24, on_edge, ground_there), atol=1e-4)
        # The highest place is told exactly in height, and in length to less than one of the 24 spaces.
        assert highest[edge] == pytest.approx(high, abs=1e-9)
        share = (highest_at[edge] - before) / length
        near = np.interp(np.clip([share - 1 / 24, share, share + 1 / 24], 0, 1), on_edge, ground_there)
        window = (on_edge >= share - 1 / 24) & (on_edge <= share + 1 / 24)
        assert max(near.max(), ground_there[window].max(initial=-1.0)) >= high - 1e-3 or ground[cell] == high
        before += length


@pytest.mark.plain
@pytest.mark.parametrize("end", [3.0, 7.0, 12.0])
def test_the_highest_place_of_a_diagonal_has_its_closed_form(end):
    """Ground 20 s - (20 - end) s^2: highest at s = 10 / (20 - end), between two of the places looked at; or at the end."""
    grid = prepare_grid(np.array([[0.0, 10.0], [10.0, end]]), 3.0, 4.0, neighbours=8)
    found = path_edges(grid, np.array([[0, 0], [1, 1]]), Limitation(along=True))
    share = min(10.0 / (20.0 - end), 1.0)
    assert found.at_length_m[-1] == pytest.approx(share * math.sqrt(25.0 + end**2))
    assert found.at_level_m[-1] == pytest.approx(20.0 * share - (20.0 - end) * share**2)


@settings(max_examples=25)
@given(seeds, st.sampled_from([0.0, 0.05, 0.3]), st.booleans())
def test_what_the_search_lets_through_its_own_figures_allow(seed, gradient, along):
    ground = np.random.default_rng(seed).uniform(0.0, 5.0, (12, 14))
    ground[0, 0] = 0.0
    grid = prepare_grid(ground, 1.0, 1.3)
    limitation = Limitation(4.5 + 8 * gradient, gradient, cap_level_m=4.8, along=along)
    found = search_grid(grid, [(0, 0)], limitation)
    for goal in np.argwhere(np.isfinite(found.length_m))[::9]:
        path = path_edges(grid, found.path_to(*goal), limitation)
        assert path.length_m == pytest.approx(found.length_m[tuple(goal)], rel=1e-12)
        top = np.minimum(limitation.ceiling_level_m - gradient * path.at_length_m, 4.8)
        # Along the edge, the place of the highest ground is known to half of 1/24 of the edge.
        slack = 1e-9 + (gradient * 6.0 / 48 if along else 0.0)
        assert np.all(path.at_level_m <= top + slack)


def test_a_path_of_one_cell_is_its_own_start():
    found = path_edges(prepare_grid(np.full((3, 3), 2.0), 1.0, 1.0), np.array([[1, 1]]), Limitation(), 4.0)
    assert (found.length_m, found.at_length_m.tolist(), found.at_level_m.tolist()) == (4.0, [4.0], [2.0])


@pytest.mark.parametrize("cells", [[(0, 0), (0, 2)], [(0, 0), (2, 1)], [(0, 0), (0, 0)]])
def test_cells_that_no_move_joins_are_refused(cells):
    grid = prepare_grid(np.zeros((4, 4)), 1.0, 1.0, neighbours=8)
    with pytest.raises(InputError, match="not one move apart") as caught:
        path_edges(grid, np.array(cells), Limitation())
    assert caught.value.problems[0].allowed == "8 moves"


# ---------------------------------------------------------------- the window


@given(neighbour_counts, st.integers(1, 8), st.integers(1, 8), st.tuples(*[st.booleans()] * 4))
def test_the_band_is_where_a_move_may_leave_by_an_open_side(neighbours, rows, cols, sides):
    grid = prepare_grid(np.zeros((rows, cols)), 1.0, 1.0, neighbours=neighbours)
    north, south, west, east = sides
    expected = np.zeros((rows, cols), dtype=bool)
    for row, col in np.ndindex(rows, cols):
        for drow, dcol in move_list(neighbours):
            end = (row + drow, col + dcol)
            out = (north and end[0] < 0, south and end[0] >= rows, west and end[1] < 0, east and end[1] >= cols)
            expected[row, col] |= any(out)
    np.testing.assert_array_equal(border_band(grid, sides), expected)


def plane(goal_height=0.0, **asks):
    """A level plane of 21 x 21 cells, from (10, 10) to (10, 14), with the north side open."""
    ground = np.zeros((21, 21))
    ground[10, 14] = goal_height
    grid = prepare_grid(ground, 1.0, 1.0, **asks)
    return grid, border_band(grid, (True, False, False, False)), search_grid(grid, [(10, 10)], Limitation())


def least_way_out(height):
    """Over row 1, the band's nearest, by knight's moves and straight ones; then in a straight line to the goal."""
    to_band = [aside * math.sqrt(5.0) + 9 - 2 * aside for aside in range(5)]
    to_goal = [math.sqrt(81.0 + (4 - aside) ** 2 + height**2) for aside in range(5)]
    return min(a + b for a, b in zip(to_band, to_goal, strict=True))


@pytest.mark.plain
@pytest.mark.parametrize("height", [0.0, 6.0])
def test_a_way_out_is_as_long_as_by_hand(height):
    grid, band, found = plane(height)
    least = least_way_out(height)
    assert may_escape(grid, found, band, (10, 14), least + 1e-6)
    assert not may_escape(grid, found, band, (10, 14), least - 1e-6)
    assert not may_escape(grid, found, band, (10, 14), least)  # no longer is no better


@pytest.mark.plain
def test_steps_that_change_from_row_to_row_are_taken_at_their_least():
    """Outside the window steps are unknown; inside, the least of them keeps the straight line a lower bound."""
    step = np.linspace(1.0, 2.0, 21)
    grid = prepare_grid(np.zeros((21, 21)), step, step, neighbours=8)
    found = search_grid(grid, [(10, 10)], Limitation())
    band = border_band(grid, (False, True, False, False))
    far = found.length_m[20, 10] + math.hypot(10.0, 4.0)  # straight down to the band, then with steps of 1 m
    assert may_escape(grid, found, band, (10, 14), far + 1e-6)


@pytest.mark.plain
def test_without_an_open_side_or_a_way_to_it_nothing_escapes():
    grid, _, found = plane()
    assert not may_escape(grid, found, border_band(grid, (False,) * 4), (10, 14), math.inf)
    barred = np.zeros((21, 21), dtype=bool)
    barred[4:6] = True
    grid, band, found = plane(barred=barred)
    assert not may_escape(grid, found, band, (10, 14), math.inf)
