"""A sound site file becomes frozen records in SI units."""

from __future__ import annotations

import dataclasses
import hashlib
import subprocess
import sys
from pathlib import Path

import pytest

import routing
from routing.errors import SiteError
from routing.records import AirAsk, DemandAsk, LimitsAsk, Losses, PriceList, SearchAsk, TerrainAsk
from routing.site import load_site


def test_the_records_hold_what_the_file_says(make):
    path = make()
    site = load_site(path)
    assert site.file == path
    assert site.title == "Test site"
    assert site.terrain == TerrainAsk(path.parent / "dem.tif")
    assert (site.water.present_level_m, site.water.lowest_level_m) == (101.2, 98.8)
    assert (site.intake.at.x, site.intake.at.y, site.intake.mouth_level_m) == (480300.0, 6149750.0, 98.0)
    assert (site.intake.at.key, site.intake.at.line) == ("intake.x", 11)
    assert (site.outlet.level_m, site.outlet.tailwater_level_m) == (93.3, None)
    assert site.air.altitude_m == 105.0
    assert site.demand.discharge_m3s == 0.3
    assert [pipe.name for pipe in site.pipes] == ["PE100 315 SDR 17", "steel 273 x 6.3", "old steel"]
    assert site.lines["pipes[3].wall_mm"] == 42
    assert site.sha256 == hashlib.sha256(path.read_bytes()).hexdigest()
    assert site.liquid is None


def test_defaults_are_those_of_the_records(make):
    site = load_site(
        make(
            ("[air]\naltitude_m = 105.0", ""), ("[limits]\nreserve_m = 2.5", ""), ("[demand]\ndischarge_m3s = 0.3", "")
        )
    )
    assert site.air == AirAsk()
    assert site.losses == Losses()
    assert site.limits == LimitsAsk()
    assert site.demand == DemandAsk()
    assert site.prices == PriceList()
    assert site.search == SearchAsk()


def test_every_section_reaches_its_record(make):
    more = """
[losses]
entrance = 0.4
exit = 1.1
valve_open = 0.3
bend_loss_per_km = 5

[prices]
currency = "EUR"
date = 2026-01-31
invented = true
fixed_per_scheme = 10

[search]
neighbours = 32
ground_rule = "cells"
bed_offset_m = -0.5
tolerance = 0.01
largest_window_cells = 1_000_000
"""
    terrain = """file = "dem.tif"
band = 2
vertical_unit = "us-ft"
vertical_datum = "local"
datum_offset_m = -1.5
vertical_error_90_m = 0.2
surface = "canopy"
water_shown = "bed"
"""
    site = load_site(
        make(
            ("\n[[pipes]]", more + "\n[[pipes]]"),
            ('file = "dem.tif"\n', terrain),
            (
                "reserve_m = 2.5",
                "reserve_m = 2\nhighest_lift_m = 6\nleast_submergence_m = 0.5\ncollapse_safety = 3\ngravity_ms2 = 9.81\npipe_load_hours = 100",
            ),
            ("= 0.3", "= 0.3\nmost_pipes = 2"),
            ("altitude_m = 105.0", "pressure_pa = 100000\nbarometric_low_pa = 0"),
            ("level_m = 93.3", "height_above_ground_m = 0.4\ntailwater_level_m = 93"),
            (
                "lowest_level_m = 98.8",
                'lowest_level_m = 98.8\ntemperature_c = 15\npolygon_file = "dem.tif"\npolygon_layer = "lake"',
            ),
        )
    )
    folder = site.file.parent
    assert site.losses == Losses(0.4, 1.1, 0.3, 0.005)
    assert site.prices == PriceList("EUR", "2026-01-31", True, 10.0)
    assert site.search == SearchAsk(32, "cells", -0.5, 0.01, 1_000_000)
    assert site.terrain == TerrainAsk(folder / "dem.tif", 2, "us-ft", "local", -1.5, 0.2, "canopy", "bed")
    assert site.limits == LimitsAsk(2.0, 6.0, 0.5, 3.0, 9.81, 100.0)
    assert site.demand == DemandAsk(0.3, None, 2)
    assert site.air == AirAsk(100000.0, None, 0.0)
    assert (site.outlet.level_m, site.outlet.height_above_ground_m, site.outlet.tailwater_level_m) == (None, 0.4, 93.0)
    assert (site.water.temperature_c, site.water.polygon_file, site.water.polygon_layer) == (
        15.0,
        folder / "dem.tif",
        "lake",
    )


def test_whole_numbers_are_numbers(make):
    assert load_site(make(("98.8", "99"))).water.lowest_level_m == 99.0


def test_paths_are_relative_to_the_file_not_to_where_one_is(make, monkeypatch, tmp_path):
    path = make()
    elsewhere = tmp_path / "elsewhere"
    elsewhere.mkdir()
    monkeypatch.chdir(elsewhere)
    site = load_site(Path("..") / path.name)
    assert site.terrain.file == path.parent / "dem.tif"
    assert site.terrain.file.is_absolute()
    assert site.file == path


def test_absolute_paths_are_kept(make, tmp_path):
    dem = tmp_path / "other.tif"
    dem.touch()
    assert load_site(make(('"dem.tif"', f"'{dem}'"))).terrain.file == dem


def test_the_title_falls_back_to_the_folder(make):
    assert load_site(make(('title = "Test site"\n', ""))).title == make().parent.name


def test_inline_tables_are_as_good(make):
    text = (
        'terrain = { file = "dem.tif" }\nwater = { lowest_level_m = 5.0 }\n'
        "intake = { x = 1.0, y = 1.0, mouth_level_m = 4.0 }\noutlet = { x = 2.0, y = 2.0 }\n"
        'pipes = [{ table = "ISO 4427", outside_diameter_mm = 315.0, sdr = 17.0 }]\n'
    )
    site = load_site(make(text=text))
    assert site.intake.at.line == 3
    assert len(site.pipes) == 1


def test_the_record_is_frozen(make):
    site = load_site(make())
    with pytest.raises(dataclasses.FrozenInstanceError):
        site.title = "other"


def test_all_problems_at_once_in_the_order_of_the_file(make):
    path = make(
        ('"dem.tif"', '"none.tif"\nbnad = 1'),
        ("98.8", '"98.8"'),
        ("x = 480300.0", "# x = 480300.0"),
        ("reserve_m = 2.5", "reserve_m = 20"),
        ("level_m = 93.3", "level_m = 93.3\nheight_above_ground_m = 1"),
        ("sdr = 17.0", "sdr = 18.0"),
        ("wall_mm = 5.0", "wall_mm = 500.0"),
    )
    with pytest.raises(SiteError) as caught:
        load_site(path)
    problems = caught.value.problems
    assert [p.key for p in problems] == [
        "terrain.file",
        "terrain.bnad",
        "water.lowest_level_m",
        "intake.x",
        "outlet.height_above_ground_m",
        "limits.reserve_m",
        "pipes[1].sdr",
        "pipes[3].wall_mm",
    ]
    lines = [p.line for p in problems]
    assert lines == sorted(lines)
    assert str(caught.value).count("\n    do ") == len(problems)


def test_an_empty_file_names_all_that_is_needed(tmp_path):
    path = tmp_path / "site.toml"
    path.touch()
    with pytest.raises(SiteError) as caught:
        load_site(path)
    assert {p.key for p in caught.value.problems} == {"terrain", "water", "intake", "outlet", "pipes"}


def test_the_public_name_is_this_one():
    assert routing.load_site is load_site


def test_reading_a_site_file_loads_no_maps_and_no_compiler():
    code = (
        "import sys, routing.site; heavy = {'rasterio', 'geopandas', 'pyogrio', 'shapely', 'pyproj', 'numba', 'scipy', "
        "'pandas', 'matplotlib'}; print(sorted(heavy & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True, timeout=60)
    assert done.stdout.strip() == "[]"
