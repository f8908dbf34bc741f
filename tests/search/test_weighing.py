"""Weighted searches: against scikit-image and scipy, the law of refraction, and a weight of one."""

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import minimize_scalar
from skimage.graph import MCP_Geometric

from routing.errors import InputError
from routing.search import (
    Job,
    Limitation,
    OpenEnds,
    border_band,
    height_penalty,
    prepare_grid,
    search_grid,
    shortest_path,
    weighted_path,
)
from routing.search.grid import free_ratio, weighted_grid


def job(ground, *, source=(0, 0), goal=None, step=1.0, neighbours=16):
    grid = prepare_grid(ground, step, step, neighbours=neighbours)
    rows, cols = grid.shape
    return Job(grid, source, goal or (rows - 1, cols - 1), border_band(grid, (False,) * 4))


def test_equals_scikit_image_with_eight_neighbours():
    """MCP_Geometric (source: scikit-image) takes the mean of both cells' costs times the distance."""
    weight = np.random.default_rng(3).uniform(0.2, 4.0, (60, 70))
    grid, scale = weighted_grid(prepare_grid(np.zeros((60, 70)), 1.0, 1.0, neighbours=8), weight)
    found = search_grid(grid, [(20, 30)], Limitation()).length_m * scale
    expected, _ = MCP_Geometric(weight, fully_connected=True).find_costs([(20, 30)])
    np.testing.assert_allclose(found, expected, rtol=1e-9)


def twin_weight(weight, start, move):
    """Mean weight along a move by walking 3,600 places of it."""
    at = (np.arange(3600) + 0.5) / 3600
    rows = np.floor(start[0] + move[0] * at + 0.5).astype(int)
    cols = np.floor(start[1] + move[1] * at + 0.5).astype(int)
    return weight[rows, cols].mean()


def cost_of(cells, ground, weight):
    """Weighted length of a path, edge by edge."""
    total = 0.0
    for one, other in pairwise(cells):
        move = (other[0] - one[0], other[1] - one[1])
        rise = ground[tuple(other)] - ground[tuple(one)]
        total += float(np.sqrt(move[0] ** 2 + move[1] ** 2 + rise**2)) * twin_weight(weight, one, move)
    return total


@pytest.mark.plain
@settings(max_examples=25, deadline=None)
@given(st.integers(0, 2**32 - 1), st.sampled_from([8, 16, 32]))
def test_each_cell_counts_by_its_share_of_the_move(seed, neighbours):
    rng = np.random.default_rng(seed)
    ground, weight = rng.uniform(0, 3, (6, 7)), rng.uniform(0.5, 5.0, (6, 7))
    found, cost = weighted_path(job(ground, neighbours=neighbours), weight)
    assert cost == pytest.approx(cost_of(found.cells.tolist(), ground, weight), rel=1e-3)
    diagonal = [[k, k] for k in range(6)] + [[5, 6]]
    assert cost <= cost_of(diagonal, ground, weight) * (1 + 1e-3)


@pytest.mark.parametrize("neighbours", [8, 16, 32])
def test_refraction_at_a_straight_boundary(neighbours):
    """Snell's law: cost 1 below and 2 above a boundary half way, ends 1000 m apart both ways (closed form)."""
    size = 401
    ground = np.zeros((size, size))
    weight = np.ones((size, size))
    weight[size // 2 + 1 :, :] = 2.0
    weight[size // 2, :] = 1.5  # the boundary runs through the middle of these cells
    step = 1000.0 / (size - 1)
    _, cost = weighted_path(job(ground, step=step, neighbours=neighbours), weight)
    exact = minimize_scalar(
        lambda x: np.hypot(x, 500.0) + 2.0 * np.hypot(1000.0 - x, 500.0), bounds=(0, 1000), method="bounded"
    )
    assert exact.fun == pytest.approx(2018.8216, abs=1e-3)
    assert exact.x == pytest.approx(769.132, abs=1e-2)
    ratio = free_ratio(job(ground, neighbours=neighbours).grid)
    assert exact.fun * (1 - 1e-3) <= cost <= exact.fun * ratio * (1 + 1e-3)


def test_a_weight_of_one_changes_nothing():
    ground = np.random.default_rng(0).uniform(0, 5, (40, 50))
    plain = shortest_path(job(ground), Limitation()).path
    found, cost = weighted_path(job(ground), np.ones((40, 50)))
    assert cost == plain.length_m == found.length_m
    np.testing.assert_array_equal(found.cells, plain.cells)


def test_a_penalty_for_height_goes_round_a_ridge():
    ground = np.zeros((41, 60))
    ground[:35, 28:32] = 4.0
    task = job(ground, source=(5, 5), goal=(5, 55))
    crests = []
    for weight in (0.0, 0.1, 1.0, 10.0):
        found, _ = weighted_path(task, height_penalty(ground, 2.0, weight))
        crests.append(found.at_level_m.max())
    assert crests[0] == 4.0
    assert crests[-1] <= 2.0  # nothing above the limit
    assert crests == sorted(crests, reverse=True)


def test_no_way_is_told():
    ground = np.zeros((5, 5))
    ground[:, 2] = np.nan
    assert weighted_path(job(ground), np.ones((5, 5))) is None


def test_what_cannot_be_used_is_refused():
    grid = prepare_grid(np.zeros((4, 4)), 1.0, 1.0)
    for weight, words in (
        (np.ones((2, 2)), "shape"),
        (np.zeros((4, 4)), "above zero"),
        (np.full((4, 4), np.inf), "finite"),
    ):
        with pytest.raises(InputError, match=words):
            weighted_grid(grid, weight)
    with pytest.raises(InputError, match="no ceiling"):
        search_grid(weighted_grid(grid, np.ones((4, 4)))[0], [(0, 0)], Limitation(5.0))


@pytest.mark.parametrize("seed", range(6))
def test_open_ends_give_the_best_of_separate_searches(seed):
    rng = np.random.default_rng(seed)
    ground, weight = rng.uniform(0, 3, (9, 11)), rng.uniform(0.5, 5.0, (9, 11))
    sources, goals = np.array([[0, 0], [4, 1], [8, 0]]), np.array([[0, 10], [7, 9]])
    before = rng.uniform(0.0, 6.0, 3)
    ends = OpenEnds(sources, before, goals, np.array([0.0, 2.0]))
    found, cost = weighted_path(replace(job(ground), open_ends=ends), weight)
    single = {
        (tuple(source), tuple(goal)): start
        + weighted_path(job(ground, source=tuple(map(int, source)), goal=tuple(map(int, goal))), weight)[1]
        for source, start in zip(sources, before, strict=True)
        for goal in goals
    }
    best = min(single, key=single.get)
    assert cost == pytest.approx(single[best], rel=1e-9)
    assert (tuple(found.cells[0]), tuple(found.cells[-1])) == best
    assert found.start_length_m == before[[tuple(source) for source in sources].index(best[0])]
