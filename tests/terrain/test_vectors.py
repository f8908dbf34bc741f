"""Reading vector layers."""

import json

import pytest
from pyproj import CRS

from routing.errors import TerrainError
from routing.terrain import LayerAsk, read_geometries
from routing.terrain.vectors import read_layer

UTM = CRS.from_epsg(32615)


@pytest.fixture
def write_layer(tmp_path):
    """Write geometries with geopandas; return the path."""

    def write(geometries, crs="EPSG:4326", name="layer.gpkg", layer=None):
        import geopandas

        path = tmp_path / name
        geopandas.GeoDataFrame(geometry=geometries, crs=crs).to_file(path, layer=layer or path.stem)
        return path

    return write


def test_geojson_is_wgs84(tmp_path):
    path = tmp_path / "p.geojson"
    point = {"type": "Feature", "properties": {}, "geometry": {"type": "Point", "coordinates": [-93.0, 0.0, 55.0]}}
    path.write_text(json.dumps({"type": "FeatureCollection", "features": [point]}))
    (found,) = read_geometries(LayerAsk(path), UTM)
    assert (found.x, found.y) == pytest.approx((500000.0, 0.0), abs=1e-3)
    assert not found.has_z


def test_geopackage_in_any_crs(write_layer):
    import shapely

    path = write_layer([shapely.Point(500000.0, 5000000.0)], crs="EPSG:32616")
    (found,) = read_geometries(LayerAsk(path), UTM)
    # 500000 E in zone 16 is 87 degrees west, 6 degrees east of the axis of zone 15.
    assert found.x == pytest.approx(972000, abs=3000)


def test_features_without_geometry_are_left_out(tmp_path):
    path = tmp_path / "p.geojson"
    features = [{"type": "Feature", "properties": {"a": 1}, "geometry": None}]
    path.write_text(json.dumps({"type": "FeatureCollection", "features": features}))
    assert read_geometries(LayerAsk(path), UTM) == []


def test_layers_are_named(write_layer):
    import shapely

    write_layer([shapely.Point(-93, 45)], layer="a")
    path = write_layer([shapely.Point(-93, 46)], layer="b")
    assert read_geometries(LayerAsk(path, "b"), UTM)[0].y > 5_090_000
    with pytest.raises(TerrainError, match=r"several layers[\s\S]*a, b"):
        read_geometries(LayerAsk(path), UTM)
    with pytest.raises(TerrainError, match=r"no such layer[\s\S]*a, b"):
        read_geometries(LayerAsk(path, "c"), UTM)


def test_missing_and_broken_files(tmp_path):
    with pytest.raises(TerrainError, match="does not exist"):
        read_geometries(LayerAsk(tmp_path / "gone.gpkg", key="intake.file", line=9), UTM)
    broken = tmp_path / "broken.geojson"
    broken.write_text("{")
    with pytest.raises(TerrainError, match="cannot be read as map features"):
        read_geometries(LayerAsk(broken), UTM)


def test_a_layer_without_crs(tmp_path):
    import pyogrio
    import shapely

    path = tmp_path / "bare.gpkg"
    with pytest.warns(UserWarning, match="crs"):
        pyogrio.raw.write(
            path, shapely.to_wkb([shapely.Point(1, 2)]), field_data=[], fields=[], geometry_type="Point", crs=None
        )
    with pytest.raises(TerrainError, match="which coordinate system"):
        read_geometries(LayerAsk(path), UTM)


def test_coordinates_that_the_crs_does_not_reach(tmp_path):
    path = tmp_path / "far.geojson"
    point = {"type": "Feature", "properties": {}, "geometry": {"type": "Point", "coordinates": [10.0, 9000.0]}}
    path.write_text(json.dumps({"type": "FeatureCollection", "features": [point]}))
    with pytest.raises(TerrainError, match="no coordinates"):
        read_geometries(LayerAsk(path), UTM)


def test_plain_geojson_is_read_as_gdal_reads_it(tmp_path):
    """The quick way for RFC 7946 files gives what pyogrio gives (source: GDAL), null and empty features left out."""
    import pyogrio
    import shapely

    features = [
        {"type": "Point", "coordinates": [3.0, 55.5, 12.0]},
        None,
        {
            "type": "MultiPolygon",
            "coordinates": [[[[0, 0], [2, 0], [2, 2], [0, 0]]], [[[5, 5], [6, 5], [6, 6], [5, 5]]]],
        },
        {"type": "GeometryCollection", "geometries": []},
    ]
    collection = {
        "type": "FeatureCollection",
        "features": [{"type": "Feature", "properties": {}, "geometry": one} for one in features],
    }
    file = tmp_path / "plain.geojson"
    file.write_text(json.dumps(collection), encoding="utf-8")
    found, crs = read_layer(LayerAsk(file))
    _, _, expected, _ = pyogrio.raw.read(file, columns=[], force_2d=True)
    same = [one for one in shapely.from_wkb(expected) if one is not None and not one.is_empty]
    assert [one.wkt for one in found] == [one.wkt for one in same]
    assert crs.is_geographic
    file.write_text(json.dumps(collection | {"crs": {"type": "name", "properties": {"name": "EPSG:32631"}}}))
    assert read_layer(LayerAsk(file))[1].to_epsg() == 32631
