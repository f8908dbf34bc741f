"""The layers against RFC 7946 (August 2016), section numbers beside each check, and read back with geopandas."""

import json
import re
from dataclasses import replace

import geopandas
import numpy as np
import pytest
from pyproj import Geod
from shapely import LineString, MultiPolygon, Polygon, box
from shapely.geometry import shape

from routing.outputs.fields import SCHEME_FIELDS, TABLES
from routing.outputs.geojson import (
    layer_text,
    points_layer,
    routes_layer,
    routes_of,
    samples_layer,
    water_layer,
    zones_layer,
)
from routing.records import Zone

LAYERS = {
    "routes": routes_layer,
    "water": water_layer,
    "points": points_layer,
    "zones": lambda plan: zones_layer(zoned(plan)),
    "samples": samples_layer,
}
TYPES = {
    "FeatureCollection", "Feature", "Point", "MultiPoint", "LineString", "MultiLineString", "Polygon",
    "MultiPolygon", "GeometryCollection",
}  # fmt: skip
DEPTH = {"Point": 0, "LineString": 1, "MultiLineString": 2, "Polygon": 2, "MultiPolygon": 3}
GEOD = Geod(ellps="WGS84")


def no_duplicates(pairs):
    names = [name for name, _ in pairs]
    assert len(names) == len(set(names))
    return dict(pairs)


def never(constant):
    raise AssertionError(f"{constant} in JSON")


def flat(coordinates, depth):
    return [coordinates] if depth == 0 else [p for part in coordinates for p in flat(part, depth - 1)]


@pytest.fixture(
    params=["utm", "degrees", "feet", "antimeridian", "no route", "no schemes", "beside", "beside antimeridian"]
)
def any_plan(request, make):
    return {
        "utm": make.plan,
        "degrees": lambda: make.plan(make.degrees()),
        "feet": lambda: make.plan(make.feet()),
        "antimeridian": lambda: make.plan(make.antimeridian()),
        "no route": make.no_route,
        "no schemes": lambda: make.plan(schemes=()),
        "beside": make.beside,
        "beside antimeridian": lambda: make.beside(make.antimeridian()),
    }[request.param]()


@pytest.fixture(params=LAYERS)
def text(request, any_plan):
    return layer_text(LAYERS[request.param](any_plan))


@pytest.fixture
def layer(text):
    return json.loads(text, object_pairs_hook=no_duplicates, parse_constant=never)


def features_and_positions(layer):
    for feature in layer["features"]:
        geometry = feature["geometry"]
        yield feature, flat(geometry["coordinates"], DEPTH[geometry["type"]])


def test_types_are_of_the_closed_set(layer):  # 3, 7
    assert layer["type"] == "FeatureCollection"
    for feature in layer["features"]:
        assert feature["type"] == "Feature"
        assert feature["geometry"]["type"] in TYPES - {"GeometryCollection"}  # 3.1.8: best avoided


def test_positions_are_lon_lat_and_no_more(layer):  # 3.1.1, 4: a third one would be a height above the ellipsoid
    for _, positions in features_and_positions(layer):
        assert all(len(p) == 2 for p in positions)
        lon, lat = np.array(positions).T
        assert (np.abs(lon) <= 180).all()
        assert (np.abs(lat) <= 90).all()


def test_no_crs_member(layer):  # 4
    assert "crs" not in layer
    assert not any("crs" in feature for feature in layer["features"])


def test_lines_and_rings(layer):  # 3.1.4, 3.1.6
    for feature in layer["features"]:
        kind, coordinates = feature["geometry"]["type"], feature["geometry"]["coordinates"]
        lines = {"LineString": [coordinates], "MultiLineString": coordinates}.get(kind, [])
        assert all(len(line) >= 2 for line in lines)
        for rings in {"Polygon": [coordinates], "MultiPolygon": coordinates}.get(kind, []):
            for number, ring in enumerate(rings):
                assert len(ring) >= 4
                assert ring[0] == ring[-1]
                assert Polygon(ring).exterior.is_ccw == (number == 0)


def test_features_and_members(layer):  # 3.2, 3.3, 7.1; no foreign members (6.1)
    assert set(layer) <= {"type", "bbox", "features"}
    idents = [feature["id"] for feature in layer["features"]]
    assert len(idents) == len(set(idents))
    for feature in layer["features"]:
        assert set(feature) <= {"type", "id", "bbox", "properties", "geometry"}
        assert isinstance(feature["id"], str)
        assert set(feature["geometry"]) == {"type", "coordinates"}
        assert all(v is None or isinstance(v, str | int | float) for v in feature["properties"].values())


def inside(position, bbox):
    west, south, east, north = bbox
    lon, lat = position
    along = west <= lon <= east if west <= east else lon >= west or lon <= east
    return along and south <= lat <= north


def test_bbox(layer):  # 5, 5.2
    assert ("bbox" in layer) == bool(layer["features"])
    for feature, positions in features_and_positions(layer):
        boxes = [layer["bbox"], *([feature["bbox"]] if "bbox" in feature else [])]
        for bounds in boxes:
            assert len(bounds) == 4
            assert all(inside(p, bounds) for p in positions)


def test_seven_decimals(text):  # 3.1.10, 11.2
    places = [len(m) for m in re.findall(r"\.(\d+)", json.dumps([f["geometry"] for f in json.loads(text)["features"]]))]
    assert all(p <= 7 for p in places)


def test_i_json(text):  # 11.1: UTF-8, no duplicate names, no NaN or infinity
    text.encode("utf-8")
    json.loads(text, object_pairs_hook=no_duplicates, parse_constant=never)


def test_properties_are_the_fields(make):
    plan = make.beside()
    for name, found in (
        ("schemes.csv", routes_layer(plan)),
        ("water.geojson", water_layer(plan)),
        ("points.geojson", points_layer(plan)),
        ("zones.geojson", zones_layer(zoned(plan))),
        ("samples.csv", samples_layer(plan)),
    ):
        for feature in found["features"]:
            assert list(feature["properties"]) == list(TABLES[name])


def test_antimeridian(make):  # 3.1.9, 5.2
    plan = make.plan(make.antimeridian())
    routes = routes_layer(plan)
    west, _, east, _ = routes["bbox"]
    assert west > 179.9
    assert east < -179.9
    for feature, scheme in zip(routes["features"], plan.schemes, strict=True):
        assert feature["geometry"]["type"] == "MultiLineString"
        parts = feature["geometry"]["coordinates"]
        assert all(len({np.sign(lon) for lon, _ in part}) == 1 for part in parts)
        assert abs(parts[0][-1][0]) == abs(parts[1][0][0]) == 180.0
        assert parts[0][-1][1] == parts[1][0][1]
        # the parts together are as long as the line on the map, at a scale that UTM keeps within 0.1 %
        assert sum(GEOD.line_length(*zip(*part, strict=True)) for part in parts) == pytest.approx(
            scheme.route.line.length, rel=1.5e-3
        )


def read_back(tmp_path, layer):
    path = tmp_path / "layer.geojson"
    path.write_text(layer_text(layer), encoding="utf-8")
    return geopandas.read_file(path)


def test_routes_read_back(plan, tmp_path):
    frame = read_back(tmp_path, routes_layer(plan))
    assert frame.crs == "EPSG:4326"
    assert len(frame) == len(plan.schemes)
    assert (frame.geom_type == "LineString").all()
    kinds = {"integer": "i", "number": "f", "text": "OU", "flag": "b"}
    for field in SCHEME_FIELDS:
        kind = frame[field.name].dtype.kind
        assert kind in kinds[field.kind] or (
            field.kind == "text" and str(frame[field.name].dtype) in {"str", "string"}
        ), field.name
    for line, scheme in zip(frame.geometry, plan.schemes, strict=True):
        # On the central meridian of UTM a metre on the map is 1/0.9996 m on the ellipsoid.
        assert GEOD.geometry_length(line) == pytest.approx(scheme.route.line.length / 0.9996, rel=2e-5)
        # The length given is along the ground, slopes included: longer, and here by less than 0.5 %.
        assert 1.0 < scheme.route.length_m / scheme.route.line.length < 1.005
    back = frame.to_crs("EPSG:32632").geometry
    for line, scheme in zip(back, plan.schemes, strict=True):
        assert line.hausdorff_distance(scheme.route.line) < 0.02


def test_water_reads_back(plan, tmp_path):
    frame = read_back(tmp_path, water_layer(plan))
    assert frame.geometry.is_valid.all()
    assert frame.to_crs("EPSG:32632").geometry[0].symmetric_difference(plan.water_body.shoreline).area < 25.0
    assert len(frame.geometry[0].interiors) == 1
    assert frame.spill_level_m[0] == 103.1
    assert not frame.spill_proven[0]
    assert frame.touches_dem_edge[0]


def zoned(plan):
    """The plan with a barred zone of two parts, one with a hole, and a cost zone."""
    x, y = plan.setting.intake.x, plan.setting.intake.y
    ring = box(x + 50.0, y - 40.0, x + 70.0, y + 40.0) - box(x + 55.0, y - 10.0, x + 60.0, y + 10.0)
    bank = Zone("bank", "barred", 1.0, MultiPolygon([ring, box(x + 80.0, y, x + 90.0, y + 5.0)]))
    return replace(plan, zones=(bank, Zone("bog", "cost", 2.5, box(x, y, x + 10.0, y + 10.0))))


def test_zones_read_back(plan, tmp_path):
    frame = read_back(tmp_path, zones_layer(zoned(plan)))
    assert frame.geometry.is_valid.all()
    for back, zone in zip(frame.to_crs("EPSG:32632").geometry, zoned(plan).zones, strict=True):
        assert back.hausdorff_distance(zone.shape) < 0.02
    assert list(frame.zone) == ["bank", "bog"]
    assert list(frame.kind) == ["barred", "cost"]
    assert list(frame.polygons) == [2, 1]
    assert np.isnan(frame.cost_factor[0])
    assert frame.cost_factor[1] == 2.5
    assert zones_layer(plan) == {"type": "FeatureCollection", "features": []}


def test_points_read_back(plan, tmp_path):
    frame = read_back(tmp_path, points_layer(plan)).set_index("id")
    assert list(frame.kind) == ["intake", "outlet", "crest", "crest", "lowest crest", "spill"]
    assert frame.geometry["intake"].x == pytest.approx(plan.setting.intake.lon, abs=1e-7)
    assert frame.geometry["outlet"].y == pytest.approx(plan.setting.outlet.lat, abs=1e-7)
    assert frame.level_m["lowest-crest"] == 103.02
    assert (frame.level_m["intake"], frame.level_m["outlet"]) == (97.5, 92.0)
    found = {f["id"]: f["properties"]["proven"] for f in points_layer(plan)["features"]}
    assert (found["lowest-crest"], found["spill"], found["outlet"]) == (True, False, None)
    assert frame.level_m["crest-R1"] == 103.4
    assert frame.chainage_m["crest-R1"] == pytest.approx(110.4, abs=0.5)
    metres = frame.to_crs("EPSG:32632")
    assert metres.geometry.x.to_numpy() == pytest.approx(frame.x.to_numpy(), abs=0.01)


def test_crossings_read_back(make, tmp_path):
    plan = make.beside()
    frame = read_back(tmp_path, points_layer(plan))
    frame = frame[frame.kind == "crossing"].set_index("id")
    assert list(frame.index) == ["crossing-C1", "crossing-C2", "crossing-C3"]
    assert list(frame.name) == ["C1", "C2", "C3"]
    assert list(frame.level_m) == [103.4, 103.5, 104.1]
    assert list(frame.length_m) == [280.1, 305.7, 391.2]
    assert list(frame.lift_m) == [3.4, 3.5, 4.1]
    assert [bool(used) for used in frame.used] == [True, True, False]
    assert frame.note["crossing-C3"] == "no way on from it keeps to the limits"
    back = frame.to_crs("EPSG:32632").geometry
    for point, crossing in zip(back, plan.crossings, strict=True):
        assert (point.x, point.y) == pytest.approx((crossing.x, crossing.y), abs=0.02)


def test_samples_read_back(make, tmp_path):
    plan = make.beside()
    frame = read_back(tmp_path, samples_layer(plan))
    assert list(frame.route) == ["R3", "R4"]  # the other is the path of a scheme
    assert list(frame.id) == ["sample-1", "sample-3"]
    for line, sample in zip(frame.to_crs("EPSG:32632").geometry, plan.samples[::2], strict=True):
        assert line.hausdorff_distance(sample.route.line) < 0.02
    assert samples_layer(make.plan()) == {"type": "FeatureCollection", "features": []}
    assert samples_layer(make.beside(samples=plan.samples[1:2])) == {"type": "FeatureCollection", "features": []}


def test_what_is_not_known_has_no_point(make):
    plan = make.plan(lowest_crest=None, water_body=replace(make.plan().water_body, spill=None))
    assert [f["id"] for f in points_layer(plan)["features"]] == ["intake", "outlet", "crest-R1", "crest-R2"]
    assert water_layer(plan)["features"][0]["properties"]["spill_level_m"] is None


def test_no_schemes_make_an_empty_collection(make):
    assert json.loads(layer_text(routes_layer(make.plan(schemes=())))) == {"type": "FeatureCollection", "features": []}


def test_no_shoreline_makes_an_empty_collection(make):
    plan = make.plan(water_body=replace(make.plan().water_body, shoreline=Polygon()))
    assert water_layer(plan)["features"] == []


def test_a_long_straight_route_is_drawn_where_it_lies(make):
    """20 km west to east on a UTM map at 65 N: one segment in lon/lat would be metres off (section 3.1.1)."""
    route = make.route("R1", make.place(), 0.0)
    long_line = LineString([(500_000.0, 7_200_000.0), (520_000.0, 7_200_000.0)])
    scheme = replace(make.plan().schemes[0], route=replace(route, line=long_line))
    drawn = shape(routes_layer(make.plan(schemes=(scheme,)))["features"][0]["geometry"])
    assert len(drawn.coords) > 10
    frame = geopandas.GeoSeries([drawn], crs="EPSG:4326").segmentize(1e-4).to_crs("EPSG:32632")
    assert frame[0].hausdorff_distance(long_line) < 0.03


def test_each_route_once_in_order_of_rank(plan):
    assert [route.name for route in routes_of(plan)] == ["R1", "R2"]
