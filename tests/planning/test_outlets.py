"""The cells that an outlet left open may lie at, on grids small enough to walk through cell by cell."""

from collections import deque

import numpy as np
import pytest

from routing.planning.outlets import DRAIN_TOLERANCE_M, drains
from routing.search import prepare_grid


def walked(level, edge, start):
    """Whether water gets from a cell to the edge over the 4-joined cells that rise by the tolerance at most."""
    top, seen, queue = level[start] + DRAIN_TOLERANCE_M, {start}, deque([start])
    while queue:
        row, col = queue.popleft()
        if edge[row, col]:
            return True
        for to in ((row - 1, col), (row + 1, col), (row, col - 1), (row, col + 1)):
            inside = 0 <= to[0] < level.shape[0] and 0 <= to[1] < level.shape[1]
            if inside and to not in seen and level[to] <= top:
                seen.add(to)
                queue.append(to)
    return False


@pytest.mark.parametrize("seed", range(5))
def test_what_walking_finds_drains_and_what_lies_deep_does_not(seed):
    level = np.random.default_rng(seed).uniform(0.0, 2.0, (15, 18))
    edge = np.zeros(level.shape, dtype=bool)
    edge[:, -1] = True
    found = drains(prepare_grid(level, 1.0, 1.0), edge)
    assert found[:, -1].all()
    for cell in np.ndindex(level.shape):
        if walked(level, edge, cell):  # the bilinear ground has ways between diagonal cells besides
            assert found[cell]
    assert 20 < found.sum() < found.size
    lower = drains(prepare_grid(level - 5.0 * (level < 0.3), 1.0, 1.0), edge)
    assert not lower[(level < 0.3) & ~edge & ~_beside_edge(edge)].all()


def _beside_edge(edge):
    beside = edge.copy()
    beside[:, :-1] |= edge[:, 1:]
    return beside


@pytest.mark.parametrize(("rim", "out"), [(DRAIN_TOLERANCE_M, True), (DRAIN_TOLERANCE_M + 1e-6, False)])
def test_a_rim_of_the_tolerance_still_drains(rim, out):
    level = np.full((9, 9), 5.0)
    level[2:7, 2:7] = rim
    level[3:6, 3:6] = 0.0
    level[4, 6:] = rim
    edge = np.zeros((9, 9), dtype=bool)
    edge[4, 8] = True
    assert drains(prepare_grid(level, 1.0, 1.0), edge)[4, 4] == out


@pytest.mark.parametrize(("level_m", "highest"), [(89.0, 89.0), (92.0, 92.0)])
def test_anywhere_with_a_level_of_its_own_needs_no_digging_in(make_job, ground, level_m, highest):
    z = ground.reservoir()
    z[:, 42:] = np.linspace(95.0, 86.0, 38)
    outlet = {"x": None, "y": None, "kind": "anywhere", "level_m": level_m}
    best = make_job(z, outlet=outlet).plan().schemes[0].route
    assert z[tuple(best.cells[-1])] <= highest
    assert best.outlet_m == level_m
