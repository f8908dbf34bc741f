"""Where the ends lie, and the window that is read first."""

import geopandas
import numpy as np
import pytest
from shapely import LineString, MultiLineString, box

from routing.errors import SiteError
from routing.planning.placing import centre_of, first_window, place_ends, placed, shapes_inside
from routing.terrain import open_dem

WEST, NORTH, CELL = 500000.0, 5000000.0, 10.0
ANYWHERE = {"x": None, "y": None, "level_m": None, "height_above_ground_m": 0.3, "kind": "anywhere"}


@pytest.fixture
def opened(request):
    """Open the DEM of a job until the test ends."""

    def open_job(job):
        site = job.site
        dem = open_dem(site.terrain, site.lines, site.file)
        request.addfinalizer(dem.close)
        return site, dem

    return open_job


def at(row, col):
    return WEST + CELL * (col + 0.5), NORTH - CELL * (row + 0.5)


def on_line(make_job, z, folder, shape, **changes):
    geopandas.GeoDataFrame(geometry=[shape], crs="EPSG:32631").to_file(folder / "stream.gpkg")
    return make_job(z, outlet=ANYWHERE | {"kind": "line", "file": "stream.gpkg"}, **changes)


def test_points_are_placed_with_longitude_and_latitude(make_job, ground, opened):
    site, dem = opened(make_job(ground.reservoir()))
    ends = place_ends(site, dem)
    assert (ends.intake.x, ends.intake.y) == at(20, 10)
    assert (ends.outlet.x, ends.outlet.y) == at(20, 60)
    assert ends.shapes is None
    assert (ends.intake.lon, ends.intake.lat) == pytest.approx((3.0013, 45.1535), abs=2e-3)  # axis of zone 31: 3 deg E


def test_both_ends_off_the_dem_are_told_at_once(make_job, ground, opened):
    site, dem = opened(make_job(ground.reservoir(), ends=((20, -50), (20, 900))))
    with pytest.raises(SiteError) as caught:
        place_ends(site, dem)
    assert [problem.key for problem in caught.value.problems] == ["intake.x", "outlet.x"]


def test_an_outlet_on_a_line_stands_first_at_the_place_nearest_to_the_intake(make_job, ground, opened, tmp_path):
    line = MultiLineString([[at(0, 60), at(39, 60)], [at(0, 45), at(10, 45)]])
    site, dem = opened(on_line(make_job, ground.reservoir(), tmp_path, line))
    ends = place_ends(site, dem)
    assert (ends.outlet.x, ends.outlet.y) == at(10, 45)


def test_of_a_line_that_leaves_the_dem_only_the_part_on_it_counts(make_job, ground, opened, tmp_path):
    """The line comes nearest to the intake north of the DEM; on it, at its edge."""
    line = LineString([at(-30, 10), at(-0.5, 50), at(39, 90)])
    site, dem = opened(on_line(make_job, ground.reservoir(), tmp_path, line))
    ends = place_ends(site, dem)
    x, y = at(-0.5, 50)
    assert (ends.outlet.x, ends.outlet.y) == pytest.approx((x, y), abs=1e-3)


def test_an_outlet_anywhere_stands_first_at_the_intake(make_job, ground, opened):
    site, dem = opened(make_job(ground.reservoir(), outlet=ANYWHERE))
    ends = place_ends(site, dem)
    assert ends.outlet == ends.intake
    window = first_window(site, dem, ends)
    assert (window.rows, window.cols) == (40, 80)


def test_the_window_has_a_margin_of_half_the_distance_and_less_where_too_many_cells(make_job, opened):
    z = np.full((900, 900), 90.0)
    z[:, :450] = 100.0
    job = make_job(z, ends=((450, 350), (450, 550)))
    site, dem = opened(job)
    window = first_window(site, dem, place_ends(site, dem))
    assert (window.rows, window.cols) == (1 + 200, 201 + 200)
    small = make_job(None, ends=((450, 350), (450, 550)), search={"largest_window_cells": 40_000})
    site, dem = opened(small)
    window = first_window(site, dem, place_ends(site, dem))
    assert (window.rows, window.cols) == (1 + 100, 201 + 100)


def test_lines_are_read_whole_where_they_fit_and_else_by_their_nearest_place(make_job, opened, tmp_path):
    z = np.full((900, 900), 90.0)
    line = LineString([at(100, 550), at(800, 550)])
    job = on_line(make_job, z, tmp_path, line, ends=((450, 450), (450, 550)))
    site, dem = opened(job)
    ends = place_ends(site, dem)
    with_all = first_window(site, dem, ends)
    assert shapes_inside(dem, dem.read(with_all), ends.shapes)
    job = on_line(
        make_job, None, tmp_path, line, ends=((450, 450), (450, 550)), search={"largest_window_cells": 50_000}
    )
    site, dem = opened(job)
    part = first_window(site, dem, ends)
    assert part.rows * part.cols <= 50_000
    assert not shapes_inside(dem, dem.read(part), ends.shapes)


def test_shapes_beyond_the_dem_do_not_count_as_outside_the_window(make_job, ground, opened):
    site, dem = opened(make_job(ground.reservoir()))
    terrain = dem.read()
    assert shapes_inside(dem, terrain, box(WEST - 500.0, NORTH - 900.0, WEST + 300.0, NORTH + 50.0))
    assert site.outlet.kind == "point"


def test_the_centre_of_a_cell_is_that_of_the_dem(make_job, ground, opened):
    _, dem = opened(make_job(ground.reservoir()))
    centre = centre_of(dem, dem.read(), (3, 7))
    assert (centre.x, centre.y) == at(3, 7)
    assert centre == placed(dem, *at(3, 7))
