"""Levels, air and water as they are resolved: figures of the standard atmosphere, and every problem at once."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from pyproj import CRS

from routing.errors import SiteError
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.planning.settings import resolve
from routing.records import Water
from routing.terrain import open_dem

STEP = 10.0 / 0.9996  # ground length of a 10 m cell at the central meridian of UTM


def scene_of(site):
    with open_dem(site.terrain, site.lines, site.file) as dem:
        ends = place_ends(site, dem)
        return survey(site, dem, ends, first_window(site, dem, ends), Reporter())


@pytest.fixture
def asked(make_job, ground):
    """Site and scene of the clean job."""
    site = make_job(ground.reservoir()).site
    return site, scene_of(site)


def changed(site, **changes):
    """The site with fields of its asks changed: ``air={...}``."""
    return replace(site, **{name: replace(getattr(site, name), **fields) for name, fields in changes.items()})


def named(scene, datum):
    """The scene on a DEM that names its vertical datum so."""
    terrain = replace(scene.terrain, facts=replace(scene.terrain.facts, vertical_datum=datum))
    return replace(scene, terrain=terrain)


def refusals(site, scene):
    with pytest.raises(SiteError) as caught:
        resolve(site, scene)
    problems = {problem.key: problem for problem in caught.value.problems}
    assert len(problems) == len(caught.value.problems)
    for problem in problems.values():
        assert problem.line
        assert problem.found
        assert problem.allowed
        assert problem.remedy
    return problems


# ---------------------------------------------------------------- air

UNSTATED = {"pressure_pa": None, "altitude_m": None, "barometric_low_pa": 0.0}


def test_a_pressure_given_is_taken_less_the_low(asked):
    site, scene = asked
    setting = resolve(changed(site, air={"pressure_pa": 95_000.0, "barometric_low_pa": 2_500.0}), scene)
    assert setting.limits.air_pressure_pa == 92_500.0
    assert setting.altitude_m is None
    assert setting.air_pressure_source == "air.pressure_pa less 2500 Pa for a barometric low"
    assert f"Air pressure 92.50 kPa: {setting.air_pressure_source}." in setting.assumptions


@pytest.mark.parametrize(("altitude", "pressure"), [(0.0, 101_325.0), (1000.0, 89_874.6), (4000.0, 61_640.2)])
def test_an_altitude_gives_the_standard_atmosphere(asked, altitude, pressure):
    """ISO 2533 (ICAO standard atmosphere), table by geopotential height."""
    site, scene = asked
    setting = resolve(changed(site, air=UNSTATED | {"altitude_m": altitude, "barometric_low_pa": 3000.0}), scene)
    assert setting.limits.air_pressure_pa == pytest.approx(pressure - 3000.0, abs=1.0)
    assert setting.altitude_m == altitude
    assert "(air.altitude_m)" in setting.air_pressure_source


def test_a_pressure_given_outweighs_an_altitude(asked):
    site, scene = asked
    setting = resolve(changed(site, air={"pressure_pa": 90_000.0, "altitude_m": 0.0}), scene)
    assert setting.limits.air_pressure_pa == 90_000.0


@pytest.mark.parametrize(
    "datum", ["EGM2008 geoid", "Normaal Amsterdams Peil", "Localville 1950 height", "NAVD88 height"]
)
@pytest.mark.parametrize("said_by", ["site", "dem"])
def test_with_a_datum_above_the_sea_the_present_level_is_the_altitude(asked, datum, said_by):
    site, scene = asked
    site = changed(site, air=UNSTATED, terrain={"vertical_datum": datum if said_by == "site" else None})
    setting = resolve(site, named(scene, datum))
    assert setting.altitude_m == 100.0  # the present level; the lowest is 99
    assert setting.limits.air_pressure_pa == pytest.approx(
        100_129.4, abs=1.0
    )  # same table, 100 m, interpolated by its formula
    assert "present water level" in setting.air_pressure_source


@pytest.mark.parametrize(
    "datum",
    ["local", "Works datum (LOCAL)", "assumed 100.00 at the weir", "arbitrary", "invented", "unknown", "Unknown"],
)
@pytest.mark.parametrize("said_by", ["site", "dem"])
def test_levels_of_a_local_or_unknown_datum_are_no_altitude(asked, datum, said_by):
    """GeoTIFF writers name a vertical datum "unknown" where they were told of none."""
    site, scene = asked
    site = changed(site, air=UNSTATED, terrain={"vertical_datum": datum if said_by == "site" else None})
    (problem,) = refusals(site, named(scene, datum)).values()
    assert problem.key == "air.altitude_m"
    assert datum in problem.found


def test_a_geotiff_whose_vertical_datum_is_named_unknown_is_no_altitude(make_job, ground):
    height = 'VERT_CS["unknown",VERT_DATUM["unknown",2005],UNIT["metre",1],AXIS["Up",UP]]'
    plan_crs = CRS.from_epsg(32631).to_wkt("WKT1_GDAL")
    site = make_job(
        ground.reservoir(),
        dem={"crs": f'COMPD_CS["made",{plan_crs},{height}]'},
        terrain={"vertical_unit": None},
        air={"pressure_pa": None},
    ).site
    (problem,) = refusals(site, scene_of(site)).values()
    assert (problem.key, problem.found) == ("air.altitude_m", "vertical datum: unknown")


def test_a_dem_without_a_datum_is_no_altitude(asked):
    site, scene = asked
    assert scene.terrain.facts.vertical_datum == "not stated"
    assert list(refusals(changed(site, air=UNSTATED), scene)) == ["air.altitude_m"]


# ---------------------------------------------------------------- levels


def test_levels_are_those_of_the_site_file_now_and_at_the_lowest(asked):
    site, scene = asked
    setting = resolve(changed(site, outlet={"tailwater_level_m": 91.0}), scene)
    for levels, water in ((setting.present, 100.0), (setting.lowest, 99.0)):
        assert (levels.water_m, levels.outlet_m, levels.tailwater_m, levels.intake_mouth_m) == (water, 90.0, 91.0, 95.0)


@pytest.mark.parametrize("height", [0.0, 1.25, -0.5])
def test_an_outlet_without_a_level_stands_on_the_ground(asked, height):
    site, scene = asked
    setting = resolve(changed(site, outlet={"level_m": None, "height_above_ground_m": height}), scene)
    assert setting.lowest.outlet_m == 90.0 + height
    assert any(f"axis is at {90.0 + height:.2f} m: {height:g} m above the DEM" in text for text in setting.assumptions)


def test_a_mouth_without_a_level_lies_on_the_bed_where_the_bed_is_shown(asked):
    site, scene = asked
    bed = replace(scene, terrain=replace(scene.terrain, elevation_m=scene.terrain.elevation_m - 4.0))
    site = changed(site, intake={"mouth_level_m": None})
    assert resolve(site, scene).lowest.intake_mouth_m is None  # the surface says nothing of it
    assert resolve(changed(site, terrain={"water_shown": "bed"}), bed).lowest.intake_mouth_m == 96.0


def test_all_problems_of_the_levels_come_at_once_and_that_of_the_air_with_them(asked):
    site, scene = asked
    wrong = changed(
        site,
        water={"lowest_level_m": 101.0},
        outlet={"level_m": 101.5},
        intake={"mouth_level_m": 100.9},
        air=UNSTATED,
    )
    problems = refusals(wrong, scene)
    assert set(problems) == {"water.lowest_level_m", "outlet.level_m", "intake.mouth_level_m", "air.altitude_m"}
    assert problems["water.lowest_level_m"].allowed == "at most 100.00 m"
    assert problems["outlet.level_m"].allowed == "below 101.00 m"
    assert problems["intake.mouth_level_m"].allowed == "a mouth at or below 100.70 m"  # 0.3 m of water over it


@pytest.mark.parametrize(
    ("changes", "key"),
    [
        ({"outlet": {"level_m": 98.999}}, None),
        ({"outlet": {"level_m": 99.0}}, "outlet.level_m"),
        ({"outlet": {"level_m": None, "height_above_ground_m": 9.0}}, "outlet.height_above_ground_m"),
        ({"outlet": {"tailwater_level_m": 99.0}}, "outlet.tailwater_level_m"),
        ({"outlet": {"tailwater_level_m": 89.0, "level_m": 99.0}}, "outlet.level_m"),
        ({"intake": {"mouth_level_m": 98.5}, "limits": {"least_submergence_m": 0.5}}, None),
        ({"intake": {"mouth_level_m": 98.5}, "limits": {"least_submergence_m": 0.5001}}, "intake.mouth_level_m"),
        ({"water": {"lowest_level_m": 100.0}}, None),
        ({"water": {"lowest_level_m": 100.0001}}, "water.lowest_level_m"),
    ],
)
def test_each_limit_of_the_levels_is_where_it_is_said_to_be(asked, changes, key):
    site, scene = asked
    if key is None:
        resolve(changed(site, **changes), scene)
    else:
        assert list(refusals(changed(site, **changes), scene)) == [key]


# ---------------------------------------------------------------- the rest


def test_ends_that_were_moved_to_their_cells_are_told_with_the_distance(make_job, ground):
    site = make_job(ground.reservoir(), ends=((20.3, 10.2), (20.0, 60.0005))).site
    setting = resolve(site, scene_of(site))
    (text,) = [text for text in setting.assumptions if "centre of its cell" in text]
    assert text.startswith("The route's end at the intake")
    assert f"{math.hypot(0.3, 0.2) * STEP:.2f} m from the point given" in text
    assert (setting.intake_cell, setting.outlet_cell) == ((20, 10), (20, 60))


def test_limits_losses_and_water_are_handed_on(asked):
    site, scene = asked
    asks = {
        "reserve_m": 1.5,
        "highest_lift_m": 6.0,
        "least_submergence_m": 0.7,
        "collapse_safety": 3.0,
        "gravity_ms2": 9.8,
    }
    setting = resolve(changed(site, limits=asks, losses={"entrance": 0.8}), scene)
    for name, value in asks.items():
        assert getattr(setting.limits, name) == value
    assert setting.losses.entrance == 0.8
    assert setting.water.temperature_c == 10.0
    brine = Water(1100.0, 1.5e-6, 1000.0, 10.0)
    assert resolve(replace(site, liquid=brine), scene).water == brine


def test_a_present_level_read_off_the_dem_is_told(make_job, ground):
    site = make_job(ground.reservoir(), water={"present_level_m": None}).site
    setting = resolve(site, scene_of(site))
    assert setting.present.water_m == 100.0
    assert "The present water level is 100.00 m, read off the DEM." in setting.assumptions
