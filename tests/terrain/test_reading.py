"""Opening DEMs and reading windows."""

import time

import numpy as np
import pytest
import rasterio
from rasterio import Affine
from rasterio.windows import Window

from routing.errors import TerrainError
from routing.records import GridWindow, TerrainAsk
from routing.terrain import inspect, long_section, open_dem

UTM = Affine(10.0, 0.0, 450000.0, 0.0, -10.0, 5000000.0)
RAMP = np.arange(30, dtype=np.float32).reshape(5, 6)


def test_a_plain_dem(make_dem, read_dem):
    terrain = read_dem(make_dem(RAMP))
    assert terrain.elevation_m.dtype == np.float64
    assert np.array_equal(terrain.elevation_m, RAMP)
    assert terrain.valid.all()
    assert terrain.transform == (10.0, 0.0, 450000.0, 0.0, -10.0, 5000000.0)
    assert terrain.window.whole


def test_a_window_is_the_same_part_of_the_whole(make_dem):
    path = make_dem(RAMP)
    with open_dem(TerrainAsk(path, vertical_unit="m")) as dem:
        window = dem.window_around([(450025.0, 4999975.0)], 1)
        part = dem.read(window)
    assert window == GridWindow(1, 1, 3, 3, 5, 6)
    assert np.array_equal(part.elevation_m, RAMP[1:4, 1:4])
    assert part.transform[2] == 450010.0
    assert part.transform[5] == 4999990.0


def test_windows_stop_at_the_dem(make_dem):
    with open_dem(TerrainAsk(make_dem(RAMP), vertical_unit="m")) as dem:
        small = dem.window_around([(450005.0, 4999995.0), (450015.0, 4999995.0)], 0)
        assert small == GridWindow(0, 0, 1, 2, 5, 6)
        assert dem.grown(small, cells=2) == GridWindow(0, 0, 3, 4, 5, 6)
        assert dem.grown(small, factor=1.1) == GridWindow(0, 0, 2, 3, 5, 6)
        assert dem.grown(small, factor=100) == dem.whole
        with pytest.raises(ValueError, match="factor or cells"):
            dem.grown(small)


def test_cell_of_places_on_edges(make_dem):
    with open_dem(TerrainAsk(make_dem(RAMP), vertical_unit="m")) as dem:
        assert dem.shape == (5, 6)
        assert dem.cell_of(450000.0, 5000000.0) == (0, 0)
        assert dem.cell_of(450060.0, 4999950.0) == (4, 5)
        assert dem.cell_of(450029.9, 4999979.9) == (2, 2)
        with pytest.raises(TerrainError, match="outside the DEM"):
            dem.cell_of(450060.1, 4999950.0)


@pytest.mark.parametrize(
    ("transform", "order"),
    [
        (Affine(10, 0, 450000, 0, 10, 4999950), np.s_[::-1, :]),
        (Affine(-10, 0, 450060, 0, -10, 5000000), np.s_[:, ::-1]),
        (Affine(-10, 0, 450060, 0, 10, 4999950), np.s_[::-1, ::-1]),
    ],
    ids=["south-up", "east-west", "both"],
)
def test_turned_files_read_the_same(make_dem, read_dem, transform, order):
    path = make_dem(RAMP[order], transform=transform)
    terrain = read_dem(path)
    assert np.array_equal(terrain.elevation_m, RAMP)
    assert terrain.transform == (10.0, 0.0, 450000.0, 0.0, -10.0, 5000000.0)
    assert any("they are used" in note for note in terrain.facts.assumptions)
    with open_dem(TerrainAsk(path, vertical_unit="m")) as dem:
        part = dem.read(GridWindow(1, 3, 2, 2, 5, 6))
    assert np.array_equal(part.elevation_m, RAMP[1:3, 3:5])


def test_16_bit_degrees(make_dem, read_dem):
    values = np.array([[300, 310], [320, -32768]], dtype=np.int16)
    path = make_dem(values, crs="EPSG:4326", transform=Affine(1 / 1200, 0, -84.0, 0, -1 / 1200, 36.5), nodata=-32768)
    terrain = read_dem(path)
    assert terrain.elevation_m[0].tolist() == [300.0, 310.0]
    assert terrain.valid.tolist() == [[True, True], [True, False]]
    assert terrain.step_x_m[0] == pytest.approx(111320.0 / 1200 * np.cos(np.radians(36.5)), rel=3e-3)
    assert terrain.facts.horizontal_unit == "degree"


def test_us_feet_in_plan_and_height(make_dem, read_dem):
    path = make_dem(RAMP, crs="EPSG:2263+6360", transform=Affine(10, 0, 1000000, 0, -10, 200000))
    terrain = read_dem(path, vertical_unit=None)
    assert terrain.elevation_m[1, 1] == pytest.approx(7 * 1200 / 3937)
    assert terrain.step_x_m[0] == pytest.approx(10 * 1200 / 3937, rel=1e-4)
    assert terrain.facts.vertical_unit == "us-ft"
    assert terrain.facts.horizontal_unit == "US survey foot"
    assert terrain.facts.vertical_datum == "NAVD88 height (ftUS)"


@pytest.mark.parametrize("marker", [-9999.0, np.nan, -3.4028230607370965e38], ids=str)
def test_nodata_values(make_dem, read_dem, marker):
    values = RAMP.copy()
    values[2, 3] = marker
    terrain = read_dem(make_dem(values, nodata=marker))
    assert np.argwhere(~terrain.valid).tolist() == [[2, 3]]
    assert np.isfinite(terrain.elevation_m).all()


def test_nodata_as_a_mask_band(make_dem, read_dem):
    mask = np.full(RAMP.shape, 255, dtype=np.uint8)
    mask[4, 5] = 0
    with rasterio.Env(GDAL_TIFF_INTERNAL_MASK=True):
        path = make_dem(RAMP, tags={"mask": mask})
    assert np.argwhere(~read_dem(path).valid).tolist() == [[4, 5]]


def test_nan_and_infinity_that_no_nodata_value_declares(make_dem, read_dem):
    values = RAMP.copy()
    values[0, 0], values[1, 1], values[2, 2] = np.nan, np.inf, -np.inf
    terrain = read_dem(make_dem(values))
    assert np.argwhere(~terrain.valid).tolist() == [[0, 0], [1, 1], [2, 2]]
    assert any("2 cells hold an infinite number" in note for note in terrain.facts.assumptions)


def test_scale_offset_and_datum_offset(make_dem, read_dem):
    path = make_dem(RAMP.astype(np.int16), tags={"scale": 0.5, "offset": 100.0})
    terrain = read_dem(path, datum_offset_m=-3.0)
    assert terrain.elevation_m[0, 4] == 4 * 0.5 + 100.0 - 3.0
    assert any("scaled" in note for note in terrain.facts.assumptions)


def test_another_band(make_dem, read_dem):
    terrain = read_dem(make_dem(np.stack([RAMP, RAMP + 500])), band=2)
    assert terrain.elevation_m[0, 0] == 500.0


def test_one_row(make_dem, read_dem):
    terrain = read_dem(make_dem(np.array([[5.0, 7.0, 6.0]], dtype=np.float32)))
    assert terrain.shape == (1, 3)
    line = long_section(terrain, [(0, 0), (0, 2)])
    assert line.ground_m.max() == 7.0
    assert line.chainage_m[-1] == pytest.approx(20.4, abs=0.2)


def test_one_cell(make_dem, read_dem):
    assert read_dem(make_dem(np.array([[5]], dtype=np.uint8))).elevation_m.tolist() == [[5.0]]


def test_all_nodata_is_refused(make_dem, read_dem):
    with pytest.raises(TerrainError, match=r"holds no ground[\s\S]*rows 0 to 4"):
        read_dem(make_dem(np.full((5, 6), -9999, dtype=np.int16), nodata=-9999))


def test_the_same_ground_in_utm_and_web_mercator_has_the_same_length(make_dem, read_dem):
    # Two files with the same two places in them; EPSG:3857 draws this line 1.55 times as long.
    from pyproj import Geod, Transformer

    lon, lat = (-93.5, -93.49), (49.7, 49.71)
    lengths = []
    for code in ("EPSG:32615", "EPSG:3857", "EPSG:4326"):
        x, y = Transformer.from_crs("EPSG:4326", code, always_xy=True).transform(lon, lat)
        cell = 1e-5 if code == "EPSG:4326" else 2.0
        margin = 5 * cell
        shape = int((y[1] - y[0]) / cell) + 11, int((x[1] - x[0]) / cell) + 11
        transform = Affine(cell, 0, x[0] - margin, 0, -cell, y[1] + margin)
        path = make_dem(np.zeros(shape, dtype=np.float32), code, transform, name=code.replace(":", "") + ".tif")
        terrain = read_dem(path)
        cells = [(int((transform.f - b) / cell), int((a - transform.c) / cell)) for a, b in zip(x, y, strict=True)]
        lengths.append(long_section(terrain, cells).chainage_m[-1])
    _, _, geodesic = Geod(ellps="WGS84").inv(lon[0], lat[0], lon[1], lat[1])
    assert lengths == pytest.approx([geodesic] * 3, rel=0.005)


def test_a_corner_of_sixty_million_cells_is_read_at_once(tmp_path):
    path = tmp_path / "large.tif"
    profile = {"driver": "GTiff", "height": 7500, "width": 8000, "count": 1, "dtype": "int16", "nodata": -32768}
    profile |= {"crs": "EPSG:32615", "transform": UTM, "tiled": True, "compress": "deflate", "sparse_ok": True}
    with rasterio.open(path, "w", **profile) as dataset:
        dataset.write(np.full((512, 512), 312, dtype=np.int16), 1, window=Window(0, 0, 512, 512))
    start = time.perf_counter()
    with open_dem(TerrainAsk(path, vertical_unit="m")) as dem:
        terrain = dem.read(dem.window_around([(450105.0, 4999895.0), (451005.0, 4999005.0)], 100))
    assert time.perf_counter() - start < 2.0  # some milliseconds alone; the machine may be busy
    assert terrain.window.dem_rows * terrain.window.dem_cols == 60_000_000
    assert terrain.elevation_m.size < 50_000
    assert (terrain.elevation_m == 312.0).all()
    assert terrain.window.open_sides == (False, True, False, True)


def test_a_missing_file(tmp_path):
    with pytest.raises(TerrainError) as caught:
        open_dem(TerrainAsk(tmp_path / "gone.tif"), {"terrain.file": 3}, tmp_path / "site.toml")
    problem = caught.value.problems[0]
    assert "does not exist" in problem.what
    assert (problem.key, problem.line, problem.file) == ("terrain.file", 3, str(tmp_path / "site.toml"))


def test_a_file_that_is_no_grid(tmp_path):
    path = tmp_path / "text.tif"
    path.write_text("not a grid")
    with pytest.raises(TerrainError, match="cannot be opened"):
        open_dem(TerrainAsk(path))


def test_a_file_cut_short(make_dem, read_dem):
    path = make_dem(
        np.random.default_rng(1).random((200, 200)).astype(np.float32), tiled=True, blockxsize=64, blockysize=64
    )
    content = path.read_bytes()
    path.write_bytes(content[: len(content) // 2])
    with pytest.raises(TerrainError, match=r"cannot be (read|opened)"):
        read_dem(path)


@pytest.mark.parametrize(
    ("profile", "message"),
    [
        ({"transform": Affine(9.9, 1.0, 450000, 1.0, -9.9, 5000000)}, "rotated or sheared"),
        ({"crs": None}, "which coordinate system"),
        ({"crs": "EPSG:4326"}, "in degrees, but its coordinates are not"),
    ],
)
def test_frames_that_are_refused(make_dem, profile, message):
    path = make_dem(RAMP, **profile)
    with pytest.raises(TerrainError, match=message):
        open_dem(TerrainAsk(path, vertical_unit="m"))
    with pytest.raises(TerrainError, match=message):
        inspect(path)


def test_a_grid_without_a_place_is_refused_and_warns_of_nothing_else(make_dem):
    with pytest.warns(rasterio.errors.NotGeoreferencedWarning):
        path = make_dem(RAMP, transform=Affine.identity())
    with pytest.raises(TerrainError, match="where its cells lie"):
        open_dem(TerrainAsk(path, vertical_unit="m"))


def test_a_window_over_which_the_scale_changes_is_refused_and_a_part_of_it_is_not(make_dem):
    path = make_dem(np.zeros((3, 600), dtype=np.float32), transform=Affine(1000, 0, 350000, 0, -1000, 5000000))
    with open_dem(TerrainAsk(path, vertical_unit="m")) as dem:
        with pytest.raises(TerrainError, match=r"scale .* changes too much"):
            dem.read()
        assert dem.read(GridWindow(0, 0, 3, 20, 3, 600)).shape == (3, 20)


def test_an_unknown_unit_is_refused_but_can_be_looked_at(make_dem):
    path = make_dem(RAMP)
    with pytest.raises(TerrainError, match=r"terrain\.vertical_unit"):
        open_dem(TerrainAsk(path))
    facts = inspect(path)
    assert facts.vertical_unit == "unknown"
    assert (facts.rows, facts.cols) == (5, 6)


def test_a_contradiction_of_units_names_both(make_dem):
    path = make_dem(RAMP, tags={"unit": "ft"})
    with pytest.raises(TerrainError, match=r"'ft'[\s\S]*the site file"):
        open_dem(TerrainAsk(path, vertical_unit="m"))


def test_the_file_is_closed_after_an_error(make_dem, monkeypatch):
    closed = []
    real_open = rasterio.open

    def watched(*args, **kwargs):
        dataset = real_open(*args, **kwargs)
        closed.append(dataset)
        return dataset

    path = make_dem(RAMP, crs=None)
    monkeypatch.setattr("routing.terrain.reading.rasterio.open", watched)
    with pytest.raises(TerrainError):
        open_dem(TerrainAsk(path, vertical_unit="m"))
    assert [dataset.closed for dataset in closed] == [True]
