"""Water bodies from a polygon."""

import json
from dataclasses import replace

import numpy as np
import pytest
import shapely
from pyproj import Geod, Transformer
from rasterio import Affine

from routing.errors import TerrainError
from routing.records import GridWindow, PointAsk, TerrainAsk
from routing.terrain import LayerAsk, open_dem, place_point, share_above_level, water_body_from_polygon

TO_DEGREES = Transformer.from_crs("EPSG:32615", "EPSG:4326", always_xy=True)


@pytest.fixture
def lake(make_dem, tmp_path):
    """Return a function: polygons in UTM -> (terrain, layer, intake in the middle of the DEM)."""
    path = make_dem(np.zeros((100, 100), dtype=np.float32), transform=Affine(10, 0, 450000, 0, -10, 5000000))

    def make(*polygons, window=None):
        file = tmp_path / "lake.geojson"
        moved = [
            shapely.transform(one, lambda xy: np.column_stack(TO_DEGREES.transform(xy[:, 0], xy[:, 1])))
            for one in polygons
        ]
        features = [{"type": "Feature", "properties": {}, "geometry": shapely.geometry.mapping(one)} for one in moved]
        file.write_text(json.dumps({"type": "FeatureCollection", "features": features}))
        with open_dem(TerrainAsk(path, vertical_unit="m")) as dem:
            intake = place_point(dem, PointAsk(x=450505.0, y=4999495.0))
            return dem.read(window), LayerAsk(file, key="water.polygon_file", line=5), intake

    return make


def test_cells_area_and_shoreline(lake):
    polygon = shapely.box(450300, 4999300, 450700, 4999800)
    body = water_body_from_polygon(*lake(polygon)[:2], 3.5, lake(polygon)[2])
    assert body.cells.sum() == 40 * 50
    assert body.cells[20:70, 30:70].all()
    assert (body.source, body.level_m, body.void_cells) == ("polygon", 3.5, 0)
    assert not body.touches_edge
    assert not body.touches_open_border
    assert body.shoreline.area == pytest.approx(200000.0, rel=1e-6)
    # Independent: geodesic area of the same corners by pyproj.
    lon, lat = TO_DEGREES.transform([450300, 450700, 450700, 450300], [4999300, 4999300, 4999800, 4999800])
    area, _ = Geod(ellps="WGS84").polygon_area_perimeter(lon, lat)
    assert body.area_m2 == pytest.approx(abs(area), rel=1e-6)


def test_an_island_is_left_out(lake):
    ring = shapely.box(450300, 4999300, 450700, 4999800).difference(shapely.box(450320, 4999320, 450400, 4999400))
    terrain, layer, intake = lake(ring)
    body = water_body_from_polygon(terrain, layer, 0.0, intake)
    assert body.cells.sum() == 2000 - 64
    assert body.area_m2 == pytest.approx((200000 - 6400) / 0.99963**2, rel=1e-3)


def test_of_several_lakes_the_intakes_is_taken(lake):
    terrain, layer, intake = lake(
        shapely.box(450000, 4999900, 450050, 4999950), shapely.box(450450, 4999450, 450550, 4999550)
    )
    assert water_body_from_polygon(terrain, layer, 0.0, intake).cells.sum() == 100


def test_a_polygon_without_the_intake_is_refused(lake):
    terrain, layer, intake = lake(shapely.box(450000, 4999900, 450050, 4999950))
    with pytest.raises(TerrainError, match="holds the intake") as caught:
        water_body_from_polygon(terrain, layer, 0.0, intake)
    assert (caught.value.problems[0].key, caught.value.problems[0].line) == ("water.polygon_file", 5)


def test_a_file_without_polygons_is_refused(lake):
    terrain, layer, intake = lake(shapely.Point(450505, 4999495))
    with pytest.raises(TerrainError, match=r"holds no polygon[\s\S]*Point"):
        water_body_from_polygon(terrain, layer, 0.0, intake)


def test_a_polygon_beyond_the_dem_touches_its_edge(lake):
    terrain, layer, intake = lake(shapely.box(449000, 4999450, 450550, 4999550))
    body = water_body_from_polygon(terrain, layer, 0.0, intake)
    assert body.touches_edge
    assert not body.touches_open_border


def test_a_polygon_beyond_the_window_touches_its_border(lake):
    window = GridWindow(40, 40, 20, 20, 100, 100)
    terrain, layer, intake = lake(shapely.box(450300, 4999300, 450700, 4999800), window=window)
    body = water_body_from_polygon(terrain, layer, 0.0, intake)
    assert body.cells.all()
    assert body.touches_open_border
    assert not body.touches_edge


def test_a_polygon_smaller_than_a_cell_still_has_the_intakes(lake):
    # It lies in the corner of its cell, so that it holds no cell centre.
    terrain, layer, intake = lake(shapely.Point(450508, 4999498).buffer(1.5))
    intake = replace(intake, x=450508.0, y=4999498.0)
    body = water_body_from_polygon(terrain, layer, 0.0, intake)
    assert np.argwhere(body.cells).tolist() == [[50, 50]]


def test_ground_above_the_level_is_counted(lake):
    terrain, layer, intake = lake(shapely.box(450300, 4999300, 450700, 4999800))
    ground = terrain.elevation_m.copy()
    ground[20:70, 30:40] = 7.0
    body = water_body_from_polygon(replace(terrain, elevation_m=ground), layer, 2.0, intake)
    assert share_above_level(replace(terrain, elevation_m=ground), body) == 0.25
    assert share_above_level(terrain, body) == 0.0
