"""Lines and polygons for an outlet as cells: against shapely cell by cell, and refusals by name."""

import numpy as np
import pytest
import shapely
from pyproj import Transformer
from rasterio import Affine
from shapely import GeometryCollection, LineString, MultiLineString, MultiPolygon, Point, Polygon, box

from routing.errors import TerrainError
from routing.records import TerrainAsk
from routing.terrain import open_dem
from routing.terrain.shapes import cells_on, read_shapes
from routing.terrain.vectors import LayerAsk

UTM = "EPSG:32615"
CORNER = np.array([450000.0, 4999700.0])


@pytest.fixture
def read(make_dem, tmp_path):
    """Write shapes beside a DEM of 30 x 40 cells of 10 m and read them; places count in metres from its corner."""

    def of(kind, *shapes, crs=UTM):
        import geopandas

        placed = [shapely.transform(shape, lambda xy: xy + CORNER) for shape in shapes]
        frame = geopandas.GeoDataFrame(geometry=placed, crs=UTM).to_crs(crs)
        frame.to_file(tmp_path / "shapes.gpkg")
        ask = TerrainAsk(file=make_dem(np.zeros((30, 40), dtype="float32")), vertical_unit="m")
        with open_dem(ask) as dem:
            found = read_shapes(dem, LayerAsk(tmp_path / "shapes.gpkg", key="outlet.file", line=9), kind)
            return shapely.transform(found, lambda xy: xy - CORNER), dem.read()

    return of


def cells(kind, shape, terrain):
    moved = shapely.transform(shape, lambda xy: xy + CORNER)
    return {(int(row), int(col)) for row, col in np.argwhere(cells_on(terrain, moved, kind))}


@pytest.mark.parametrize("seed", range(4))
def test_lines_give_the_cells_that_they_cross(read, seed):
    line = LineString(np.random.default_rng(seed).uniform([0.0, 0.0], [400.0, 300.0], (5, 2)))
    shape, terrain = read("line", line)
    crossed = {
        (row, col)
        for row, col in np.ndindex(30, 40)
        if line.intersection(box(10 * col, 290 - 10 * row, 10 * col + 10, 300 - 10 * row)).length > 1e-6
    }
    assert cells("line", shape, terrain) == crossed


@pytest.mark.parametrize("seed", range(4))
def test_polygons_give_the_cells_whose_centre_they_hold(read, seed):
    """A bow tie, too: what its outline goes round counts."""
    ring = np.random.default_rng(seed).uniform([0.0, 0.0], [400.0, 300.0], (5, 2))
    whole = shapely.make_valid(Polygon(ring), method="structure", keep_collapsed=False)
    shape, terrain = read("polygon", Polygon(ring))
    held = {(r, c) for r, c in np.ndindex(30, 40) if whole.contains(Point(10 * c + 5, 295 - 10 * r))}
    assert cells("polygon", shape, terrain) == held


@pytest.mark.parametrize("crs", ["EPSG:4326", "EPSG:3857", "EPSG:32614"])
def test_shapes_of_another_crs_land_where_they_were_drawn(read, crs):
    """Their edges are straight in their own CRS: over 300 m they part from ours by less than a centimetre."""
    shape, _ = read("polygon", box(20.0, 30.0, 320.0, 270.0), crs=crs)
    assert shape.symmetric_difference(box(20.0, 30.0, 320.0, 270.0)).area < 10.0
    line, _ = read("line", LineString([(0.0, 0.0), (300.0, 200.0)]), crs=crs)
    assert line.hausdorff_distance(LineString([(0.0, 0.0), (300.0, 200.0)])) < 0.02


def test_long_lines_follow_the_curve_that_they_become(make_dem, tmp_path):
    """A parallel of 45 degrees, 2 degrees long, bows by some 480 m in UTM (pyproj, point by point)."""
    import geopandas

    geopandas.GeoDataFrame(geometry=[LineString([(-94.0, 45.0), (-92.0, 45.0)])], crs="EPSG:4326").to_file(
        tmp_path / "parallel.gpkg"
    )
    wide = Affine(1000.0, 0.0, 400000.0, 0.0, -1000.0, 5050000.0)
    ask = TerrainAsk(file=make_dem(np.zeros((200, 200), dtype="float32"), transform=wide), vertical_unit="m")
    with open_dem(ask) as dem:
        found = read_shapes(dem, LayerAsk(tmp_path / "parallel.gpkg"), "line")
    turn = Transformer.from_crs("EPSG:4326", UTM, always_xy=True)
    lon = np.linspace(-94.0, -92.0, 501)
    points = shapely.points(*turn.transform(lon, np.full(lon.size, 45.0)))
    assert shapely.distance(found, points).max() < 0.1
    straight = LineString([shapely.get_coordinates(points)[0], shapely.get_coordinates(points)[-1]])
    assert shapely.distance(straight, points).max() > 400.0


def test_parts_of_many_kinds_are_joined(read):
    both = [LineString([(0, 0), (50, 50)]), LineString([(100, 0), (100, 50)])]
    shape, _ = read("line", MultiLineString(both), GeometryCollection([LineString([(200, 0), (200, 10)])]))
    assert shape.length == pytest.approx(50.0 * 2**0.5 + 60.0)
    squares = [box(0, 0, 10, 10), box(20, 0, 30, 10)]
    shape, _ = read("polygon", MultiPolygon(squares), box(5, 0, 15, 10))
    assert shape.area == pytest.approx(250.0)


def test_shapes_off_the_window_have_no_cells(read):
    shape, terrain = read("polygon", box(0.0, 0.0, 100.0, 100.0))
    away = shapely.transform(shape, lambda xy: xy + 1000.0)
    assert not cells("polygon", away, terrain)


@pytest.mark.parametrize(
    ("kind", "shapes", "what", "found"),
    [
        ("line", [box(0, 0, 10, 10)], "must hold lines", "1 features (Polygon)"),
        ("polygon", [LineString([(0, 0), (10, 10)])], "must hold polygons", "1 features (LineString)"),
        ("line", [LineString([(0, 0), (10, 10)]), Point(5, 5)], "must hold lines", "2 features (LineString, Point)"),
        ("line", [LineString([(900, 900), (950, 900)])], "outside the DEM", "x 450900.0 to 450950.0"),
    ],
)
def test_what_cannot_serve_is_refused_by_name(read, kind, shapes, what, found):
    with pytest.raises(TerrainError) as caught:
        read(kind, *shapes)
    (problem,) = caught.value.problems
    assert what in problem.what
    assert found in problem.found
    assert (problem.key, problem.line) == ("outlet.file", 9)
    assert problem.remedy
