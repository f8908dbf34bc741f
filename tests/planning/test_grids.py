"""Ground made ready for the search: bars by their moves, gaps for the rule that looks at cells only."""

import geopandas
import numpy as np
import pytest
from shapely import box

from routing.planning.grids import lay_zones, make_grid
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.records import ZoneMap
from routing.search import Limitation, search_grid
from routing.terrain import open_dem


@pytest.fixture
def look_at():
    """Return the scene of a job."""

    def scene_of(job):
        site = job.site
        with open_dem(site.terrain, site.lines, site.file) as dem:
            ends = place_ends(site, dem)
            return survey(site, dem, ends, first_window(site, dem, ends), Reporter())

    return scene_of


def zones_of(blocked):
    return ZoneMap((), np.zeros(blocked.shape, dtype=bool), blocked, np.ones(blocked.shape))


def test_a_site_without_zones_has_none(make_job, ground, look_at):
    job = make_job(ground.reservoir())
    assert lay_zones(job.site, look_at(job).terrain) is None


def test_zones_are_laid_with_the_moves_of_the_search(make_job, ground, look_at, tmp_path):
    job = make_job(ground.reservoir(), search={"neighbours": 8})
    terrain = look_at(job).terrain
    bar = box(500500.0, 4999700.0, 500550.0, 4999750.0)
    geopandas.GeoDataFrame(geometry=[bar], crs="EPSG:32631").to_file(tmp_path / "bar.gpkg")
    job.file.write_text(job.file.read_text() + '\n[[zones]]\nname = "bar"\nfile = "bar.gpkg"\nkind = "barred"\n')
    zones = lay_zones(job.site, terrain)
    assert zones.barred.sum() == 25
    assert zones.blocked_moves[zones.barred].tolist() == [2**8 - 1] * 25
    grid = make_grid(job.site, terrain, zones)
    inside = tuple(np.argwhere(zones.barred)[12])
    assert np.isinf(search_grid(grid, [(20, 10)], Limitation()).length_m[inside])


def test_zones_that_bar_nothing_block_nothing(make_job, ground, look_at):
    job = make_job(ground.reservoir())
    terrain = look_at(job).terrain
    zones = zones_of(np.zeros(terrain.shape, dtype=np.uint32))
    assert make_grid(job.site, terrain, zones).ground.blocked.size == 0


@pytest.mark.parametrize("rule", ["cells", "bilinear"])
def test_past_the_corner_of_a_gap_no_way_is_open_by_either_rule(make_job, ground, look_at, rule):
    """The long section is drawn on patches of four cells: with one of them empty it could not be."""
    z = ground.reservoir()
    z[18, 50] = -9999.0
    job = make_job(z, dem={"nodata": -9999.0}, search={"ground_rule": rule, "neighbours": 8})
    terrain = look_at(job).terrain
    grid = make_grid(job.site, terrain)
    limitation = Limitation(rule=rule)
    length = search_grid(grid, [(18, 49)], limitation).length_m
    beside = float(length[19, 50])  # a diagonal past the gap
    assert beside > 1.9 * terrain.step_x_m[0]
    assert np.isfinite(beside)
    assert not terrain.valid[18, 50]
