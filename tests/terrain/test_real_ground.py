"""The 13 jobs on real ground: figures computed by independent code (tests/data/README.md)."""

import json
from pathlib import Path

import numpy as np
import pytest
from pyproj import Geod

from routing.records import Cell, PointAsk, TerrainAsk
from routing.terrain import cell_at, long_section, open_dem, place_point, sample, water_body

DATA = Path(__file__).resolve().parent.parent / "data"
CASES = json.loads((DATA / "cases.json").read_text(encoding="utf-8"))["cases"]


def name_of(case):
    return case["id"]


@pytest.fixture(params=CASES, ids=name_of)
def case(request):
    return request.param


def test_thirteen_jobs():
    assert len(CASES) == 13


def test_grid_and_positions(case, real_ground):
    terrain = real_ground[case["dem"]]
    assert list(terrain.shape)[::-1] == case["dem_size"]
    low, high = case["dem_z_range_m"]
    held = terrain.elevation_m[terrain.valid]
    assert (held.min(), held.max()) == pytest.approx((low, high), abs=1e-4)
    intake, outlet = cell_at(terrain, *case["intake_xy"]), cell_at(terrain, *case["outlet_xy"])
    assert [intake.row, intake.col] == case["intake_rc"]
    assert [outlet.row, outlet.col] == case["outlet_rc"]
    level, state = sample(terrain, *np.transpose([case["intake_xy"], case["outlet_xy"]]))
    assert not state.any()
    assert level == pytest.approx([case["intake_ground_m"], case["outlet_ground_m"]], abs=1e-4)


def test_water_body(case, real_ground):
    terrain = real_ground[case["dem"]]
    body = water_body(terrain, Cell(*case["intake_rc"]), case["water_level_m"])
    assert body.cells.sum() == case["lake_cells"]
    # The figures of the jobs are map areas with one cell size for the grid, given to 0.001 ha.
    assert body.area_m2 / 1e4 == pytest.approx(case["lake_area_ha"], rel=2e-3, abs=6e-4)
    assert body.touches_edge == case["lake_touches_edge"]
    assert body.shoreline.is_valid
    a, _, _, _, e, _ = terrain.transform
    assert body.shoreline.area == pytest.approx(case["lake_cells"] * a * -e, rel=1e-9)


def test_straight_lengths_are_geodesic(case, real_ground):
    terrain = real_ground[case["dem"]]
    flat = np.zeros(terrain.shape)
    from dataclasses import replace

    path = [case["intake_rc"], case["outlet_rc"]]
    line = long_section(replace(terrain, elevation_m=flat), path)
    with open_dem(TerrainAsk(DATA / case["dem"], vertical_unit="m")) as dem:
        ends = [dem.to_lonlat(*case[name]) for name in ("intake_xy", "outlet_xy")]
    _, _, geodesic = Geod(ellps="WGS84").inv(*ends[0], *ends[1])
    assert line.chainage_m[-1] == pytest.approx(geodesic, rel=1e-4)
    assert line.chainage_m[-1] == pytest.approx(case["geodesic_m"], rel=1e-4, abs=0.06)


def test_crest_of_the_straight_line(case, real_ground):
    terrain = real_ground[case["dem"]]
    line = long_section(terrain, [case["intake_rc"], case["outlet_rc"]])
    # The figure of the jobs is sampled at points, ours is the true maximum: never lower, and higher by little.
    assert line.ground_m.max() >= case["straight_chord_crest_m"] - 1e-3
    assert line.ground_m.max() == pytest.approx(case["straight_chord_crest_m"], abs=0.25)
    assert line.ground_m.max() >= case["minimax_crest_bilinear_m"] - 1e-3


def test_a_window_gives_the_same_water(case):
    with open_dem(TerrainAsk(DATA / case["dem"], vertical_unit="m")) as dem:
        intake = place_point(dem, PointAsk(x=case["intake_xy"][0], y=case["intake_xy"][1]))
        window = dem.window_around([(intake.x, intake.y)], 1)
        for _ in range(30):
            terrain = dem.read(window)
            body = water_body(terrain, cell_at(terrain, intake.x, intake.y), case["water_level_m"])
            if not body.touches_open_border:
                break
            window = dem.grown(window, factor=1.5)
        assert body.cells.sum() == case["lake_cells"]
        assert body.touches_edge == case["lake_touches_edge"]
