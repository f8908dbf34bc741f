"""Outlines moved to another CRS: against pyproj point by point, and the area of the ellipsoid."""

import numpy as np
import pytest
import shapely
from pyproj import CRS, Geod, Transformer
from shapely import Polygon, box

from routing.terrain.outlines import moved_polygon, on_the_turn_of

UTM = "EPSG:32615"


def test_long_edges_follow_the_curve_that_they_become(make_terrain):
    """A parallel of 45 degrees, 2 degrees long, bows by some 860 m in UTM: the image of the edge follows it."""
    utm = CRS.from_user_input(UTM)
    wide = Polygon([(-94, 45), (-92, 45), (-92, 45.5), (-94, 45.5)])
    for within in (100.0, 1.0, 0.01):
        moved = moved_polygon(wide, CRS.from_epsg(4326), utm, within)
        lon = np.linspace(-94, -92, 4001)
        x, y = Transformer.from_crs(4326, utm, always_xy=True).transform(lon, np.full(lon.size, 45.0))
        assert shapely.distance(moved.exterior, shapely.points(x, y)).max() <= within
    straight = moved_polygon(wide, CRS.from_epsg(4326), utm, 1e9)
    assert shapely.distance(straight.exterior, shapely.points(x, y)).max() > 400.0
    assert len(moved.exterior.coords) < 2000


def test_the_area_of_a_moved_polygon_is_that_of_the_ellipsoid():
    """Equal-area image of a degree square, against GeographicLib's own area between geodesics drawn dense."""
    square = Polygon([(10, 60), (11, 60), (11, 61), (10, 61)])
    moved = moved_polygon(square, CRS.from_epsg(4326), CRS.from_epsg(3035), 0.1)
    dense = shapely.segmentize(square, 0.001)
    area, _ = Geod(ellps="WGS84").geometry_area_perimeter(dense)
    assert moved.area == pytest.approx(area, rel=1e-5)


def test_degrees_across_the_antimeridian_and_turns_of_longitude():
    wgs, utm = CRS.from_epsg(4326), CRS.from_epsg(32601)
    # 10 km each way about 180 degrees at the equator: UTM zone 1 has its axis at 177 degrees west.
    x, _ = Transformer.from_crs(wgs, utm, always_xy=True).transform(180.0, 0.0)
    moved = moved_polygon(box(x - 1e4, 1e5, x + 1e4, 1.2e5), utm, wgs, 1e-6)
    assert moved.bounds[2] - moved.bounds[0] == pytest.approx(0.18, abs=0.01)
    for middle in (-179.9, 180.3, 539.0):
        shown = on_the_turn_of(moved, wgs, middle)
        assert abs(shown.centroid.x - middle) < 180.0
        assert shown.area == pytest.approx(moved.area)


def test_holes_keep_their_places_and_a_change_to_the_same_crs_changes_nothing():
    ring = box(0.0, 0.0, 10.0, 10.0) - box(4.0, 4.0, 6.0, 6.0)
    crs = CRS.from_user_input(UTM)
    assert moved_polygon(ring, crs, crs, 1e-3).equals(ring)
    across = box(179.0, 10.0, 179.9, 11.0) - box(179.3, 10.3, 179.6, 10.6)
    mercator = CRS.from_epsg(3832)  # its axis is at 150 degrees east: no jump at 180
    back = moved_polygon(moved_polygon(across, CRS.from_epsg(4326), mercator, 1.0), mercator, CRS.from_epsg(4326), 1e-6)
    assert len(back.interiors) == 1
    assert back.symmetric_difference(across).area < 1e-3 * across.area


def test_a_point_without_a_place_in_the_crs_is_told():
    """There is no latitude of 120 degrees."""
    assert moved_polygon(box(0.0, 80.0, 10.0, 120.0), CRS.from_epsg(4326), CRS.from_user_input(UTM), 1.0) is None


def test_a_projected_crs_knows_no_turns():
    shape = box(0.0, 0.0, 1.0, 1.0)
    assert on_the_turn_of(shape, CRS.from_user_input(UTM), 1e7) is shape
    assert on_the_turn_of(shape, CRS.from_epsg(4326), 170.0) is shape
