"""Width of the barrier, on made walls of known width."""

from types import SimpleNamespace

import numpy as np
import pytest

from routing.planning.barriers import FAR_CELLS, barrier_cells


def scene_and_route(wall, *, place=(10, 20), size=(21, 121)):
    """A lake west of a wall of some columns, lower ground east of it; the route is highest at ``place``."""
    ground = np.zeros(size)
    ground[:, wall] = 5.0
    water = np.zeros(size, bool)
    water[:, : wall.start] = True
    terrain = SimpleNamespace(
        elevation_m=ground, valid=np.ones(size, bool), transform=(1.0, 0, 0, 0, -1.0, 0), shape=size
    )
    scene = SimpleNamespace(terrain=terrain, body=SimpleNamespace(cells=water), present_m=1.0)
    row, col = place
    route = SimpleNamespace(
        crest_index=0, ground_m=np.array([ground[place]]), x=np.array([col + 0.5]), y=np.array([-row - 0.5])
    )
    return scene, route


@pytest.mark.parametrize("width", [1, 2, 3, 7, 30])
def test_a_wall_is_as_wide_as_it_is(width):
    for col in (20, 20 + width - 1, 20 + width // 2):
        assert barrier_cells(*scene_and_route(slice(20, 20 + width), place=(10, col))) == pytest.approx(width)


def test_wide_ground_is_not_searched_to_its_end():
    assert barrier_cells(*scene_and_route(slice(20, 121), place=(10, 40))) == pytest.approx(19 + FAR_CELLS + 1)


def test_no_ground_above_the_water_is_no_barrier():
    assert barrier_cells(*scene_and_route(slice(20, 23), place=(10, 60))) == 0.0
