import numpy as np
import pytest
from pyproj import Geod
from shapely import LineString, MultiPolygon, Point, Polygon, box
from shapely.geometry import shape

from routing.errors import OutputError
from routing.outputs.geometry import draw_line, draw_point, draw_polygon
from routing.outputs.lonlat import LonLat

UTM = LonLat("EPSG:32632")
DEGREES = LonLat("EPSG:4326")


def signed_area(ring):
    x, y = np.array(ring).T
    return 0.5 * np.sum(x[:-1] * y[1:] - x[1:] * y[:-1])


def test_point():
    assert draw_point(9.0, 47.0, DEGREES).geometry == {"type": "Point", "coordinates": [9.0, 47.0]}


def test_line():
    drawn = draw_line(LineString([(9, 47), (9.1, 47.1)]), DEGREES)
    assert drawn.geometry == {"type": "LineString", "coordinates": [[9.0, 47.0], [9.1, 47.1]]}
    assert drawn.extent.bbox() == [9.0, 47.0, 9.1, 47.1]


def test_a_third_ordinate_is_dropped():
    drawn = draw_line(LineString([(9, 47, 500), (9.1, 47.1, 510)]), DEGREES)
    assert drawn.geometry["coordinates"][0] == [9.0, 47.0]


def test_a_line_shorter_than_the_last_decimal_still_has_two_positions():
    drawn = draw_line(LineString([(9, 47), (9 + 1e-9, 47)]), DEGREES)
    assert drawn.geometry == {"type": "LineString", "coordinates": [[9.0, 47.0], [9.0, 47.0]]}


@pytest.mark.parametrize("clockwise", [True, False])
def test_rings_follow_the_right_hand_rule(clockwise):
    # RFC 7946, section 3.1.6
    square, hole = [(0, 0), (100, 0), (100, 100), (0, 100)], [(20, 20), (40, 20), (40, 40), (20, 40)]
    if clockwise:
        square, hole = square[::-1], hole[::-1]
    move = np.array([500_000.0, 5_300_000.0])
    lake = Polygon(np.array(square) + move, [np.array(hole) + move])
    outer, inner = draw_polygon(lake, UTM).geometry["coordinates"]
    assert signed_area(outer) > 0 > signed_area(inner)
    assert outer[0] == outer[-1]
    assert inner[0] == inner[-1]
    # 10,000 m2 less 400 m2 on the map, at UTM's scale of 0.9996 on the central meridian
    area, _ = Geod(ellps="WGS84").geometry_area_perimeter(shape({"type": "Polygon", "coordinates": [outer, inner]}))
    assert area == pytest.approx(9600 / 0.9996**2, rel=5e-4)


def test_holes_too_small_to_write_are_dropped():
    lake = Polygon([(9, 47), (9.1, 47), (9.1, 47.1)], [[(9.05, 47.01), (9.05 + 1e-9, 47.01), (9.05, 47.01 + 1e-9)]])
    assert len(draw_polygon(lake, DEGREES).geometry["coordinates"]) == 1


def test_several_polygons():
    drawn = draw_polygon(MultiPolygon([box(9, 47, 9.1, 47.1), box(9.2, 47, 9.3, 47.1)]), DEGREES)
    assert drawn.geometry["type"] == "MultiPolygon"
    assert len(drawn.geometry["coordinates"]) == 2
    assert drawn.extent.bbox() == [9.0, 47.0, 9.3, 47.1]


def test_water_across_the_antimeridian_is_cut_and_keeps_its_area():
    # RFC 7946, section 3.1.9; EPSG:3832 is a Mercator map centred on 150 E
    lonlat = LonLat("EPSG:3832")
    metre = 6_378_137.0 * np.pi / 180.0
    lake = box(29.9 * metre, -1_900_000, 30.2 * metre, -1_880_000)
    island = box(29.95 * metre, -1_895_000, 30.05 * metre, -1_885_000)
    drawn = draw_polygon(lake.difference(island), lonlat)
    assert drawn.geometry["type"] == "MultiPolygon"
    bbox = drawn.extent.bbox()
    assert bbox[0] == pytest.approx(179.9, abs=1e-6)
    assert bbox[2] == pytest.approx(-179.8, abs=1e-6)
    areas = [signed_area(polygon[0]) for polygon in drawn.geometry["coordinates"]]
    assert min(areas) > 0
    south, north = bbox[1], bbox[3]
    whole = 0.3 * (north - south)
    lat = [p[1] for polygon in drawn.geometry["coordinates"] for ring in polygon for p in ring]
    inner = sorted({round(v, 6) for v in lat} - {round(south, 6), round(north, 6)})
    assert sum(areas) == pytest.approx(whole - 0.1 * (inner[-1] - inner[0]), rel=1e-5)
    assert shape(drawn.geometry).is_valid


def test_water_just_west_of_the_antimeridian_is_whole():
    drawn = draw_polygon(box(179.0, 0.0, 180.0, 1.0), DEGREES)
    assert drawn.geometry["type"] == "Polygon"
    assert drawn.extent.bbox() == [179.0, 0.0, 180.0, 1.0]


def test_water_round_a_pole_is_refused():
    ring = Point(0, 0).buffer(100_000)
    with pytest.raises(OutputError, match="round a pole"):
        draw_polygon(ring, LonLat("EPSG:3413"))
