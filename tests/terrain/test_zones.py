"""Zones laid over cells and moves, against shapely move by move; shapes of every kind mended, told or refused by name."""

import json

import numpy as np
import pytest
import shapely
from pyproj import Transformer
from shapely import LineString, MultiPolygon, Point, Polygon, box
from shapely.geometry import GeometryCollection

from routing.errors import TerrainError
from routing.records import ZoneAsk
from routing.terrain import zone_map

UTM = "EPSG:32615"
QUEEN = [(0, 1), (1, 1), (1, 0), (1, -1), (0, -1), (-1, -1), (-1, 0), (-1, 1)]
KNIGHT = [(r, c) for r in (-2, -1, 1, 2) for c in (-2, -1, 1, 2) if abs(r) != abs(c)]
LONG = [(r, c) for r in range(-3, 4) for c in range(-3, 4) if {abs(r), abs(c)} in ({1, 3}, {2, 3})]
SETS = {8: QUEEN, 16: QUEEN + KNIGHT, 32: QUEEN + KNIGHT + LONG}


@pytest.fixture
def ask_of(tmp_path):
    """Write shapes as a GeoPackage in the CRS of the made terrains, and return the zone that names it."""

    def write(*shapes, name="bank", crs=UTM, kind="barred", factor=1.0):
        import geopandas

        path = tmp_path / f"{name}.gpkg"
        geopandas.GeoDataFrame(geometry=list(shapes), crs=crs).to_file(path)
        return ZoneAsk(name, path, None, kind, factor, "zones[1].file", 7)

    return write


def geojson(path, *geometries):
    features = [{"type": "Feature", "properties": {}, "geometry": geometry} for geometry in geometries]
    path.write_text(json.dumps({"type": "FeatureCollection", "features": features}), encoding="utf-8")
    return ZoneAsk(path.stem, path, key="zones[1].file", line=7)


def centre(terrain, row, col):
    a, _, c, _, e, f = terrain.transform
    return c + a * (col + 0.5), f + e * (row + 0.5)


def blob(rng, rows, cols, *, holes=True, on_grid=False):
    """A star-shaped polygon anywhere on or over the edge of a grid of 1 m cells, perhaps with a hole."""
    count = int(rng.integers(3, 12))
    angle = np.sort(rng.uniform(0.0, 2.0 * np.pi, count))
    radius = rng.uniform(0.2, 1.0, count) * rng.uniform(0.3, 0.7 * rows)
    middle = rng.uniform(-1.0, 1.0 + np.array([cols, rows]))
    ring = middle + np.column_stack([np.cos(angle), np.sin(angle)]) * radius[:, None]
    hole = middle + (ring - middle) * 0.5
    if on_grid:  # vertices on cell centres and grid lines: every way of touching
        ring, hole = np.round(2.0 * ring) / 2.0, np.round(2.0 * hole) / 2.0
    shape = shapely.make_valid(Polygon(ring, [hole] if holes and rng.random() < 0.4 else []))
    parts = [part for part in shapely.get_parts(shape) if part.geom_type == "Polygon"]
    return shapely.union_all(parts) if parts else None


@pytest.fixture(scope="session")
def rng_of():
    return np.random.default_rng


def test_a_wall_thinner_than_a_cell_bars_every_move_over_it_and_none_beside_it(make_terrain, ask_of):
    terrain = make_terrain(np.zeros((20, 20)))
    found = zone_map(terrain, (ask_of(box(-5.0, 9.99, 25.0, 10.01)),), SETS[16])  # between two rows of centres
    assert not found.barred.any()
    up = [bit for bit, (down, _) in enumerate(SETS[16]) if down < 0]
    level = [bit for bit, (down, _) in enumerate(SETS[16]) if down == 0]
    for row, col in ((10, 10), (10, 3)):
        assert all(found.blocked_moves[row, col] >> bit & 1 for bit in up)
        assert not any(found.blocked_moves[row, col] >> bit & 1 for bit in level)
    assert not found.blocked_moves[13].any()


def test_touching_the_outline_is_free(make_terrain, ask_of):
    """A box whose edges run through cell centres: the way along its edge is open, the way into it is not."""
    terrain = make_terrain(np.zeros((8, 8)))
    found = zone_map(terrain, (ask_of(box(2.5, 2.5, 5.5, 5.5)),), QUEEN)
    assert found.barred.sum() == 4  # centres 3.5 and 4.5 each way
    along = found.blocked_moves[2, 2] >> QUEEN.index((0, 1)) & 1
    into = found.blocked_moves[2, 2] >> QUEEN.index((1, 1)) & 1
    assert (along, into) == (0, 1)


def test_each_move_is_blocked_both_ways(make_terrain, ask_of, rng_of):
    terrain = make_terrain(np.zeros((12, 12)))
    shape = blob(rng_of(3), 12, 12)
    moves = SETS[32]
    bits = zone_map(terrain, (ask_of(shape),), moves).blocked_moves
    for row, col in np.ndindex(12, 12):
        for bit, (down, right) in enumerate(moves):
            if 0 <= row + down < 12 and 0 <= col + right < 12:
                back = moves.index((-down, -right))
                assert bits[row, col] >> bit & 1 == bits[row + down, col + right] >> back & 1


def test_no_zones_bar_nothing(make_terrain):
    found = zone_map(make_terrain(np.zeros((4, 4))), (), QUEEN)
    assert not found.barred.any()
    assert not found.blocked_moves.any()
    assert (found.cost_factor == 1.0).all()
    assert found.zones == found.notes == ()


# ---------------------------------------------------------------- shapes of every kind


def test_overlaps_of_one_zone_are_joined_and_a_seam_is_no_way(make_terrain, ask_of):
    """Two boxes that meet along a line of cell centres: the line is inside the two together."""
    terrain = make_terrain(np.zeros((9, 9)))
    halves = (box(1.0, 1.0, 4.5, 8.0), box(4.5, 1.0, 8.0, 8.0))
    down = 1 << QUEEN.index((1, 0))
    one = zone_map(terrain, (ask_of(*halves),), QUEEN)
    assert one.barred[4, 4]
    assert one.blocked_moves[4, 4] & down
    assert one.zones[0].shape.area == pytest.approx(49.0)
    two = zone_map(terrain, (ask_of(halves[0], name="a"), ask_of(halves[1], name="b")), QUEEN)
    assert [zone.shape.area for zone in two.zones] == [pytest.approx(24.5)] * 2
    np.testing.assert_array_equal(two.barred, one.barred)
    np.testing.assert_array_equal(two.blocked_moves, one.blocked_moves)
    apart = zone_map(terrain, (ask_of(halves[0], name="a"), ask_of(box(4.6, 1.0, 8.0, 8.0), name="c")), QUEEN)
    assert not apart.blocked_moves[4, 4] & down  # a gap of 0.1 m along the centres is a way


def test_the_dearest_of_cost_zones_counts_and_bars_stand_beside_them(make_terrain, ask_of):
    terrain = make_terrain(np.zeros((10, 10)))
    cheap = ask_of(box(0, 0, 6, 10), name="track", kind="cost", factor=0.5)
    dear = ask_of(box(4, 0, 8, 10), name="bog", kind="cost", factor=3.0)
    bar = ask_of(box(7, 0, 10, 10), name="bank")
    for asks in ((cheap, dear, bar), (bar, dear, cheap)):
        found = zone_map(terrain, asks, QUEEN)
        np.testing.assert_array_equal(found.cost_factor[5], [0.5] * 4 + [3.0] * 4 + [1.0] * 2)
        np.testing.assert_array_equal(found.barred[5], [False] * 7 + [True] * 3)
    only_cost = zone_map(terrain, (cheap, dear), QUEEN)
    assert not only_cost.barred.any()
    assert not only_cost.blocked_moves.any()


def test_holes_stay_open(make_terrain, ask_of):
    terrain = make_terrain(np.zeros((12, 12)))
    found = zone_map(terrain, (ask_of(box(1, 1, 11, 11) - box(4, 4, 8, 8)),), QUEEN)
    assert not found.barred[4:8, 4:8].any()
    assert found.barred.sum() == 100 - 16
    assert found.notes == ()


@pytest.mark.parametrize(
    ("ring", "inside", "outside"),
    [
        ([(1, 1), (9, 9), (9, 1), (1, 9)], (5, 7), (2, 5)),  # a bow tie: both lobes
        ([(1, 1), (9, 1), (9, 9), (1, 9), (1, 1), (3, 3), (7, 3), (7, 7), (3, 7), (3, 3)], (8, 1), (0, 0)),
    ],
)
def test_an_outline_that_crosses_itself_is_mended_and_told(make_terrain, ask_of, ring, inside, outside):
    found = zone_map(make_terrain(np.zeros((10, 10))), (ask_of(Polygon(ring)),), QUEEN)
    assert found.zones[0].shape.is_valid
    assert found.barred[inside]
    assert not found.barred[outside]
    (note,) = found.notes
    assert note.startswith("Zone bank: 1 of its 1 polygons had an outline that crosses or touches itself")


def test_ground_that_an_outline_goes_round_twice_stays_barred(make_terrain, ask_of):
    """By the rule of odd and even crossings the middle would be a hole, and a route could end up in it."""
    twice = Polygon([(1, 1), (9, 1), (9, 9), (3, 9), (3, 3), (7, 3), (7, 10), (1, 10)])
    assert not twice.is_valid
    found = zone_map(make_terrain(np.zeros((11, 11))), (ask_of(twice),), QUEEN)
    assert found.zones[0].shape.contains(Point(5, 6))


def test_slivers_count_and_are_told(make_terrain, ask_of):
    terrain = make_terrain(np.zeros((10, 10)))
    thread = box(0.0, 4.996, 10.0, 5.004)  # 8 mm on cells of 1 m
    found = zone_map(terrain, (ask_of(box(0, 0, 2, 2), thread),), QUEEN)
    assert found.blocked_moves[4, 5] >> QUEEN.index((1, 0)) & 1
    (note,) = found.notes
    assert "1 of its 2 polygons is narrower than a hundredth of a cell" in note
    assert zone_map(terrain, (ask_of(box(0.0, 4.99, 10.0, 5.004)),), QUEEN).notes == ()


def test_polygons_without_area_are_left_out_and_told(make_terrain, ask_of):
    flat = Polygon([(1, 1), (5, 5), (3, 3)])
    found = zone_map(make_terrain(np.zeros((10, 10))), (ask_of(flat, box(6, 6, 8, 8)),), QUEEN)
    assert found.notes == ("Zone bank: 1 of its 2 polygons is without area and left out.",)
    with pytest.raises(TerrainError, match="The zone bank encloses no ground"):
        zone_map(make_terrain(np.zeros((10, 10))), (ask_of(flat),), QUEEN)


def test_zones_that_miss_the_ground_are_told(make_terrain, ask_of):
    from routing.records import GridWindow

    terrain = make_terrain(np.zeros((10, 10)))
    (note,) = zone_map(terrain, (ask_of(box(50, 50, 60, 60)),), QUEEN).notes
    assert note.startswith("Zone bank lies wholly outside the DEM, so it has no effect")
    part = make_terrain(np.zeros((10, 10)), window=GridWindow(0, 0, 10, 10, 10, 100))
    from dataclasses import replace

    part = replace(part, facts=replace(part.facts, cols=100))
    (note,) = zone_map(part, (ask_of(box(50, 2, 60, 4)),), QUEEN).notes
    assert "wholly outside the part of the DEM that was read" in note


@pytest.mark.parametrize(
    ("shapes", "what", "found"),
    [
        (
            [LineString([(1, 1), (5, 5)]), box(1, 1, 2, 2)],
            "holds features that are no polygons",
            "1 of 2 features: Line",
        ),
        (
            [GeometryCollection([box(1, 1, 2, 2), Point(3, 3)])],
            "holds features that are no polygons",
            "features: Point",
        ),
        ([Polygon()], "holds no polygon", "an empty layer"),
    ],
)
def test_what_is_no_polygon_is_refused_by_name(make_terrain, ask_of, shapes, what, found):
    with pytest.raises(TerrainError) as caught:
        zone_map(make_terrain(np.zeros((4, 4))), (ask_of(*shapes, name="heath"),), QUEEN)
    (problem,) = caught.value.problems
    assert problem.what.startswith(f"The zone heath {what}")
    assert found in problem.found
    assert (problem.key, problem.line) == ("zones[1].file", 7)
    assert problem.allowed
    assert problem.remedy


def test_a_multipolygon_and_a_collection_of_polygons_serve(make_terrain, ask_of):
    terrain = make_terrain(np.zeros((10, 10)))
    both = (box(1, 1, 3, 3), box(5, 5, 8, 8))
    shapes = (MultiPolygon(both), GeometryCollection(both))
    for shape in shapes:
        assert zone_map(terrain, (ask_of(shape),), QUEEN).barred.sum() == 4 + 9


# ---------------------------------------------------------------- other coordinate systems


def test_geojson_in_degrees_lands_where_pyproj_says(make_terrain, tmp_path):
    terrain = utm_terrain(make_terrain)
    back = Transformer.from_crs(UTM, "EPSG:4326", always_xy=True)
    ring = [back.transform(500000.0 + x, 4999900.0 + y) for x, y in ((20, 20), (60, 20), (60, 70), (20, 70), (20, 20))]
    ask = geojson(tmp_path / "park.geojson", {"type": "Polygon", "coordinates": [[list(xy) for xy in ring]]})
    found = zone_map(terrain, (ask,), QUEEN)
    assert found.barred.sum() == 40 * 50
    assert found.barred[30:80, 20:60].all()


def utm_terrain(make_terrain):
    from dataclasses import replace

    terrain = make_terrain(np.zeros((100, 100)))
    transform = (1.0, 0.0, 500000.0, 0.0, -1.0, 5000000.0)
    return replace(terrain, transform=transform, facts=replace(terrain.facts, transform=transform))


def test_a_zone_where_the_crs_has_no_coordinates_is_refused(make_terrain, tmp_path):
    ask = geojson(
        tmp_path / "far.geojson", {"type": "Polygon", "coordinates": [[[10, 9000], [11, 9000], [11, 9001], [10, 9000]]]}
    )
    with pytest.raises(TerrainError, match="no coordinates"):
        zone_map(make_terrain(np.zeros((4, 4))), (ask,), QUEEN)
