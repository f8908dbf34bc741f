"""True ground steps, held against pyproj's own factors and geodesics."""

from pathlib import Path

import numpy as np
import pytest
from pyproj import CRS, Geod, Proj, Transformer

from routing.errors import TerrainError
from routing.terrain.frames import geodetic_of
from routing.terrain.steps import check_steps, ground_steps
from routing.terrain.telling import Teller

TELLER = Teller(Path("dem.tif"))


def steps_at(code, lon, lat, cell, shape=(5, 5)):
    """Return the steps of a window whose middle is at a place."""
    crs = CRS.from_user_input(code)
    x, y = Transformer.from_crs(crs.geodetic_crs, crs, always_xy=True).transform(lon, lat)
    rows, cols = shape
    transform = (cell, 0.0, x - 0.5 * cols * cell, 0.0, -cell, y + 0.5 * rows * cell)
    return ground_steps(geodetic_of(crs), transform, shape)


@pytest.mark.parametrize("lon_from_axis", [0.0, 1.0, 2.5])
@pytest.mark.parametrize("lat", [-45.0, 0.5, 46.5, 70.0])
def test_utm_equals_the_scale_factor_of_proj(lon_from_axis, lat):
    code, lon = ("EPSG:32615" if lat > 0 else "EPSG:32715"), -93.0 + lon_from_axis
    factors = Proj(code).get_factors(lon, lat)
    steps = steps_at(code, lon, lat, 10.0)
    assert steps.step_x_m[2] == pytest.approx(10.0 / factors.parallel_scale, rel=1e-6)
    assert steps.step_y_m[2] == pytest.approx(10.0 / factors.meridional_scale, rel=1e-6)
    assert steps.scale_change < 1e-5
    assert steps.skew < 1e-6


def test_utm_on_its_central_meridian_is_the_known_factor():
    # The scale on a UTM central meridian is 0.9996 by definition (Snyder, J. P. 1987, USGS Professional Paper 1395, p. 57).
    steps = steps_at("EPSG:32633", 15.0, 50.0, 1.0)
    assert steps.step_x_m[2] == pytest.approx(1.0 / 0.9996, rel=1e-6)


def test_web_mercator_at_50_degrees():
    # cos 50 deg = 0.64279 on the sphere; on the ellipsoid the radii of curvature (Snyder 1987, eqs 4-18 to 4-20) come in.
    lat = np.radians(50.0)
    a, e2 = 6378137.0, 0.00669437999014
    prime = a / np.sqrt(1 - e2 * np.sin(lat) ** 2)
    meridian = prime * (1 - e2) / (1 - e2 * np.sin(lat) ** 2)
    steps = steps_at("EPSG:3857", 8.0, 50.0, 30.0)
    assert steps.step_x_m[2] / 30.0 == pytest.approx(prime / a * np.cos(lat), rel=1e-6)
    assert steps.step_y_m[2] / 30.0 == pytest.approx(meridian / a * np.cos(lat), rel=1e-6)
    assert steps.step_x_m[2] / 30.0 == pytest.approx(0.643, abs=0.002)


@pytest.mark.parametrize("lat", [0.0, 36.6, -60.0])
def test_degrees_equal_geodesics_between_cell_centres(lat):
    cell = 1.0 / 1200.0
    steps = steps_at("EPSG:4326", -84.0, lat, cell)
    geod = Geod(ellps="WGS84")
    rows = lat + np.array([2, 1, 0, -1, -2]) * cell
    _, _, along = geod.inv(np.full(5, -84.0), rows, np.full(5, -84.0 + cell), rows)
    _, _, two_rows = geod.inv(np.full(3, -84.0), rows[:-2], np.full(3, -84.0), rows[2:])
    assert steps.step_x_m == pytest.approx(along, rel=1e-8)
    assert steps.step_y_m[1:-1] == pytest.approx(two_rows / 2, rel=1e-7)


def test_a_degree_at_the_equator():
    # One degree of longitude at the equator is 111.320 km, of latitude 110.574 km (WGS 84; textbook figures, from memory).
    steps = steps_at("EPSG:4326", 10.0, 0.0, 0.01)
    assert steps.step_x_m[2] * 100 == pytest.approx(111320.0, rel=1e-4)
    assert steps.step_y_m[2] * 100 == pytest.approx(110574.0, rel=1e-4)


def test_us_feet_in_plan():
    # EPSG:2263 (New York Long Island, US survey feet) beside EPSG:32118 (the same projection in metres).
    feet = steps_at("EPSG:2263", -73.8, 40.7, 10.0)
    metres = steps_at("EPSG:32118", -73.8, 40.7, 10.0)
    assert feet.step_x_m == pytest.approx(metres.step_x_m * 1200 / 3937, rel=1e-6)
    assert feet.step_y_m == pytest.approx(metres.step_y_m * 1200 / 3937, rel=1e-6)


def test_grads_and_another_prime_meridian():
    # NTF (Paris) counts grads from Paris; Lambert II has scale 0.99987742 on 52 grads = 46.8 degrees (EPSG:27572).
    crs = CRS.from_epsg(27572)
    steps = ground_steps(geodetic_of(crs), (10.0, 0.0, 599975.0, 0.0, -10.0, 2200025.0), (5, 5))
    assert steps.step_x_m[2] == pytest.approx(10.0 / 0.99987742, rel=1e-6)


def test_one_cell_has_steps():
    steps = steps_at("EPSG:32615", -93.0, 45.0, 2.0, shape=(1, 1))
    assert steps.step_x_m.shape == (1,)
    assert steps.scale_change == pytest.approx(0.0, abs=1e-9)


def test_a_scale_that_changes_along_the_row_is_refused_with_a_local_code():
    steps = steps_at("EPSG:32615", -91.0, 45.0, 1000.0, shape=(3, 600))
    assert steps.scale_change > 1e-3
    with pytest.raises(TerrainError, match=r"scale .* changes too much[\s\S]*-t_srs EPSG:32615"):
        check_steps(steps, (-91.0, 45.0), TELLER)


def test_a_skewing_projection_is_refused():
    # Conus Albers (EPSG:5070) far from its axis: equal areas are kept by bending right angles.
    steps = steps_at("EPSG:5070", -71.0, 44.0, 30.0)
    assert steps.scale_change < 1e-3
    assert steps.skew > 1e-3
    with pytest.raises(TerrainError, match=r"skews the ground[\s\S]*EPSG:32619"):
        check_steps(steps, (-71.0, 44.0), TELLER)


def test_a_pole_is_refused():
    steps = ground_steps(geodetic_of(CRS.from_epsg(4326)), (0.1, 0.0, 10.0, 0.0, -0.1, 90.05), (3, 3))
    with pytest.raises(TerrainError, match="pole"):
        check_steps(steps, (10.0, 89.9), TELLER)
