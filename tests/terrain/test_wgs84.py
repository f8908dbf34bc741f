"""WGS 84 positions of the DEM."""

import numpy as np
import pytest
from rasterio import Affine

from routing.records import TerrainAsk
from routing.terrain import inspect, open_dem


def test_positions_of_the_real_jobs(cases, data_folder):
    # intake_lonlat of tests/data/cases.json is rounded to 6 decimals (0.1 m).
    for case in cases:
        with open_dem(TerrainAsk(data_folder / case["dem"], vertical_unit="m")) as dem:
            # The grid of NZGD49 is not in the wheels: the best transformation left there is good to some metres.
            slack = 1e-4 if case["crs"] == "EPSG:27200" else 2e-6
            assert dem.to_lonlat(*case["intake_xy"]) == pytest.approx(case["intake_lonlat"], abs=slack)
            assert dem.from_lonlat(*dem.to_lonlat(*case["intake_xy"])) == pytest.approx(case["intake_xy"], abs=1e-3)


def test_bounds_hold_the_corners(make_dem):
    with open_dem(TerrainAsk(make_dem(np.zeros((50, 80), dtype=np.float32)), vertical_unit="m")) as dem:
        west, south, east, north = dem.bounds_lonlat
        for x in dem.bounds[::2]:
            for y in dem.bounds[1::2]:
                lon, lat = dem.to_lonlat(x, y)
                assert west - 1e-9 <= lon <= east + 1e-9
                assert south - 1e-9 <= lat <= north + 1e-9


def test_a_coarse_change_of_datum_is_told(data_folder, make_dem):
    assert any("NZGD49" in note for note in inspect(data_folder / "volcano_10m.tif").assumptions)
    assert inspect(make_dem(np.zeros((5, 5), dtype=np.float32))).assumptions == ()


def test_longitudes_counted_to_360(make_dem):
    path = make_dem(np.zeros((10, 10), dtype=np.float32), "EPSG:4326", Affine(0.001, 0, 200.0, 0, -0.001, 20.0))
    with open_dem(TerrainAsk(path, vertical_unit="m")) as dem:
        assert dem.from_lonlat(-159.995, 19.995) == pytest.approx((200.005, 19.995))
        assert dem.to_lonlat(200.005, 19.995) == pytest.approx((-159.995, 19.995))
        assert dem.read().step_x_m[0] == pytest.approx(111320.0 * np.cos(np.radians(20)) / 1000, rel=2e-3)
