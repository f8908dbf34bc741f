"""Placing points."""

import json
from pathlib import Path

import numpy as np
import pytest
from rasterio import Affine

from routing.errors import TerrainError
from routing.records import PointAsk, TerrainAsk
from routing.terrain import open_dem, place_point

SITE = Path("site.toml")


@pytest.fixture
def dem(make_dem):
    """An open DEM in UTM, 1 km square, at 93.5 degrees west."""
    with open_dem(TerrainAsk(make_dem(np.zeros((100, 100), dtype=np.float32)), vertical_unit="m")) as opened:
        yield opened


@pytest.fixture
def write_points(tmp_path):
    """Write GeoJSON points; return the path."""

    def write(*places, kind="Point"):
        features = [
            {"type": "Feature", "properties": {}, "geometry": {"type": kind, "coordinates": list(place)}}
            for place in places
        ]
        path = tmp_path / "points.geojson"
        path.write_text(json.dumps({"type": "FeatureCollection", "features": features}))
        return path

    return write


def problem_of(dem, ask, what="intake"):
    with pytest.raises(TerrainError) as caught:
        place_point(dem, ask, SITE, what)
    return caught.value.problems[0]


def test_the_three_ways_lead_to_the_same_place(dem, write_points):
    at = place_point(dem, PointAsk(x=450500.0, y=4999500.0))
    by_degrees = place_point(dem, PointAsk(lon=at.lon, lat=at.lat))
    by_file = place_point(dem, PointAsk(file=write_points((at.lon, at.lat))))
    assert (by_degrees.x, by_degrees.y) == pytest.approx((450500.0, 4999500.0), abs=1e-4)
    assert (by_file.x, by_file.y) == pytest.approx((450500.0, 4999500.0), abs=1e-4)


def test_a_multipoint_of_one_is_one_point(dem, write_points):
    at = place_point(dem, PointAsk(x=450500.0, y=4999500.0))
    path = write_points([[at.lon, at.lat]][0:1], kind="MultiPoint")
    assert place_point(dem, PointAsk(file=path)).x == pytest.approx(450500.0, abs=1e-3)


@pytest.mark.parametrize(("places", "count"), [((), "0 points"), (((-93.6, 45.1), (-93.6, 45.2)), "2 points")])
def test_a_file_must_hold_exactly_one_point(dem, write_points, places, count):
    problem = problem_of(dem, PointAsk(file=write_points(*places), key="outlet.file", line=12), "outlet")
    assert count in problem.found
    assert (problem.file, problem.key, problem.line) == ("site.toml", "outlet.file", 12)


def test_a_line_is_no_point(dem, write_points):
    problem = problem_of(dem, PointAsk(file=write_points([-93.6, 45.1], [-93.6, 45.2], kind="Point")))
    assert "2 points" in problem.found
    path = write_points([[-93.6, 45.1], [-93.6, 45.2]], kind="LineString")
    assert "LineString" in problem_of(dem, PointAsk(file=path)).found


def test_a_point_beside_a_line_is_not_one_point(dem, tmp_path):
    path = tmp_path / "mixed.geojson"
    shapes = [
        {"type": "Point", "coordinates": [-93.63, 45.147]},
        {"type": "LineString", "coordinates": [[-93.63, 45.147], [-93.62, 45.147]]},
    ]
    features = [{"type": "Feature", "properties": {}, "geometry": shape} for shape in shapes]
    path.write_text(json.dumps({"type": "FeatureCollection", "features": features}))
    assert problem_of(dem, PointAsk(file=path)).found == "1 points among 2 features (LineString, Point)"


def test_outside_is_told_in_the_users_coordinates(dem):
    problem = problem_of(dem, PointAsk(x=1.0e6, y=4999500.0, key="intake.x", line=8))
    assert "450000.00 to 451000.00" in problem.allowed
    assert (problem.key, problem.line) == ("intake.x", 8)
    problem = problem_of(dem, PointAsk(lon=-90.0, lat=45.1))
    assert "lon -93.6" in problem.allowed
    assert "outlet" in problem_of(dem, PointAsk(lon=-90.0, lat=45.1), "outlet").what


def test_hints(dem):
    at = place_point(dem, PointAsk(x=450500.0, y=4999500.0))
    assert "swapped" in problem_of(dem, PointAsk(lon=at.lat, lat=at.lon)).remedy
    assert "x and y look swapped" in problem_of(dem, PointAsk(x=at.y, y=at.x)).remedy
    assert "give them as lon and lat" in problem_of(dem, PointAsk(x=at.lon, y=at.lat)).remedy
    assert "latitude and longitude" in problem_of(dem, PointAsk(x=at.lat, y=at.lon)).remedy
    assert "give them as x and y" in problem_of(dem, PointAsk(lon=at.x, lat=at.y)).remedy
    assert "correct the position" in problem_of(dem, PointAsk(x=0.0, y=0.0)).remedy


def test_hints_are_given_for_points_near_the_dem_too(dem):
    at = dem.to_lonlat(451200.0, 4999500.0)
    assert "swapped" in problem_of(dem, PointAsk(lon=at[1], lat=at[0])).remedy
    assert "correct the position" in problem_of(dem, PointAsk(lon=at[0], lat=at[1])).remedy


def test_no_position(dem):
    assert "no position" in problem_of(dem, PointAsk(key="intake")).what


def test_bounds_in_degrees_have_decimals_enough(make_dem):
    path = make_dem(np.zeros((10, 10), dtype=np.float32), "EPSG:4326", Affine(1e-4, 0, -93.0, 0, -1e-4, 45.0))
    with open_dem(TerrainAsk(path, vertical_unit="m")) as dem:
        assert "-93.000000 to -92.999000" in problem_of(dem, PointAsk(x=10.0, y=45.0)).allowed
        assert "swapped" in problem_of(dem, PointAsk(lon=44.9995, lat=-92.9995)).remedy
        assert "swapped" in problem_of(dem, PointAsk(x=44.9995, y=-92.9995)).remedy


@pytest.mark.parametrize("value", [float("nan"), float("inf")])
def test_numbers_that_are_none_are_outside(dem, value):
    assert "outside" in problem_of(dem, PointAsk(x=value, y=4999500.0)).what
