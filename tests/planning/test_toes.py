"""The toe of the barrier, on made ground."""

import numpy as np
import pytest

from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.planning.toes import toe_cells, toe_distance_m
from routing.terrain import open_dem

#: UTM shrinks lengths to 0.9996 at its central meridian, where the made jobs lie.
STEP = 10.0 / 0.9996
ANYWHERE = {"x": None, "y": None, "level_m": None, "height_above_ground_m": 0.3, "kind": "anywhere"}


@pytest.fixture
def look_at():
    """Return the scene of a job."""

    def scene_of(job):
        site = job.site
        with open_dem(site.terrain, site.lines, site.file) as dem:
            ends = place_ends(site, dem)
            return survey(site, dem, ends, first_window(site, dem, ends), Reporter())

    return scene_of


def open_valley(ground):
    """The valley behind a dam, its floor falling to the east edge, high banks along the north and south."""
    z = ground.reservoir()
    col = np.arange(80)
    z = np.where((z <= 90.0) & (col > 30), 90.0 - 0.05 * (col - 42), z)
    z[:3, 32:] = z[-3:, 32:] = 120.0
    return z


def test_the_toe_lies_where_the_ground_falls_back_to_the_present_level(make_job, ground, look_at):
    """The dam's crest is at column 30 and 103 m, with slopes 1 in 10 (1 m a cell): it is back at 100 m at column 33."""
    scene = look_at(make_job(open_valley(ground), outlet=ANYWHERE))
    toe = toe_cells(scene.terrain, scene.body.cells, scene.present_m)
    assert set(np.argwhere(toe)[:, 1]) == {33}
    distance = toe_distance_m(scene.terrain, scene.body.cells, scene.present_m)
    assert distance[20, 50] == pytest.approx(17 * STEP, rel=1e-3)


def test_where_the_ground_never_falls_back_there_is_no_toe(make_job, ground, look_at):
    scene = look_at(make_job(ground.reservoir()))
    assert not toe_cells(scene.terrain, scene.body.cells, 89.0).any()
    assert np.isinf(toe_distance_m(scene.terrain, scene.body.cells, 89.0)).all()


def test_each_place_of_the_shore_has_the_nearest_low_ground(make_job, ground, look_at):
    """By trying every pair: the toe is all low dry cells that are nearest to some cell of the shore."""
    z = ground.reservoir()
    z[:, 30:40] += np.linspace(0.0, 1.5, 40)[:, None]  # a dam that grows wider to the south
    scene = look_at(make_job(z))
    toe = toe_cells(scene.terrain, scene.body.cells, scene.present_m)
    low = np.argwhere(scene.terrain.valid & (scene.terrain.elevation_m <= 100.0) & ~scene.body.cells)
    water = scene.body.cells
    for row, col in np.argwhere(water):
        if water[row - 1 : row + 2, col - 1 : col + 2].all():
            continue
        far = np.hypot(*(low - (row, col)).T)
        assert toe[tuple(low[np.isclose(far, far.min(), rtol=1e-3)].T)].any()
    assert len(set(np.argwhere(toe)[:, 1])) > 1
