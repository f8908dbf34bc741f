"""CRS and grid."""

from pathlib import Path

import pytest
from pyproj import CRS
from rasterio import Affine

from routing.errors import TerrainError
from routing.terrain.frames import check_plan_crs, geodetic_of, grid_of, horizontal_part, local_utm, vertical_part
from routing.terrain.telling import Teller

TELLER = Teller(Path("dem.tif"))
UTM = CRS.from_epsg(32615)


def test_compound_crs_is_taken_apart():
    crs = CRS.from_user_input("EPSG:2263+6360")
    part = vertical_part(crs)
    assert horizontal_part(crs).to_epsg() == 2263
    assert part.datum == "NAVD88 height (ftUS)"
    assert part.unit.unit == "us-ft"
    assert not part.ellipsoidal


def test_three_dimensional_crs_has_ellipsoidal_heights():
    crs = CRS.from_epsg(4979)
    assert horizontal_part(crs).to_epsg() == 4326
    assert vertical_part(crs).ellipsoidal
    assert vertical_part(CRS.from_epsg(4326)) is None


def test_bound_crs_is_unbound():
    bound = CRS.from_user_input("+proj=utm +zone=15 +datum=WGS84 +towgs84=1,2,3 +type=crs")
    assert not horizontal_part(bound).is_bound


@pytest.mark.parametrize(
    "crs",
    [
        'ENGCRS["Site grid",EDATUM["Site"],CS[Cartesian,2],AXIS["x",east],AXIS["y",north],LENGTHUNIT["metre",1]]',
        "EPSG:4978",
        "+proj=ob_tran +o_proj=longlat +o_lon_p=0 +o_lat_p=39 +lon_0=18 +datum=WGS84 +type=crs",
    ],
    ids=["local", "geocentric", "turned pole"],
)
def test_crs_without_usable_lengths_is_refused(crs):
    with pytest.raises(TerrainError, match=r"does not fix places[\s\S]*gdalwarp"):
        check_plan_crs(CRS.from_user_input(crs), TELLER)


def test_missing_crs_is_refused():
    with pytest.raises(TerrainError, match=r"no CRS[\s\S]*gdal_translate -a_srs"):
        check_plan_crs(None, TELLER)


def test_degrees_of_a_projected_crs():
    lon, lat = geodetic_of(UTM).degrees(500000.0, 0.0)
    assert (float(lon), float(lat)) == pytest.approx((-93.0, 0.0), abs=1e-9)


def test_degree_is_exactly_one_degree():
    assert geodetic_of(CRS.from_epsg(4326)).degrees_per_unit == 1.0


@pytest.mark.parametrize(
    ("transform", "flips"),
    [
        (Affine(10, 0, 1000, 0, -10, 9000), (False, False)),
        (Affine(10, 0, 1000, 0, 10, 8970), (True, False)),
        (Affine(-10, 0, 1040, 0, -10, 9000), (False, True)),
    ],
)
def test_grids_are_turned_north_up(transform, flips):
    grid = grid_of(transform, (3, 4), TELLER, UTM)
    assert tuple(grid.transform)[:6] == (10, 0, 1000, 0, -10, 9000)
    assert (grid.flip_rows, grid.flip_cols) == flips
    assert grid.bounds == (1000, 8970, 1040, 9000)


@pytest.mark.parametrize(
    "transform",
    [Affine(9.986, 0.523, 0, 0.523, -9.986, 0), Affine(10, 0.5, 0, 0, -10, 0), Affine(0, 10, 0, 10, 0, 0)],
    ids=["rotated", "sheared", "turned by a right angle"],
)
def test_rotated_and_sheared_grids_are_refused(transform):
    with pytest.raises(TerrainError, match=r"rotated or sheared[\s\S]*gdalwarp"):
        grid_of(transform, (3, 4), TELLER, UTM)


def test_grid_without_place_is_refused():
    with pytest.raises(TerrainError, match="where its cells lie"):
        grid_of(Affine.identity(), (3, 4), TELLER, UTM)


def test_metres_in_a_crs_of_degrees_are_refused():
    with pytest.raises(TerrainError, match="in degrees, but its coordinates are not"):
        grid_of(Affine(10, 0, 450000, 0, -10, 5000000), (3, 4), TELLER, CRS.from_epsg(4326))


@pytest.mark.parametrize(
    ("lon", "lat", "code"),
    [
        (-93.9, 46.5, "EPSG:32615"),
        (174.8, -36.9, "EPSG:32760"),
        (15.0, 50.0, "EPSG:32633"),
        (180.0, 1.0, "EPSG:32601"),
        (0.0, 85.0, "EPSG:32661"),
        (0.0, -85.0, "EPSG:32761"),
    ],
)
def test_local_utm_is_the_code_whose_area_holds_the_place(lon, lat, code):
    assert local_utm(lon, lat) == code
    area = CRS.from_user_input(code).area_of_use
    assert area.south <= lat <= area.north
