"""Files as surveyors have them: odd numbers, gaps, cuts, units, extremes. Each job is either right, by a closed form or
by the same job on a clean DEM, or refused in words that say where, what was found, what is allowed and what to do.
"""

import json
import math
import os
import signal
import subprocess
import sys
import threading
import time

import geopandas
import numpy as np
import pytest
import rasterio
from pyproj import Geod, Transformer
from rasterio import Affine
from shapely import box

import routing
from routing.errors import InputError

STEP = 10.0 / 0.9996  # ground length of a 10 m cell at the central meridian of UTM
WEST, NORTH, CELL = 500000.0, 5000000.0, 10.0


def refusal(job, *, plan=True):
    """Plan (or look), and return the one problem; it must carry all that a surveyor needs."""
    act = job.plan if plan else job.look
    with pytest.raises(InputError) as caught:
        act()
    (problem,) = caught.value.problems
    assert problem.file == str(job.file)
    assert problem.key
    assert problem.line
    assert job.file.read_text(encoding="utf-8").splitlines()[problem.line - 1]
    assert problem.found
    assert problem.allowed
    assert problem.remedy
    return problem


def only(plan):
    """The best scheme; any other is over another crossing, or leaves more reserve on a longer route."""
    best = plan.schemes[0]
    for other in plan.schemes[1:]:
        sturdier = other.appraisal.reserve_left_m > best.appraisal.reserve_left_m
        assert other.route.crossing != best.route.crossing or sturdier
    return best


# ---------------------------------------------------------------- the clean job, by hand


def test_the_clean_job_is_as_by_hand(make_job, ground, hand):
    plan = make_job(ground.reservoir()).plan()
    scheme = only(plan)
    row = ground.reservoir()[20, 10:61]
    assert scheme.route.length_m == pytest.approx(ground.length(row), rel=1e-6)
    assert scheme.appraisal.lift_m == pytest.approx(103.0 + hand.crown_m - 99.0)
    assert scheme.appraisal.fall_m == pytest.approx(9.0)
    energy = hand.energy_m3s(9.0, ground.length(row))
    suction = hand.suction_m3s(99.0, 103.0, ground.length(row[:21]))
    assert suction < energy
    assert scheme.appraisal.governs == "suction"
    assert scheme.appraisal.discharge_m3s == pytest.approx(suction, rel=2e-4)
    assert plan.warnings == ()
    assert plan.water_body.spill.level_m == 103.0
    assert plan.water_body.area_m2 == pytest.approx((30 * 26) * STEP**2, rel=1e-6)


@pytest.fixture
def clean(make_job, ground, tmp_path):
    """The clean plan's length and discharge."""
    scheme = only(make_job(ground.reservoir(), folder=tmp_path / "clean").plan())
    return scheme.route.length_m, scheme.appraisal.discharge_m3s


def same(scheme, clean, rel=1e-6):
    assert scheme.route.length_m == pytest.approx(clean[0], rel=rel)
    assert scheme.appraisal.discharge_m3s == pytest.approx(clean[1], rel=10 * rel)


# ---------------------------------------------------------------- numbers in the file


@pytest.mark.parametrize("marker", [np.nan, np.inf, -np.inf, -9999.0, 3.4e38])
@pytest.mark.parametrize("declared", [True, False])
def test_cells_without_data_off_the_route_change_nothing(make_job, ground, clean, marker, declared):
    values = ground.reservoir().astype(np.float32)
    values[3, 3], values[30, 50:55] = marker, marker
    plan = make_job(values, dem={"nodata": marker} if declared and np.isfinite(marker) else {}).plan()
    same(only(plan), clean)
    assert np.count_nonzero(~plan.terrain.valid) == 6
    if not np.isnan(marker) and not (declared and np.isfinite(marker)):
        assert any("cells hold" in note and note.startswith("6 ") for note in plan.assumptions)


@pytest.mark.parametrize("rule", ["bilinear", "cells"])
def test_many_small_gaps_leave_a_long_section_to_be_drawn(make_job, ground, rng, rule):
    """Single cells without data all over, as in sparse lidar: the route runs between them, by either rule."""
    values = ground.reservoir()
    values[rng.random(values.shape) < 0.08] = np.nan
    values[20, [10, 60]] = 100.0, 90.0
    scheme = only(make_job(values, search={"ground_rule": rule}).plan())
    assert np.isfinite(scheme.route.ground_m).all()
    assert scheme.route.crest_m == pytest.approx(103.0, abs=0.5)


@pytest.mark.parametrize("kind", ["value", "mask", "nan"])
def test_a_gap_in_the_ridge_is_gone_round(make_job, ground, clean, kind):
    values = ground.reservoir().astype(np.float32)
    gap = np.zeros(values.shape, dtype=bool)
    gap[17:24, 28:33] = True
    dem = {"value": {"nodata": -9999.0}, "mask": {"tags": {"mask": ~gap}}, "nan": {"nodata": np.nan}}[kind]
    if kind != "mask":
        values[gap] = dem["nodata"]
    plan = make_job(values, dem=dem).plan()
    scheme = only(plan)
    assert not gap[scheme.route.cells[:, 0], scheme.route.cells[:, 1]].any()
    # Four rows aside and back: no shorter than two straight legs past the corner of the gap, no longer than by 3 %.
    least = math.hypot(20 * STEP, 4 * STEP) + math.hypot(30 * STEP, 4 * STEP)
    assert least < scheme.route.length_m < 1.03 * least
    assert scheme.route.length_m > clean[0]


@pytest.mark.parametrize(
    ("dtype", "scale", "offset"),
    [("int16", 1.0, 0.0), ("uint16", 0.01, 50.0), ("int32", 0.001, 0.0), ("uint8", 1.0, 0.0), ("float64", 1.0, 0.0)],
)
def test_number_types_and_scales(make_job, ground, clean, dtype, scale, offset):
    stored = np.rint((ground.reservoir() - offset) / scale).astype(dtype)
    plan = make_job(stored, dem={"tags": {"scale": scale, "offset": offset}}, terrain={"vertical_unit": "m"}).plan()
    same(only(plan), clean)


@pytest.mark.parametrize("turned", [False, True])
def test_a_dem_of_one_row_or_column(make_job, ground, clean, turned):
    line = ground.valley()[:1]
    ends = ((0, 10), (0, 60))
    if turned:
        line, ends = line.T, ((10, 0), (60, 0))
    same(only(make_job(line, ends=ends).plan()), clean)


def test_two_cells_of_a_dem_of_two_cells(make_job, ground):
    problem = refusal(make_job(np.array([[100.0, 90.0]]), ends=((0, 0), (0, 1))))
    assert problem.key == "outlet.x"
    assert "nothing to siphon over" in problem.what


def test_all_nodata_is_refused(make_job):
    problem = refusal(make_job(np.full((30, 80), -9999.0), dem={"nodata": -9999.0}))
    assert problem.key == "terrain.file"
    assert "holds no ground" in problem.what
    assert "nodata" in problem.remedy


# ---------------------------------------------------------------- gaps and cuts


@pytest.mark.parametrize("demand", [{}, {"discharge_m3s": 0.1}])
def test_a_wall_of_nodata_cuts_the_outlet_off(make_job, ground, demand):
    values = ground.reservoir()
    values[:, 35] = -9999.0
    plan = make_job(values, dem={"nodata": -9999.0}, demand=demand).plan()
    assert plan.schemes == ()
    assert not plan.feasible
    assert plan.lowest_crest is None
    (shortfall,) = plan.shortfalls
    assert shortfall.cause == "cut off"
    assert "no ground that holds data joins intake and outlet" in shortfall.text


def test_the_outlet_on_nodata_is_refused(make_job, ground):
    values = ground.reservoir()
    values[20, 60] = -9999.0
    problem = refusal(make_job(values, dem={"nodata": -9999.0}))
    assert (problem.key, problem.found) == ("outlet.x", "nodata")


def test_a_lidar_gap_over_the_water_is_water(make_job, ground, clean):
    values = ground.reservoir().astype(np.float32)
    values[15:25, 8:22] = np.nan
    plan = make_job(values).plan()  # the intake lies in it
    same(only(plan), clean)
    assert plan.water_body.void_cells == 140
    assert plan.water_body.area_m2 == pytest.approx((30 * 26) * STEP**2, rel=1e-6)


def test_a_lidar_gap_larger_than_the_first_window_is_water(make_job, ground):
    values = np.full((400, 400), 100.0, dtype=np.float32)
    values[:3], values[-3:], values[:, :3] = 110.0, 110.0, 110.0
    values[:, 300:] = ground.valley(rows=400)[:, 27:81][:, :1] * 0 + 90.0
    values[:, 294:300] = 103.0
    values[20:380, 20:285] = np.nan
    plan = make_job(values, ends=((200, 270), (200, 320))).plan()
    assert only(plan).verdict.grade != "unfit"
    assert plan.water_body.void_cells == 360 * 265


def test_an_intake_in_a_gap_at_the_bank_is_refused_and_a_polygon_helps(make_job, ground, tmp_path, clean):
    values = ground.reservoir().astype(np.float32)
    values[10:30, :15] = np.nan
    problem = refusal(make_job(values))
    assert problem.key == "intake.x"
    assert "water.polygon_file" in problem.remedy
    west, north = WEST + 2 * CELL, NORTH - 5 * CELL
    shore = geopandas.GeoSeries([box(west, north - 30 * CELL, west + 25 * CELL, north)], crs="EPSG:32631")
    shore.to_crs("EPSG:4326").to_file(tmp_path / "shore.gpkg", layer="lake")
    plan = make_job(values, water={"polygon_file": "shore.gpkg", "polygon_layer": "lake"}).plan()
    same(only(plan), clean)
    assert plan.water_body.source == "polygon"
    assert plan.water_body.area_m2 == pytest.approx(30 * 25 * STEP**2, rel=1e-4)


def test_a_polygon_that_misses_the_intake_is_refused(make_job, ground, tmp_path):
    away = geopandas.GeoSeries([box(3.2, 45.0, 3.3, 45.1)], crs="EPSG:4326")
    away.to_file(tmp_path / "shore.gpkg")
    problem = refusal(make_job(ground.reservoir(), water={"polygon_file": "shore.gpkg"}))
    assert problem.key == "water.polygon_file"
    assert "holds the intake" in problem.what


@pytest.fixture
def shore(tmp_path):
    """Write a box, in cells from the north-west corner, as the water's polygon."""

    def write(first_row, first_col, last_row, last_col):
        west, south = WEST + first_col * CELL, NORTH - (last_row + 1) * CELL
        area = box(west, south, WEST + (last_col + 1) * CELL, NORTH - first_row * CELL)
        geopandas.GeoSeries([area], crs="EPSG:32631").to_file(tmp_path / "shore.gpkg")
        return {"polygon_file": "shore.gpkg"}

    return write


@pytest.mark.parametrize("last_col", [35, 70])
def test_a_polygon_over_the_barrier_is_refused(make_job, ground, shore, last_col):
    problem = refusal(make_job(ground.reservoir(), water=shore(5, 2, 34, last_col)))
    assert problem.key == "water.polygon_file"
    assert "reaches over the barrier" in problem.what
    assert "103.00 m" in problem.found


def test_a_polygon_that_is_much_on_dry_land_is_told(make_job, ground, shore, clean):
    plan = make_job(ground.reservoir(), water=shore(0, 0, 39, 27)).plan()
    same(only(plan), clean)
    share = round(100 * (1 - 30 * 26 / (40 * 28)))
    assert any(text.startswith(f"{share} % of the water's polygon lies on ground above") for text in plan.warnings)


def test_rough_water_is_read_with_a_polygon(make_job, ground, shore, rng, clean):
    """A radar DEM: the lake is not flat, and the intake's own cell is higher than the water."""
    values = ground.reservoir() + np.where(ground.reservoir() == 100.0, rng.normal(0.0, 0.2, (40, 80)), 0.0)
    values[20, 10] = 100.4
    problem = refusal(make_job(values))
    assert problem.key == "intake.x"
    assert "water.polygon_file" in problem.remedy
    plan = make_job(values, water=shore(5, 2, 34, 27)).plan()
    same(only(plan), clean, rel=1e-3)
    assert any("ground at 100.40 m at the intake" in text for text in plan.warnings)


def test_a_mouth_below_the_bed_is_told(make_job, ground):
    job = make_job(ground.reservoir(water=97.0), terrain={"water_shown": "bed"})
    assert "The intake mouth, at 95 m, lies below the bed that the DEM shows: 97.00 m." in job.look().assumptions


def test_a_collar_of_nodata_is_an_edge_and_no_hollow(make_job, ground, clean):
    """DEMs are often cut to a catchment: the file goes on, the ground does not."""
    values = np.full((80, 120), -9999.0)
    values[20:60, 20:100] = ground.reservoir()
    plan = make_job(values, dem={"nodata": -9999.0}, ends=((40, 30), (40, 80))).plan()
    same(only(plan), clean)
    assert plan.warnings == ()
    assert plan.water_body.spill.level_m == 103.0


def test_a_spill_towards_a_collar_of_nodata_is_found(make_job, ground):
    values = np.full((80, 120), -9999.0)
    values[20:60, 20:100] = ground.reservoir()
    values[40, 20:22] = 101.5  # a notch in the western bank
    spill = make_job(values, dem={"nodata": -9999.0}, ends=((40, 30), (40, 80))).look().water_body.spill
    assert (spill.level_m, spill.towards) == (101.5, "edge")


def test_a_lake_cut_by_the_edge_is_planned_and_told(make_job, ground, clean):
    plan = make_job(ground.valley()).plan()
    same(only(plan), clean)
    assert plan.water_body.touches_edge
    assert plan.water_body.spill is None
    assert any("edge of the DEM cuts the water body" in text for text in plan.warnings)


def test_two_lakes_at_one_level_are_told_apart(make_job, ground, clean):
    values = ground.reservoir()
    values[:, 66:] = 104.0
    values[5:35, 70:78] = 100.0
    plan = make_job(values).plan()
    same(only(plan), clean)
    assert plan.water_body.area_m2 == pytest.approx((30 * 26) * STEP**2, rel=1e-6)
    problem = refusal(make_job(values, ends=((20, 10), (20, 74)), outlet={"level_m": None}))
    assert problem.key == "outlet.height_above_ground_m" or problem.key == "outlet"
    assert "100.00 m" in problem.found


# ---------------------------------------------------------------- places


def test_an_outlet_inside_the_water_is_refused(make_job, ground):
    problem = refusal(make_job(ground.reservoir(), ends=((20, 10), (20, 15))))
    assert (problem.key, problem.what) == ("outlet.x", "The outlet lies in the water.")


def test_an_intake_on_dry_land_is_refused(make_job, ground):
    problem = refusal(make_job(ground.reservoir(), ends=((20, 30), (20, 60))))
    assert (problem.key, problem.found) == ("intake.x", "ground at 103.00 m, water at 100.00 m")


def test_both_ends_in_one_cell_are_refused(make_job, ground):
    problem = refusal(make_job(ground.reservoir(), ends=((20, 10), (20.2, 10.2))))
    assert problem.key == "outlet.x"
    assert "one cell" in problem.what
    assert "10.00 x 10.00 m" in problem.found


def test_neighbouring_cells_with_no_barrier_between_are_refused(make_job):
    values = np.where(np.arange(80) <= 30, 100.0, 90.0) * np.ones((40, 1))
    problem = refusal(make_job(values, ends=((20, 30), (20, 31))))
    assert "nothing to siphon over" in problem.what
    assert "narrow dam" in problem.remedy


def test_neighbouring_cells_over_bank_and_shore_are_planned(make_job):
    """The intake at the shore under a bank of one cell, the outlet behind it: two cells apart."""
    values = np.where(np.arange(80) < 30, 100.0, 90.0) * np.ones((40, 1))
    values[:, 30] = 101.0
    scheme = only(make_job(values, ends=((20, 29), (20, 31))).plan())
    assert scheme.route.length_m == pytest.approx(math.hypot(STEP, 1.0) + math.hypot(STEP, 11.0), rel=1e-6)
    assert scheme.verdict.grade == "caution"
    assert any(check.name == "barrier" and check.grade == "caution" for check in scheme.verdict.checks)


@pytest.mark.parametrize("nudge", [0.0, -0.5])
def test_an_intake_in_the_very_corner(make_job, ground, nudge):
    """At the centre of the corner cell, and at the corner of the DEM itself."""
    plan = make_job(ground.valley(), ends=((nudge, nudge), (39, 79))).plan()
    scheme = only(plan)
    assert tuple(scheme.route.cells[0]) == (0, 0)
    straight = math.hypot(math.hypot(39, 79) * STEP, 10.0)
    assert straight <= scheme.route.length_m < 1.03 * straight


def test_the_dems_own_corner_but_just_outside_is_refused(make_job, ground):
    problem = refusal(make_job(ground.valley(), ends=((-0.51, 10), (20, 60))))
    assert problem.key in {"intake.x", "intake.y"}
    assert "outside the DEM" in problem.what


def test_an_outlet_in_a_closed_hollow_is_told_with_its_volume(make_job, ground):
    values = ground.reservoir()
    values[:, 55:] = 95.0
    values[18:23, 58:63] = 90.0
    outlook = make_job(values).look()
    (text,) = outlook.warnings
    held = 25 * 5.0 * STEP**2  # the hollow proper; the trough at the ridge's foot joins it below its rim
    assert "closed hollow" in text
    volume = float(text.split("about ")[1].split(" m3")[0].replace(",", ""))
    assert volume >= held
    assert "95.00 m" in text


# ---------------------------------------------------------------- levels


def test_a_present_level_above_the_spill_names_the_saddle(make_job, ground):
    values = ground.reservoir()
    values[20, 29:32] = 101.2
    job = make_job(values, water={"present_level_m": 101.5})
    for plan in (True, False):
        problem = refusal(job, plan=plan)
        assert problem.key == "water.present_level_m"
        assert "saddle at 101.20 m" in problem.found
        assert problem.allowed == "a level below 101.20 m"


def test_low_cells_that_join_across_the_barrier_at_corners_are_told(make_job, ground):
    values = ground.reservoir(top=120.0, water=100.0)
    values[:, 29:32] = 120.0
    values[:, 32:] = 90.0
    values[19, 29], values[20, 30], values[21, 31] = 99.0, 99.0, 99.0
    values[5:35, 2:29] = 100.0
    problem = refusal(make_job(values))
    assert problem.key == "outlet.x"
    assert "at corners" in problem.what
    # Bilinear saddle of a patch 99, 120, 120, 99: (99*99 - 120*120) / (2*99 - 2*120).
    assert "ground up to 109.50 m" in problem.found


def test_a_lowest_level_above_the_present_one_read_off_the_dem_is_refused(make_job, ground):
    problem = refusal(make_job(ground.reservoir(), water={"present_level_m": None, "lowest_level_m": 100.5}))
    assert problem.key == "water.lowest_level_m"
    assert "present level 100.00 m" in problem.found


@pytest.mark.parametrize(
    ("outlet", "key", "found"),
    [
        ({"level_m": None, "height_above_ground_m": 9.5}, "outlet.height_above_ground_m", "99.50 m"),
        ({"level_m": 99.0}, "outlet.level_m", "99 m"),
        ({"tailwater_level_m": 99.2}, "outlet.tailwater_level_m", "99.2 m"),
    ],
)
def test_no_fall_at_the_lowest_level_is_refused(make_job, ground, outlet, key, found):
    problem = refusal(make_job(ground.reservoir(), outlet=outlet))
    assert problem.key == key
    assert problem.found.startswith(found)
    assert problem.allowed.startswith("below 99")


def test_tailwater_takes_from_the_fall(make_job, ground, hand):
    scheme = only(make_job(ground.reservoir(top=101.0), outlet={"tailwater_level_m": 96.0}).plan())
    assert scheme.appraisal.fall_m == pytest.approx(3.0)
    assert scheme.appraisal.governs == "energy"
    assert scheme.appraisal.discharge_m3s == pytest.approx(hand.energy_m3s(3.0, scheme.route.length_m), rel=1e-6)


def test_an_intake_that_falls_dry_is_refused(make_job, ground):
    values = ground.reservoir(water=98.9)
    job = make_job(values, terrain={"water_shown": "bed"}, intake={"mouth_level_m": None})
    problem = refusal(job)
    assert problem.key == "intake.mouth_level_m"
    assert "mouth at 98.90 m" in problem.found
    assert "98.70 m" in problem.allowed


# ---------------------------------------------------------------- air


def test_thin_air_lets_suction_govern(make_job, ground, hand):
    """4000 m: 61 640 Pa in ISO 2533 (figure from memory)."""
    air = {"pressure_pa": None, "altitude_m": 4000.0}
    scheme = only(make_job(ground.reservoir(top=101.0), air=air).plan())
    row = ground.reservoir(top=101.0)[20, 10:31]
    suction = hand.suction_m3s(99.0, 101.0, ground.length(row), air_pa=61640.0)
    assert scheme.appraisal.governs == "suction"
    assert scheme.appraisal.discharge_m3s == pytest.approx(suction, rel=1e-3)
    high = only(make_job(ground.reservoir(), air=air).plan())
    assert high.verdict.grade == "unfit"


def test_a_local_datum_without_altitude_is_refused_and_an_altitude_helps(make_job, ground):
    air = {"pressure_pa": None}
    for datum in (None, "works datum, assumed"):
        problem = refusal(make_job(ground.reservoir(), air=air, terrain={"vertical_datum": datum}))
        assert problem.key == "air.altitude_m"
        assert "air.altitude_m or air.pressure_pa" in problem.remedy
    assert make_job(ground.reservoir(), air=air | {"altitude_m": 250.0}).plan().feasible


def test_an_altitude_out_of_range_is_refused(make_job, ground):
    problem = refusal(make_job(ground.reservoir(), air={"pressure_pa": None, "altitude_m": 8848.0}))
    assert (problem.key, problem.found) == ("air.altitude_m", "8848")


# ---------------------------------------------------------------- limits and demands


def test_the_highest_lift_caps_and_is_named(make_job, ground, hand):
    lift = 4.0 + hand.crown_m
    assert make_job(ground.reservoir(), limits={"highest_lift_m": lift + 0.01}).plan().feasible
    plan = make_job(ground.reservoir(), limits={"highest_lift_m": lift - 0.2}).plan()
    assert not plan.feasible
    (shortfall,) = plan.shortfalls
    assert shortfall.raise_m == pytest.approx(0.2, abs=0.003)
    assert "a highest lift (limits.highest_lift_m) 0.20 m higher" in shortfall.text
    assert "reserve" not in shortfall.text


@pytest.mark.parametrize("remedy", [{"search": {"bed_offset_m": -1.0}}, {"limits": {"reserve_m": 2.5 - 1.0}}])
def test_what_a_shortfall_says_would_help_does_help(make_job, ground, remedy):
    """A ridge that is too high: each remedy with a little more than the metres told makes a route."""
    job = make_job(ground.reservoir(top=107.0))
    (shortfall,) = job.plan().shortfalls
    still = (101325.0 - 1228.0) / (999.7 * 9.81) - 2.5
    assert shortfall.raise_m == pytest.approx(107.0 + 0.31 - 99.0 - still, abs=0.005)
    assert 0.0 < shortfall.raise_m < 1.0
    assert make_job(ground.reservoir(top=107.0), **remedy).plan().schemes[0].appraisal.discharge_m3s > 0.0


def test_a_trench_lowers_the_crown_by_its_depth(make_job, ground, hand):
    scheme = only(make_job(ground.reservoir(), search={"bed_offset_m": -2.0}).plan())
    assert scheme.appraisal.lift_m == pytest.approx(103.0 + hand.crown_m - 2.0 - 99.0)
    energy = hand.energy_m3s(9.0, scheme.route.length_m)
    assert (scheme.appraisal.governs, scheme.appraisal.discharge_m3s) == ("energy", pytest.approx(energy, rel=1e-6))


def test_a_demand_is_met_by_as_few_pipes_as_the_hand_says(make_job, ground, hand):
    plan = make_job(ground.reservoir(), demand={"discharge_m3s": 0.4}).plan()
    each = hand.suction_m3s(99.0, 103.0, ground.length(ground.reservoir()[20, 10:31]))
    assert 0.4 / 3 < each < 0.4 / 2
    assert [scheme.count for scheme in plan.schemes if scheme.verdict.grade != "unfit"] == [3, 4]
    assert {scheme.appraisal.duty_m3s for scheme in plan.schemes} == {0.4 / 3, 0.4 / 4}


def test_a_demand_that_no_pipe_can_carry(make_job, ground):
    plan = make_job(ground.reservoir(), demand={"discharge_m3s": 50.0}).plan()
    assert not plan.feasible
    (shortfall,) = plan.shortfalls
    assert shortfall.cause == "energy"
    assert "more pipes" in shortfall.text
    assert only(plan).count == 4


def test_a_budget_too_small_is_unfit_with_the_money_missing(make_job, ground, pipe):
    job = make_job(ground.reservoir(), pipes=[pipe | {"supply_per_m": 10.0}], demand={"budget": 1000.0})
    plan = job.plan()
    assert not plan.feasible
    scheme = only(plan)
    assert scheme.cost.total == pytest.approx(10.0 * scheme.route.length_m)
    (budget,) = (check for check in scheme.verdict.checks if check.name == "budget")
    assert budget.grade == "unfit"
    assert budget.reserve == pytest.approx(1000.0 - scheme.cost.total)


def test_thirty_pipes(make_job, ground, pipe, hand):
    pipes = [pipe | {"name": f"P{more}", "outside_diameter_mm": 320.0 + more} for more in range(30)]
    plan = make_job(ground.reservoir(), pipes=pipes).plan()
    assert [scheme.rank for scheme in plan.schemes] == list(range(1, 31))
    assert [scheme.pipe.name for scheme in plan.schemes] == [f"P{more}" for more in reversed(range(30))]


def test_two_pipes_of_one_size_are_equal(make_job, ground, pipe):
    plan = make_job(ground.reservoir(), pipes=[pipe, pipe | {"name": "Q"}]).plan()
    one, two = plan.schemes
    assert one.appraisal.discharge_m3s == two.appraisal.discharge_m3s
    assert one.route.name == two.route.name


# ---------------------------------------------------------------- cliffs


def test_a_wall_of_two_kilometres_is_unfit_and_says_by_how_much(make_job, ground):
    values = ground.reservoir()
    values[:, 30] = 2000.0
    plan = make_job(values).plan()
    assert not plan.feasible
    (shortfall,) = plan.shortfalls
    still = (101325.0 - 1228.0) / (999.7 * 9.81) - 2.5
    assert shortfall.raise_m == pytest.approx(2000.0 + 0.31 - 99.0 - still, abs=0.01)
    assert "no trench or level makes up this" in shortfall.text


def test_a_cliff_of_five_hundred_metres_behind_the_crest(make_job, ground, hand):
    """The search's bracket has to close although a figure read off samples of a 500 m edge is a little low."""
    values = np.where(np.arange(80) > 30, -400.0, ground.reservoir())
    scheme = only(make_job(values, outlet={"level_m": None}).plan())
    suction = hand.suction_m3s(99.0, 103.0, ground.length(values[20, 10:31]))
    assert scheme.appraisal.governs == "suction"
    assert scheme.appraisal.discharge_m3s == pytest.approx(suction, rel=5e-3)


# ---------------------------------------------------------------- frames and units


def test_degrees(make_job, ground):
    """Lengths along a meridian by geodesics (Karney 2013, in PROJ), summed by hand."""
    values = np.rint(ground.valley(rows=30).T).astype(np.int16)
    cell, west, north = 0.0001, 3.0, 45.2
    dem = {"crs": "EPSG:4326", "transform": Affine(cell, 0, west, 0, -cell, north)}
    places = {
        "intake": {"x": None, "y": None, "lon": west + 15.5 * cell, "lat": north - 10.5 * cell},
        "outlet": {"x": None, "y": None, "lon": west + 15.5 * cell, "lat": north - 60.5 * cell},
    }
    scheme = only(make_job(values, dem=dem, **places).plan())
    lat = north - (np.arange(10, 61) + 0.5) * cell
    lon = np.full(lat.size, west + 15.5 * cell)
    _, _, steps = Geod(ellps="WGS84").inv(lon[:-1], lat[:-1], lon[1:], lat[1:])
    by_hand = float(np.sum(np.hypot(steps, np.diff(values[10:61, 15].astype(float)))))
    assert scheme.route.length_m == pytest.approx(by_hand, rel=1e-6)


def test_us_survey_feet_in_plan_and_height(make_job, ground, clean):
    foot = 1200.0 / 3937.0
    dem = {
        "crs": "+proj=utm +zone=31 +datum=WGS84 +units=us-ft +no_defs",
        "transform": Affine(CELL / foot, 0, WEST / foot, 0, -CELL / foot, NORTH / foot),
        "tags": {"unit": "US survey foot"},
    }
    places = {
        "intake": {"x": (WEST + 105.0) / foot, "y": (NORTH - 205.0) / foot},
        "outlet": {"x": (WEST + 605.0) / foot, "y": (NORTH - 205.0) / foot},
    }
    plan = make_job(ground.reservoir() / foot, dem=dem, terrain={"vertical_unit": None}, **places).plan()
    same(only(plan), clean, rel=1e-4)


def test_feet_without_a_word_are_refused(make_job, ground):
    problem = refusal(make_job(ground.reservoir(), terrain={"vertical_unit": None}))
    assert problem.key == "terrain.vertical_unit"


def test_web_mercator_gives_ground_lengths(make_job, ground, clean):
    """The same ground, a formula of the UTM easting, on a grid whose map lengths are 1.41 times too long."""
    to_map = Transformer.from_crs("EPSG:32631", "EPSG:3857", always_xy=True)
    (x_in, x_out), (y_in, y_out) = to_map.transform([WEST + 105.0, WEST + 605.0], [NORTH - 205.0] * 2)
    cell = (x_out - x_in) / 50
    transform = Affine(cell, 0, x_in - 10.5 * cell, 0, -cell, y_in + 20.5 * cell)
    col, row = np.meshgrid(np.arange(80) + 0.5, np.arange(40) + 0.5)
    easting, _ = to_map.transform(*(transform * (col, row)), direction="INVERSE")
    levels = np.interp(easting, WEST + (np.arange(80) + 0.5) * CELL, ground.valley()[0])
    places = {"intake": {"x": x_in, "y": y_in}, "outlet": {"x": x_out, "y": y_out}}
    scheme = only(make_job(levels, dem={"crs": "EPSG:3857", "transform": transform}, **places).plan())
    assert scheme.route.length_m == pytest.approx(clean[0], rel=0.005)
    assert scheme.appraisal.discharge_m3s == pytest.approx(clean[1], rel=0.005)
    assert scheme.route.line.length > 1.4 * scheme.route.length_m


def test_a_mirrored_job_has_the_same_length(make_job, ground, rng):
    """Ground, intake and outlet mirrored east-west: another scan order, the same route length."""
    values = ground.reservoir() + np.where(np.arange(80) > 30, rng.uniform(0.0, 0.5, (40, 80)), 0.0)
    one = only(make_job(values, ends=((12, 10), (28, 65))).plan())
    two = only(make_job(values[:, ::-1], ends=((12, 69), (28, 14))).plan())
    assert two.route.length_m == pytest.approx(one.route.length_m, rel=1e-9)
    assert two.appraisal.discharge_m3s == pytest.approx(one.appraisal.discharge_m3s, rel=1e-9)


@pytest.mark.parametrize(
    "search", [{"neighbours": 8}, {"neighbours": 32}, {"ground_rule": "cells"}, {"tolerance": 1e-6}]
)
def test_ways_to_search_agree_where_the_best_route_is_straight(make_job, ground, clean, search):
    same(only(make_job(ground.reservoir(), search=search).plan()), clean)


@pytest.mark.parametrize(
    ("transform", "turned", "y"),
    [
        (Affine(CELL, 0, WEST, 0, CELL, NORTH - 40 * CELL), np.s_[::-1], NORTH - 205.0),
        (Affine(-CELL, 0, WEST + 80 * CELL, 0, -CELL, NORTH), np.s_[:, ::-1], NORTH - 205.0),
        (Affine(CELL, 0, WEST, 0, -3.0, NORTH), np.s_[:], NORTH - 61.5),
    ],
    ids=["south up", "east to west", "oblong cells"],
)
def test_grids_stored_the_other_way_round(make_job, ground, clean, transform, turned, y):
    places = {"intake": {"y": y}, "outlet": {"y": y}}
    same(only(make_job(ground.reservoir()[turned], dem={"transform": transform}, **places).plan()), clean)


def test_a_datum_offset_moves_the_dem(make_job, ground, clean):
    same(only(make_job(ground.reservoir() - 50.0, terrain={"datum_offset_m": 50.0}).plan()), clean)


def test_a_compound_crs_says_unit_and_datum(make_job, ground):
    """EGM96 heights in metres: no unit and no altitude have to be told."""
    job = make_job(
        ground.reservoir(), dem={"crs": "EPSG:32631+5773"}, terrain={"vertical_unit": None}, air={"pressure_pa": None}
    )
    assert only(job.plan()).verdict.grade != "unfit"


@pytest.mark.parametrize("diameter", [10.0, 4000.0])
def test_the_smallest_and_the_largest_pipe(make_job, ground, diameter):
    pipe = {"name": "odd", "outside_diameter_mm": diameter, "wall_mm": diameter / 20, "roughness_mm": 0.01}
    plan = make_job(ground.reservoir(), pipes=[pipe]).plan()
    lift = 4.0 + 0.95 * diameter / 1000.0
    assert only(plan).appraisal.lift_m == pytest.approx(lift)
    assert plan.feasible == (lift < (101325.0 - 1228.0) / (999.7 * 9.81) - 2.5)


# ---------------------------------------------------------------- windows


def test_a_corner_of_sixty_million_cells(make_job, ground, clean, tmp_path):
    rows, cols = 6000, 10_000
    with rasterio.open(
        tmp_path / "dem.tif",
        "w",
        driver="GTiff",
        height=rows,
        width=cols,
        count=1,
        dtype="int16",
        crs="EPSG:32631",
        transform=Affine(CELL, 0, WEST, 0, -CELL, NORTH),
        tiled=True,
        compress="deflate",
        zlevel=1,
    ) as target:
        values = np.full((rows, cols), 90, dtype=np.int16)
        values[:40, :80] = ground.reservoir()
        target.write(values, 1)
    del values
    started = time.perf_counter()
    plan = make_job(None).plan()
    took_s = time.perf_counter() - started
    same(only(plan), clean)
    assert (plan.terrain.window.dem_rows, plan.terrain.window.dem_cols) == (rows, cols)
    assert plan.terrain.elevation_m.size < 100_000
    assert only(plan).route.proof.whole_dem
    assert took_s < 10.0


@pytest.fixture
def far_gap():
    """A long lake behind a wall with one gap, 170 rows south of both ends, on a DEM much larger than that."""
    values = np.full((900, 700), 150.0)
    values[40:290, 150:200] = 100.0
    values[40:290, 201:260] = 90.0
    values[225:255, 200] = 101.0
    return values


def test_a_window_grows_until_the_best_route_fits(make_job, far_gap, monkeypatch):
    job = make_job(far_gap, ends=((60, 190), (60, 210)))
    grown = job.plan()
    monkeypatch.setattr("routing.planning.plans.first_window", lambda _site, dem, _ends: dem.whole)
    whole = job.plan()
    assert not grown.terrain.window.whole
    assert whole.terrain.window.whole
    assert only(grown).route.proof.whole_dem
    assert grown.warnings == whole.warnings
    assert not any("largest_window_cells" in text for text in grown.warnings)
    assert only(grown).route.length_m == pytest.approx(only(whole).route.length_m, rel=1e-6)
    assert only(grown).appraisal.discharge_m3s == pytest.approx(only(whole).appraisal.discharge_m3s, rel=1e-6)
    assert grown.lowest_crest.level_m == whole.lowest_crest.level_m == 101.0
    assert only(grown).route.length_m > 2 * 165 * STEP


def test_a_window_that_may_not_grow_is_told(make_job, far_gap):
    plan = make_job(far_gap, ends=((60, 190), (60, 210)), search={"largest_window_cells": 20_000}).plan()
    assert plan.terrain.elevation_m.size <= 20_000
    assert not plan.feasible
    assert sum("largest_window_cells" in text for text in plan.warnings) == 2
    proof = only(plan).route.proof
    assert not proof.whole_dem
    assert "inside the part of the DEM that was read" in proof.text


def test_ends_too_far_apart_for_the_window_allowed_are_refused(make_job, far_gap):
    problem = refusal(make_job(far_gap, ends=((60, 190), (280, 210)), search={"largest_window_cells": 20_000}))
    assert problem.key == "search.largest_window_cells"
    assert "20,000" in problem.allowed


# ---------------------------------------------------------------- the command


def test_a_folder_with_spaces_and_letters_of_all_kinds(make_job, ground, overcrest, tmp_path, clean):
    folder = tmp_path / "Größe 3 – żółw ダム"
    job = make_job(ground.reservoir(), folder=folder)
    done = overcrest("plan", job.file, "--quiet", "--out", folder / "plan à faire")
    assert done.returncode == 0, done.stderr
    routes = json.loads((folder / "plan à faire" / "routes.geojson").read_text(encoding="utf-8"))
    assert len(routes["features"]) == 1
    assert overcrest("look", job.file, LC_ALL="C").returncode == 0


def test_a_cut_off_outlet_is_exit_3_with_a_folder(make_job, ground, overcrest, tmp_path):
    values = ground.reservoir()
    values[:, 35] = -9999.0
    job = make_job(values, dem={"nodata": -9999.0})
    done = overcrest("plan", job.file, "--out", tmp_path / "out")
    assert done.returncode == 3, done.stderr
    assert "no ground that holds data joins intake and outlet" in " ".join(done.stdout.split())
    routes = json.loads((tmp_path / "out" / "routes.geojson").read_text(encoding="utf-8"))
    assert routes["features"] == []


def test_a_refusal_names_file_line_and_key(make_job, ground, overcrest, tmp_path):
    job = make_job(ground.reservoir(), ends=((20, 30), (20, 60)))
    done = overcrest("plan", job.file)
    assert done.returncode == 2
    assert done.stdout == ""
    assert f"{job.file}:{job.line_of('x = ')}" in done.stderr
    for word in ("intake.x", "dry ground", "found", "allowed", "Traceback"):
        assert (word in done.stderr) == (word != "Traceback")
    assert list((tmp_path / "work").iterdir()) == []


def _without_the_right_to_write_anywhere():
    """Root may write to read-only folders: drop that right (Linux: prctl 24 drops one of the capabilities)."""
    if os.geteuid() == 0:
        import ctypes

        for capability in (1, 2):  # override of write, of read and search
            ctypes.CDLL(None).prctl(24, capability, 0, 0, 0)


def test_a_folder_that_may_not_be_written_is_refused_before_the_search(make_job, ground, tmp_path):
    job = make_job(ground.reservoir())
    shut = tmp_path / "shut"
    shut.mkdir()
    shut.chmod(0o555)
    done = subprocess.run(
        [sys.executable, "-m", "routing.commands", "plan", str(job.file), "--out", str(shut / "run")],
        cwd=tmp_path,
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
        preexec_fn=_without_the_right_to_write_anywhere,
    )
    shut.chmod(0o755)
    assert done.returncode == 2, done.stderr
    assert "nothing may be written there" in done.stderr
    assert str(shut) in done.stderr
    assert list(shut.iterdir()) == []


# Small slices make a run long on any machine, and say each stage at once.
_SLOW_RUN = """
import sys
import routing.commands.progress as progress
import routing.search.crests as crests
import routing.search.reaching as reaching
from routing.commands import main
progress._SLOW_S = 0.05
reaching._SLICE_CELLS = crests._SLICE_CELLS = 200
sys.exit(main())
"""


@pytest.mark.slow
@pytest.mark.parametrize("stage", ["ground", "routes"])
def test_ctrl_c_in_a_long_run_stops_within_a_second(make_job, ground, tmp_path, stage):
    """Nine million cells without a route: each pipe takes some twenty searches of all of them."""
    values = np.full((3000, 3000), 150, dtype=np.int16)
    values[1000:2000, 1000:1900] = 100
    values[1000:2000, 1910:2500] = 90
    values[::7, ::5] += 3
    job = make_job(values, ends=((1500, 1200), (1500, 2400)), water={"present_level_m": 104.0})
    out = tmp_path / "out"
    out.mkdir()
    process = subprocess.Popen(
        [sys.executable, "-c", _SLOW_RUN, "plan", str(job.file)],
        cwd=out,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
    )
    guard = threading.Timer(120.0, process.kill)
    guard.start()
    try:
        for line in process.stderr:
            if line.startswith(f"stage {stage}") and line.endswith("...\n"):
                break
        time.sleep(0.3)
        process.send_signal(signal.SIGINT)
        asked_s = time.monotonic()
        stdout, stderr = process.communicate()
        took_s = time.monotonic() - asked_s
    finally:
        guard.cancel()
    assert process.returncode == 130, stderr
    assert took_s < 3.0  # well under a second on a quiet machine; tests run beside other work
    assert (stdout, list(out.iterdir())) == ("", [])
    assert "Traceback" not in stderr


def test_the_public_names_are_what_this_file_uses():
    assert {"load_site", "look", "plan"} <= set(routing.__all__)
