import numpy as np
import pytest
from pyproj import CRS, Transformer

from routing.errors import OutputError
from routing.outputs.lonlat import Extent, LonLat, cut, extent_of, joined, written


def strays_m(path, x, y, crs):
    """Largest distance, in metres, from densely sampled points of the true line to the drawn segments."""
    t = np.linspace(0, len(x) - 1, 4001)
    k = np.arange(len(x))
    lon, lat = Transformer.from_crs(crs, "OGC:CRS84", always_xy=True).transform(np.interp(t, k, x), np.interp(t, k, y))
    scale = np.array([111_320.0 * np.cos(np.radians(lat.mean())), 111_132.0])  # metres a degree, textbook round values
    points, drawn = np.column_stack([np.unwrap(lon, period=360), lat]) * scale, path * scale
    a, b = drawn[:-1], drawn[1:]
    best = np.full(len(points), np.inf)
    for p, q in zip(a, b, strict=True):
        along = np.clip((points - p) @ (q - p) / max((q - p) @ (q - p), 1e-30), 0, 1)
        best = np.minimum(best, np.hypot(*(points - p - along[:, None] * (q - p)).T))
    return best.max()


@pytest.mark.parametrize(
    ("crs", "x", "y"),
    [
        ("EPSG:32632", [500_000.0, 520_000.0], [5_300_000.0, 5_300_000.0]),
        ("EPSG:32632", [500_000.0, 501_000.0, 501_000.0], [7_300_000.0, 7_300_500.0, 7_299_000.0]),
        ("EPSG:3035", [4_300_000.0, 4_310_000.0], [3_000_000.0, 3_004_000.0]),
        ("EPSG:2263", [985_000.0, 1_000_000.0], [200_000.0, 210_000.0]),
        ("EPSG:3413", [-20_000.0, 30_000.0], [-900_000.0, -900_500.0]),
    ],
)
def test_drawn_lines_stay_within_a_centimetre_of_the_true_line(crs, x, y):
    x, y = np.array(x), np.array(y)
    path = LonLat(crs).path(x, y)
    assert strays_m(path, x, y, crs) <= 0.0102  # a centimetre; the metres a degree used here are round
    if len(x) == 2 and crs == "EPSG:32632":
        ends = LonLat(crs).positions(x, y)
        assert strays_m(ends, x, y, crs) > 1.0  # 20 km drawn in one go would be metres off


def test_no_position_is_added_where_none_is_needed():
    lonlat = LonLat("EPSG:4326")
    path = lonlat.path(np.array([9.0, 10.0]), np.array([47.0, 48.0]))
    assert path.tolist() == [[9.0, 47.0], [10.0, 48.0]]
    short = LonLat("EPSG:32632").path(np.array([500_000.0, 500_100.0]), np.array([5_300_000.0, 5_300_050.0]))
    assert len(short) == 2
    across = LonLat("EPSG:3832").path(
        np.array([3_339_500.0, 3_339_700.0]), np.array([0.0, 100.0])
    )  # 180 is at 3,339,585
    assert len(across) == 2
    assert across[0, 0] < 180.0 < across[1, 0]


def test_a_line_of_one_place_is_no_trouble():
    path = LonLat("EPSG:32632").path(np.array([500_000.0, 500_000.0]), np.array([5e6, 5e6]))
    assert len(path) == 2


def test_a_vertical_part_of_the_crs_is_left_out():
    x, y = np.array([500_000.0]), np.array([5_300_000.0])
    assert LonLat("EPSG:32632+5773").positions(x, y) == pytest.approx(LonLat("EPSG:32632").positions(x, y), abs=1e-12)
    # EPSG:5773 is EGM96 height: turning it would take a geoid grid that no file here needs
    compound, flat = (LonLat(crs).operation(5e5, 5.3e6) for crs in ("EPSG:32632+5773", "EPSG:32632"))
    assert compound == flat


@pytest.mark.parametrize("wkt", ["no such CRS", CRS.from_user_input("EPSG:32632").to_wkt()[:60]])
def test_a_crs_that_proj_cannot_read_is_told(wkt):
    with pytest.raises(OutputError, match="CRS of the DEM"):
        LonLat(wkt)


def test_a_local_crs_without_a_place_on_earth_is_told():
    local = 'ENGCRS["site grid",EDATUM["site"],CS[Cartesian,2],AXIS["x",east],AXIS["y",north],LENGTHUNIT["metre",1]]'
    with pytest.raises(OutputError, match="says where on the earth"):
        LonLat(local)


def test_positions_off_the_map_are_told():
    with pytest.raises(OutputError, match="x 1000000000000"):
        LonLat("EPSG:32632").positions(np.array([5e5, 1e12]), np.array([5e6, 5e6]))


def test_operation_says_what_was_done():
    # NAD27 to WGS 84 needs a datum shift, whose exactness PROJ states in metres
    shift = LonLat("EPSG:26710").operation(550_000.0, 4_100_000.0)
    assert shift["operation"]
    assert shift["accuracy_m"] > 0.0
    same = LonLat("EPSG:32632").operation(500_000.0, 5_300_000.0)
    assert same["accuracy_m"] in (None, 0.0)


# RFC 7946, section 3.1.9: 45N from 170E across the antimeridian to 170W is cut into two lines
def test_the_example_of_section_3_1_9():
    parts = cut(np.array([[170.0, 45.0], [190.0, 45.0]]))
    assert [part.tolist() for part in parts] == [[[170.0, 45.0], [180.0, 45.0]], [[-180.0, 45.0], [-170.0, 45.0]]]


def test_westward_and_back_again():
    there_and_back = np.array([[-179.0, 1.0], [-181.0, 3.0], [-179.0, 5.0]])
    found = [part.tolist() for part in cut(there_and_back)]
    assert found == [[[-179, 1], [-180, 2]], [[180, 2], [179, 3], [180, 4]], [[-180, 4], [-179, 5]]]


def test_lines_that_only_touch_the_antimeridian_are_whole():
    touching = np.array([[179.0, 0.0], [180.0, 1.0], [179.0, 2.0]])
    assert [part.tolist() for part in cut(touching)] == [touching.tolist()]
    assert len(cut(np.array([[0.0, 0.0], [1.0, 1.0]]))) == 1


def test_a_vertex_on_the_antimeridian_is_cut_there():
    parts = cut(np.array([[179.0, 0.0], [180.0, 1.0], [181.0, 2.0]]))
    assert [part.tolist() for part in parts] == [[[179, 0], [180, 1]], [[-180, 1], [-179, 2]]]


def test_cutting_keeps_the_length():
    rng = np.random.default_rng(7)
    path = np.column_stack([np.cumsum(rng.normal(0, 60, 200)), rng.uniform(-80, 80, 200)])
    parts = cut(path)
    total = sum(np.hypot(*np.diff(part, axis=0).T).sum() for part in parts)
    assert total == pytest.approx(np.hypot(*np.diff(path, axis=0).T).sum(), rel=1e-12)
    assert all((np.abs(part[:, 0]) <= 180.0).all() for part in parts)


# RFC 7946, section 5.2: a bbox across the antimeridian has west larger than east
def test_the_example_of_section_5_2():
    fiji = np.array([[177.0, -20.0], [182.0, -16.0]])
    assert extent_of(fiji).bbox() == [177.0, -20.0, -178.0, -16.0]


def test_bounds_are_joined_on_the_nearest_side():
    east, west = Extent(179.9, -17.0, 179.95, -16.9), Extent(-179.9, -17.1, -179.8, -17.0)
    assert joined([east, west]).bbox() == joined([west, east]).bbox() == [179.9, -17.1, -179.8, -16.9]
    assert joined([Extent(9, 47, 10, 48), Extent(8, 47, 8.5, 49)]).bbox() == [8.0, 47.0, 10.0, 49.0]
    with pytest.raises(ValueError, match="no bounds"):
        joined([])


def test_bounds_round_the_whole_earth():
    assert Extent(-170.0, 60.0, 191.0, 70.0).bbox() == [-180.0, 60.0, 180.0, 70.0]


def test_written_positions_have_seven_places_and_no_repeats():
    part = np.array([[9.123456789, -0.00000001], [9.12345681, 0.0], [9.2, 47.0]])
    assert written(part) == [[9.1234568, 0.0], [9.2, 47.0]]
    assert "-0.0" not in str(written(part))
