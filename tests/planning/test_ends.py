"""Whether intake and outlet lie where a siphon can begin and end."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from routing.errors import SiteError
from routing.planning.ends import check_outlet, check_wet
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.terrain import open_dem


def asked(job):
    """Site and scene of a sound job."""
    site = job.site
    with open_dem(site.terrain, site.lines, site.file) as dem:
        ends = place_ends(site, dem)
        return site, survey(site, dem, ends, first_window(site, dem, ends), Reporter())


def refusal(check, *arguments):
    with pytest.raises(SiteError) as caught:
        check(*arguments)
    (problem,) = caught.value.problems
    assert problem.line
    assert problem.found
    assert problem.allowed
    assert problem.remedy
    return problem


# ---------------------------------------------------------------- the intake


def on_ground_at(scene, ground_m):
    levels = scene.terrain.elevation_m.copy()
    levels[20, 10] = ground_m
    return replace(scene.terrain, elevation_m=levels)


@pytest.mark.parametrize("ground_m", [100.01, 101.0])
def test_ground_above_the_water_is_no_intake(make_job, ground, ground_m):
    site, scene = asked(make_job(ground.reservoir()))
    problem = refusal(check_wet, site, on_ground_at(scene, ground_m), (20, 10), 100.0)
    assert (problem.key, problem.what) == ("intake.x", "The intake is on dry ground.")
    assert problem.found == f"ground at {ground_m:.2f} m, water at 100.00 m"


@pytest.mark.parametrize("level_m", [100.1, 812.34, 0.3, -3.7, 2499.99])
def test_water_wets_ground_up_to_its_level_as_a_4_byte_number_holds_it(make_job, ground, level_m):
    site, scene = asked(make_job(ground.reservoir()))
    for ground_m in (level_m - 5.0, level_m, float(np.float32(level_m))):
        check_wet(site, on_ground_at(scene, ground_m), (20, 10), level_m)


@pytest.mark.parametrize(
    ("gap", "wet"),
    [
        (np.s_[18:23, 8:13], True),  # water all round
        (np.s_[18:23, 5:30], False),  # up to the bank and the ridge
        (np.s_[18:23, :13], False),  # up to the DEM's edge
        (np.s_[:, :], False),  # no ground at all
    ],
)
def test_a_gap_at_the_intake_is_water_only_if_water_is_all_round(make_job, ground, gap, wet):
    site, scene = asked(make_job(ground.reservoir()))
    valid = scene.terrain.valid.copy()
    valid[gap] = False
    terrain = replace(scene.terrain, valid=valid)
    if wet:
        check_wet(site, terrain, (20, 10), 100.0)
    else:
        assert "gap is not enclosed by water" in refusal(check_wet, site, terrain, (20, 10), 100.0).what


def test_a_polygon_says_where_water_is_whatever_the_dem_shows(make_job, ground, tmp_path):
    site, scene = asked(make_job(ground.reservoir()))
    drawn = replace(site, water=replace(site.water, polygon_file=tmp_path / "shore.gpkg"))
    check_wet(drawn, scene.terrain, (20, 30), 100.0)  # the top of the ridge
    refusal(check_wet, site, scene.terrain, (20, 30), 100.0)


# ---------------------------------------------------------------- the outlet


def outlet_asks(site, scene, **changes):
    """What `check_outlet` takes, with parts changed."""
    plain = {
        "terrain": scene.terrain,
        "grid": scene.grid,
        "body": scene.body,
        "crest": scene.crest,
        "ends": (scene.intake_cell, scene.outlet_cell),
    }
    return (site, *(plain | changes).values())


def test_a_sound_outlet_passes(make_job, ground):
    site, scene = asked(make_job(ground.reservoir()))
    check_outlet(*outlet_asks(site, scene))


@pytest.mark.parametrize(("level_m", "passes"), [(100.0, False), (100.01, True)])
def test_the_lowest_way_must_rise_above_the_water(make_job, ground, level_m, passes):
    site, scene = asked(make_job(ground.reservoir()))
    asks = outlet_asks(site, scene, crest=replace(scene.crest, level_m=level_m))
    if passes:
        check_outlet(*asks)
    else:
        refusal(check_outlet, *asks)


def test_no_data_at_the_outlet_comes_before_all_else(make_job, ground):
    site, scene = asked(make_job(ground.reservoir()))
    valid = scene.terrain.valid.copy()
    valid[20, 60] = False
    terrain = replace(scene.terrain, valid=valid)
    problem = refusal(check_outlet, *outlet_asks(site, scene, terrain=terrain, crest=None))
    assert (problem.key, problem.found) == ("outlet.x", "nodata")


def test_one_cell_for_both_ends_tells_its_size(make_job, ground):
    site, scene = asked(make_job(ground.reservoir()))
    problem = refusal(check_outlet, *outlet_asks(site, scene, ends=((20, 10), (20, 10))))
    assert problem.found == "both in a cell of 10.00 x 10.00 m"


def test_a_point_without_a_key_is_named_by_its_table(make_job, ground):
    site, scene = asked(make_job(ground.reservoir()))
    nameless = replace(site, outlet=replace(site.outlet, at=replace(site.outlet.at, key="")))
    assert refusal(check_outlet, *outlet_asks(nameless, scene, ends=((20, 10), (20, 10)))).key == "outlet"


def test_an_outlet_in_the_water_is_told_apart_from_one_in_a_deeper_bed_and_from_a_saddle_under_water(make_job, ground):
    """Flat water at the outlet; a bed that falls from intake to outlet; a sill between two basins, all under water."""
    said = []
    for sill, floor in ((100.0, 100.0), (95.0, 90.0), (98.0, 92.0)):
        values = ground.reservoir(bank=110.0)
        values[5:35, 2:70] = floor
        values[5:35, 2:30] = 94.0 if floor == 92.0 else max(floor, 96.0)
        values[5:35, 30] = sill
        job = make_job(values, terrain={"water_shown": "bed"}, outlet={"level_m": None})
        with pytest.raises(SiteError) as caught:
            asked(job)
        (problem,) = caught.value.problems
        said.append((problem.key, problem.what.split(":")[0]))
        if sill == 98.0:
            assert "saddle at 98.00 m" in problem.found
            assert problem.allowed == "a level below 98.00 m"
    assert said == [
        ("outlet.x", "The outlet lies in the water."),
        ("outlet.x", "No ground above the water lies between intake and outlet"),
        ("water.present_level_m", "The present level is above a saddle"),
    ]
