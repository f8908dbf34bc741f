"""The demo site: made by its script cell for cell, small, sound, and posed so that there is something to decide."""

from __future__ import annotations

import importlib.util
import json
import tomllib
from pathlib import Path

import numpy as np
import pytest
import rasterio
from scipy import ndimage
from shapely import LineString, Point, Polygon

from routing.hydraulics import (
    allowed_underpressure_pa,
    run_at,
    run_siphon,
    standard_pressure_pa,
    water_at,
)
from routing.records import Levels, Limits, Profile
from routing.site import load_site, schema

FOLDER = Path(__file__).resolve().parents[2] / "sample_dem"
DEMO = FOLDER / "brackenmere"


@pytest.fixture(scope="module")
def site():
    return load_site(DEMO / "site.toml")


@pytest.fixture(scope="module")
def ground():
    with rasterio.open(DEMO / "dem.tif") as source:
        return source.read(1)


@pytest.fixture(scope="module")
def maker():
    spec = importlib.util.spec_from_file_location("make_brackenmere", DEMO / "make_dem.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def cell(x, y):
    return int((6_150_000.0 - y) / 2.0), int((x - 480_000.0) / 2.0)


def test_the_script_makes_the_committed_file(maker, ground, tmp_path):
    np.testing.assert_array_equal(maker.make(), ground)
    maker.write(tmp_path / "again.tif")
    with rasterio.open(tmp_path / "again.tif") as again, rasterio.open(DEMO / "dem.tif") as kept:
        np.testing.assert_array_equal(again.read(1), kept.read(1))
        assert again.profile == kept.profile
        assert again.units == kept.units == ("m",)


def test_the_script_makes_the_committed_zones(maker, tmp_path):
    maker.write_zones(tmp_path)
    assert sorted(path.name for path in tmp_path.iterdir()) == sorted(path.name for path in DEMO.glob("*.geojson"))
    for path in tmp_path.iterdir():
        made, kept = (json.loads(file.read_text(encoding="utf-8")) for file in (path, DEMO / path.name))
        rings = [found["features"][0]["geometry"].pop("coordinates")[0] for found in (made, kept)]
        assert made == kept
        np.testing.assert_allclose(rings[0], rings[1], atol=1.5e-7)  # the last decimal may follow the PROJ release


def test_the_zones_leave_the_ends_free_and_lie_in_the_way(site, maker):
    bank, meadow = site.zones
    assert (bank.name, bank.kind) == ("orchid bank", "barred")
    assert (meadow.name, meadow.kind, meadow.cost_factor) == ("wet meadow", "cost", 1.6)
    ends = [(end.at.x - maker.WEST_M, maker.NORTH_M - end.at.y) for end in (site.intake, site.outlet)]
    shapes = {name: Polygon(corners) for name, corners in maker.ZONES.items()}
    assert LineString(ends).intersects(shapes["orchid_bank.geojson"])
    assert LineString(ends).intersects(shapes["wet_meadow.geojson"])
    assert not any(shape.buffer(2.0).contains(Point(end)) for shape in shapes.values() for end in ends)


def test_it_is_small_and_said_to_be_invented(site):
    assert sum(f.stat().st_size for f in FOLDER.rglob("*") if f.is_file() and "__pycache__" not in f.parts) < 1_000_000
    assert "invented" in (FOLDER / "README.md").read_text(encoding="utf-8")
    assert site.prices.invented


def test_the_file_says_what_it_is(ground):
    with rasterio.open(DEMO / "dem.tif") as source:
        assert source.dtypes == ("float32",)
        assert source.crs.to_epsg() == 32631
        assert source.res == (2.0, 2.0)
    assert ground.shape == (240, 320)
    assert np.isfinite(ground).all()


def test_one_flat_water_with_the_intake_in_it(site, ground):
    level = np.float32(site.water.present_level_m)
    water, _ = ndimage.label(ground == level, np.ones((3, 3)))
    body = water[cell(site.intake.at.x, site.intake.at.y)]
    assert body > 0
    inside = water == body
    assert 4.0 * inside.sum() > 15_000.0
    assert not any(edge.any() for edge in (inside[0], inside[-1], inside[:, 0], inside[:, -1]))


def test_crest_and_saddle_are_where_the_site_file_says(maker, ground):
    dam = ground[:, 164:166].max(axis=1)[95:170]
    assert dam.min() == pytest.approx(104.5, abs=0.05)
    assert 3.0 < dam.min() - maker.WATER_LEVEL_M < 4.0
    lowest = next(
        level
        for level in np.arange(101.2, 106.0, 0.05)
        for pools in [ndimage.label(ground <= level + 0.001)[0]]
        if pools[cell(480_300, 6_149_750)] == pools[cell(480_411, 6_149_761)] != 0
    )
    assert lowest == pytest.approx(maker.SILL_M, abs=0.06)


def test_the_site_file_keeps_to_the_schema(site):
    found = schema()
    raw = tomllib.loads((DEMO / "site.toml").read_text(encoding="utf-8"))
    assert set(raw) <= set(found["properties"])
    for section, table in raw.items():
        model = {"pipes": "PipeModel", "zones": "ZoneModel"}.get(section, f"{section.title()}Model")
        for entry in table if isinstance(table, list) else [table] if isinstance(table, dict) else []:
            definition = found["$defs"][model]
            assert set(entry) <= set(definition["properties"])
            assert set(definition.get("required", [])) <= set(entry)


def straight(ground, pipe):
    """The pipe straight over the low spot of the crest: 3-D chainage, and the crown one diameter above the ground."""
    x = np.concatenate([np.linspace(480_300, 480_331, 32), np.linspace(480_333, 480_411, 40)])
    y = np.concatenate([np.linspace(6_149_750, 6_149_738, 32), np.linspace(6_149_738, 6_149_761, 40)])
    z = np.array([ground[cell(*point)] for point in zip(x, y, strict=True)], dtype=float)
    steps = np.sqrt(np.diff(x) ** 2 + np.diff(y) ** 2 + np.diff(z) ** 2)
    return Profile(np.concatenate([[0.0], np.cumsum(steps)]), z + pipe.outside_diameter_m)


@pytest.fixture(scope="module")
def appraise(site, ground):
    """Return for a pipe: its largest discharge, and by count the reserve left and whether the wall stands, at duty."""
    water = water_at(site.water.temperature_c)
    air = standard_pressure_pa(site.air.altitude_m) - site.air.barometric_low_pa
    limits = Limits(air, site.limits.reserve_m, None, site.limits.least_submergence_m, site.limits.collapse_safety)
    outlet = float(ground[cell(site.outlet.at.x, site.outlet.at.y)]) + site.outlet.height_above_ground_m
    levels = Levels(site.water.lowest_level_m, outlet, None, site.intake.mouth_level_m)

    def of(name):
        pipe = next(p for p in site.pipes if p.name == name)
        section = straight(ground, pipe)
        largest = run_siphon(pipe, section, levels, site.losses, water, limits)
        at_duty = {}
        for count in range(1, site.demand.most_pipes + 1):
            duty = site.demand.discharge_m3s / count
            if duty <= largest.discharge_m3s:
                run = run_at(pipe, section, levels, site.losses, water, limits, duty)
                stands = air - run.crown_pressure_pa.min() <= allowed_underpressure_pa(pipe, limits.collapse_safety)
                at_duty[count] = (run.reserve_left_m, bool(stands))
        return largest, at_duty

    return of


def test_lift_and_fall_are_those_of_a_real_job(appraise):
    largest, _ = appraise("PE100 315 SDR 17")
    assert 5.0 < largest.lift_m < 6.3
    assert largest.fall_m > 5.0
    assert largest.governs == "suction"


def test_some_pipe_runs_with_reserve_to_spare(appraise):
    for name, count in (("PE100 315 SDR 17", 3), ("PE100 400 SDR 17", 2)):
        reserve, stands = appraise(name)[1][count]
        assert reserve > 0.5, name
        assert stands, name


def test_a_thin_wall_collapses(appraise):
    _, at_duty = appraise("PE100 315 SDR 21")
    assert at_duty
    assert not any(stands for _, stands in at_duty.values())


def test_the_smallest_is_too_small(appraise):
    largest, at_duty = appraise("PE100 200 SDR 11")
    assert at_duty == {}
    assert largest.suction_discharge_m3s < largest.energy_discharge_m3s


def test_one_pipe_is_never_enough(site, appraise):
    for pipe in site.pipes:
        assert 1 not in appraise(pipe.name)[1], pipe.name
