"""Largest discharge and least raise against every simple path of small grids."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from twins import grid_search as twin

from routing.search import (
    Flow,
    Job,
    Limitation,
    border_band,
    largest_discharge,
    least_raise,
    prepare_grid,
    search_grid,
    shortest_path,
)

START, FLAT, STEEP, FALL, LOCAL, FRICTION = 6.0, 4.0, 0.5, 3.0, 1.5, 0.4


def ceiling(q, far, *, start=START):
    """A made-up suction ceiling: a level and a gradient that both fall with the square of the discharge."""
    return start - FLAT * q**2 - STEEP * q**2 * far


def longest(q):
    return (FALL / q**2 - LOCAL) / FRICTION if q > 0 else np.inf


def carried_at(length):
    return float(np.sqrt(FALL / (LOCAL + FRICTION * length)))


def carried(far, high, start=START):
    room = (start - high) / (FLAT + STEEP * far)
    return float(min(np.sqrt(max(room.min(), 0.0)), carried_at(far.max())))


def flow(rule, start=START):
    return Flow(
        limit_at=lambda q: Limitation(start - FLAT * q**2, STEEP * q**2, longest_m=longest(q), rule=rule),
        carried_by=lambda path: carried(path.at_length_m, path.at_level_m, start),
        carried_at_length=carried_at,
    )


def job(ground, step=1.0, neighbours=8, sides=(False, False, False, False), goal=None):
    grid = prepare_grid(ground, step, step, neighbours=neighbours)
    rows, cols = ground.shape
    return Job(grid, (0, 0), goal or (rows - 1, cols - 1), border_band(grid, sides))


@settings(max_examples=25, deadline=None)
@given(st.integers(0, 2**32 - 1), st.sampled_from(["cells", "bilinear"]), st.sampled_from([(3, 4), (2, 5)]))
def test_largest_discharge_equals_every_simple_path(seed, rule, shape):
    ground = np.random.default_rng(seed).uniform(0.0, 7.0, shape)
    ground[0, 0], ground[-1, -1] = 0.0, 0.0
    steps = (np.ones(shape[0]), np.ones(shape[0]))
    best = max(
        (
            carried(far, high)
            for far, high in twin.simple_paths(ground, steps, (0, 0), (shape[0] - 1, shape[1] - 1), 8, rule)
        ),
        default=0.0,
    )
    found = largest_discharge(job(ground), flow(rule))
    if best < 1e-6:
        assert found.path is None or found.low < 1e-6
    else:
        assert found.low == pytest.approx(best, rel=2e-3)
        assert found.low <= best * (1 + 1e-9)
        assert found.high >= best * (1 - 1e-9)


@settings(max_examples=12, deadline=None)
@given(st.integers(0, 2**32 - 1), st.sampled_from([(3, 3), (2, 5)]))
def test_largest_discharge_along_edges_equals_every_simple_path(seed, shape):
    """Held against the ceiling place by place, as a long section is."""
    ground = np.random.default_rng(seed).uniform(0.0, 7.0, shape)
    ground[0, 0], ground[-1, -1] = 0.0, 0.0
    steps = (np.ones(shape[0]), np.ones(shape[0]))
    paths = twin.simple_paths_along(ground, steps, (0, 0), (shape[0] - 1, shape[1] - 1), 8)
    best = max((min(carried(at, level), carried_at(whole)) for at, level, whole in paths), default=0.0)
    by_edges = flow("bilinear")
    by_places = replace(by_edges, limit_at=lambda q: replace(by_edges.limit_at(q), along=True))
    found = largest_discharge(job(ground), by_places)
    assert found.low == pytest.approx(best, rel=2e-3, abs=1e-6)
    assert found.high >= best * (1 - 1e-4)
    assert found.low >= largest_discharge(job(ground), by_edges).low * (1 - 1e-3)


@settings(max_examples=15, deadline=None)
@given(st.integers(0, 2**32 - 1), st.sampled_from(["cells", "bilinear"]))
def test_least_raise_equals_every_simple_path(seed, rule):
    ground = np.random.default_rng(seed).uniform(5.0, 9.0, (3, 4))
    ground[0, 0] = ground[-1, -1] = 0.0
    steps = (np.ones(3), np.ones(3))
    q = 0.5
    needed = min(
        float(np.max(high - ceiling(q, far, start=4.0)))
        for far, high in twin.simple_paths(ground, steps, (0, 0), (2, 3), 8, rule)
    )
    limit = Limitation(4.0 - FLAT * q**2, STEEP * q**2, rule=rule)
    found = least_raise(job(ground), limit)
    assert found.high == pytest.approx(needed, abs=0.003)
    assert found.low <= needed + 1e-9
    assert shortest_path(job(ground), limit.raised(found.high + 1e-9)).path is not None
    assert shortest_path(job(ground), limit.raised(found.high - 0.004)).path is None


def ridge(size=161, gap_low=2.0, ridge_high=5.9):
    """A plane with a ridge across it, higher on the straight way than at a gap to one side."""
    rows, cols = np.mgrid[:size, :size]
    across = np.exp(-(((cols - size // 2) / 4.0) ** 2))
    height = np.where(rows > size - 25, gap_low, ridge_high)
    return across * height


def test_energy_governed_jobs_end_after_one_search():
    found = largest_discharge(job(ridge(gap_low=0.5, ridge_high=0.5) * 0.1, 0.05), flow("bilinear"))
    assert found.searches == 1
    assert found.low == pytest.approx(found.high, rel=1e-3)


def test_suction_governed_jobs_take_few_searches_and_go_round():
    ground = ridge()
    task = job(ground, 0.1, goal=(0, 160))
    found = largest_discharge(task, flow("bilinear"))
    assert found.searches <= 12
    assert found.high <= found.low * 1.001 * (1 + 1e-9)
    assert found.path.cells[:, 0].max() >= 136  # by the gap
    free = search_grid(task.grid, [(0, 0)], Limitation()).length_m[0, 160]
    assert found.path.length_m > free


def test_still_water_that_finds_no_way_is_told():
    ground = np.zeros((5, 5))
    ground[:, 2] = 7.0
    found = largest_discharge(job(ground), flow("bilinear"))
    assert found.path is None
    assert found.high == 0.0


def test_a_wall_without_ground_has_no_raise():
    ground = np.zeros((5, 5))
    ground[:, 2] = np.nan
    assert least_raise(job(ground), Limitation(4.0)).path is None


def test_a_longer_way_outside_the_window_is_never_ruled_out_by_mistake():
    """Proven only where every way out and back is longer than what was found."""
    ground = np.zeros((9, 21))
    ground[1:, 10] = 9.0  # a wall with its gap at the far end from source and goal
    ground[0, 10] = 3.0
    grid = prepare_grid(ground, 1.0, 1.0)
    for south_open, proven in ((False, True), (True, False)):
        task = Job(grid, (6, 0), (6, 20), border_band(grid, (False, south_open, False, False)))
        assert largest_discharge(task, flow("bilinear")).proven_outside == proven
        assert shortest_path(task, Limitation(5.0)).proven_outside == proven
        assert least_raise(task, Limitation(1.0)).proven_outside == proven
    wide = np.zeros((101, 40))
    grid = prepare_grid(wide, 1.0, 1.0)
    middle = Job(grid, (50, 10), (50, 30), border_band(grid, (True, True, True, True)))
    assert shortest_path(middle, Limitation()).proven_outside


@pytest.mark.parametrize("seed", range(8))
def test_a_billionth_less_than_the_largest_discharge_still_finds_a_path(seed):
    """On rough ground the highest place under a falling ceiling lies between the samples of an edge."""
    ground = np.random.default_rng(seed).uniform(0.0, 5.0, (12, 14))
    ground[0, 0] = ground[-1, -1] = 0.0
    by_edges = flow("bilinear", start=5.0)
    by_places = replace(by_edges, limit_at=lambda q: replace(by_edges.limit_at(q), along=True))
    asked = job(ground, neighbours=16)
    found = largest_discharge(asked, by_places)
    assert found.low > 0.0
    again = shortest_path(asked, by_places.limit_at(found.low * (1.0 - 1e-9))).path
    assert again is not None
    assert by_places.carried_by(found.path) >= found.low * (1.0 - 1e-9)
    assert by_places.carried_by(found.path) <= found.low * (1.0 + 1e-2)
