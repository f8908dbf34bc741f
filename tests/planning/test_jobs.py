"""Thirteen siphon jobs on three real grids (origin and licences: tests/data/README.md).

The lowest possible crests in cases.json were worked out by independent code, exactly for the bilinear surface.
"""

import json
from pathlib import Path

import numpy as np
import pytest

import routing
from routing.planning.benches import Bench
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.planning.settings import resolve
from routing.search import largest_discharge, shortest_path
from routing.terrain import open_dem

DATA = Path(__file__).parent.parent / "data"
CASES = json.loads((DATA / "cases.json").read_text())["cases"]
BY_ID = {case["id"]: case for case in CASES}

SITE = """
title = "{id}"
[terrain]
file = "{dem}"
vertical_unit = "m"
surface = "ground"
water_shown = "bed"
vertical_error_90_m = 0.1
[air]
altitude_m = {water_level_m}
[water]
present_level_m = {water_level_m}
lowest_level_m = {water_level_m}
[intake]
x = {intake_xy[0]}
y = {intake_xy[1]}
[outlet]
x = {outlet_xy[0]}
y = {outlet_xy[1]}
[limits]
least_submergence_m = 0.0
reserve_m = {reserve_m}
[[pipes]]
table = "ISO 4427"
material = "PE100"
outside_diameter_mm = 315.0
sdr = 11.0
"""


def site_of(case, folder, reserve_m=2.5):
    values = case | {"dem": (DATA / case["dem"]).as_posix(), "reserve_m": reserve_m}
    file = folder / "site.toml"
    file.write_text(SITE.format(**values))
    return routing.load_site(file)


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["id"])
def test_the_lowest_crest_is_that_of_independent_code(case, tmp_path):
    outlook = routing.look(site_of(case, tmp_path))
    assert outlook.lowest_crest.level_m == pytest.approx(case["minimax_crest_bilinear_m"], abs=0.05)
    assert outlook.lowest_crest.proven
    assert outlook.water_body.cells.sum() == case["lake_cells"]
    assert outlook.water_body.touches_edge == case["lake_touches_edge"]


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["id"])
def test_routes_and_verdicts(case, tmp_path):
    """Feasible and impossible jobs get their verdicts at the usual reserve of 2.5 m.

    Of the marginal ones a lift within 2.5 m of boiling is unfit, however little is missing.
    """
    plan = routing.plan(site_of(case, tmp_path))
    best = plan.schemes[0]
    assert all(scheme.route.crest_m >= case["minimax_crest_bilinear_m"] - 1e-6 for scheme in plan.schemes)
    assert best.route.length_m >= case["straight_line_m"] * (1 - 2e-3)  # that figure is a map distance
    assert best.route.proof.whole_dem
    if case["suction_class_bilinear"] == "feasible":
        assert best.verdict.grade == "caution"  # some checks are not made yet
        assert best.verdict.grade_of_made != "unfit"
        assert plan.feasible
        assert not plan.shortfalls
        assert best.appraisal.reserve_left_m >= -1e-6
        assert best.appraisal.discharge_m3s == pytest.approx(best.route.proof.discharge_low_m3s, rel=0.01)
        assert best.appraisal.discharge_m3s <= best.route.proof.discharge_high_m3s * 1.005
    else:
        assert best.verdict.grade == "unfit"
        assert best.verdict.governing.name == "suction"
        assert not plan.feasible
        missing = plan.shortfalls[0]
        assert missing.cause == "suction"
        assert missing.raise_m == pytest.approx(-best.appraisal.reserve_left_m, abs=0.01)
        # By hand: crest + pipe above it - water - (air head - vapour head - reserve); the air is that of the
        # standard atmosphere less 3 kPa, and no route needs less than the lowest crest does.
        head = case["atm_minus_vapour_head_m"] - 3000 / (999.7 * 9.80665)
        crown = best.pipe.outside_diameter_m - best.pipe.wall_m
        least = case["minimax_crest_bilinear_m"] + crown - case["water_level_m"] - (head - 2.5)
        assert missing.raise_m == pytest.approx(least, abs=0.1)
        assert missing.raise_m >= least - 0.03


@pytest.mark.parametrize("name", ["R01d", "R05c"])
def test_marginal_jobs_are_cautions_with_a_smaller_reserve(name, tmp_path):
    plan = routing.plan(site_of(BY_ID[name], tmp_path, reserve_m=1.2))
    best = plan.schemes[0]
    assert best.verdict.grade == "caution"
    lift = {check.name: check for check in best.verdict.checks}["lift_share"]
    assert lift.grade == "caution"
    assert lift.figure > 0.65


def test_the_straight_way_fails_and_a_detour_works(tmp_path):
    case = BY_ID["R01c"]
    best = routing.plan(site_of(case, tmp_path)).schemes[0]
    assert case["straight_chord_lift_m"] > 10  # no siphon there
    assert best.appraisal.lift_m < 6
    assert best.route.length_m > 1.15 * case["straight_line_m"]


def test_steps_on_the_graph_and_long_section_agree(tmp_path):
    """The sampled long section is a little longer than the path from centre to centre, never shorter."""
    for name in ("R01a", "R04a", "R05a"):
        route = routing.plan(site_of(BY_ID[name], tmp_path)).schemes[0].route
        assert 1.0 - 1e-9 <= route.length_m / route.proof.graph_length_m < 1.03


def test_one_job_in_utm_and_in_web_mercator(tmp_path):
    """The same ground in two CRSs gives the same lengths: map distances in EPSG:3857 are 1.45 times too long here."""
    import rasterio
    from rasterio.warp import Resampling, calculate_default_transform, reproject, transform

    case = BY_ID["R01a"]
    other = tmp_path / "mercator.tif"
    with rasterio.open(DATA / case["dem"]) as source:
        affine, cols, rows = calculate_default_transform(
            source.crs, "EPSG:3857", source.width, source.height, *source.bounds
        )
        ground = np.full((rows, cols), -9999.0, dtype=np.float32)
        reproject(
            source.read(1),
            ground,
            src_transform=source.transform,
            src_crs=source.crs,
            src_nodata=source.nodata,
            dst_transform=affine,
            dst_crs="EPSG:3857",
            dst_nodata=-9999.0,
            resampling=Resampling.bilinear,
        )
        ends = [case["intake_xy"], case["outlet_xy"]]
        xs, ys = transform(source.crs, "EPSG:3857", *zip(*ends, strict=True))
    profile = {"driver": "GTiff", "height": rows, "width": cols, "count": 1, "dtype": "float32"}
    with rasterio.open(other, "w", **profile, crs="EPSG:3857", transform=affine, nodata=-9999.0) as target:
        target.write(ground, 1)
    moved = case | {"intake_xy": [xs[0], ys[0]], "outlet_xy": [xs[1], ys[1]]}
    found = []
    for name, job, dem in (("utm", case, DATA / case["dem"]), ("mercator", moved, other)):
        file = tmp_path / f"{name}.toml"
        text = SITE.format(**(job | {"dem": dem.as_posix(), "reserve_m": 2.5}))
        # One outlet level for both: the cell it lies in is not the same ground after resampling.
        file.write_text(text.replace("[limits]", f"level_m = {case['outlet_ground_m']}\n[limits]"))
        found.append(routing.plan(routing.load_site(file)).schemes[0])
    one, two = found
    assert two.route.length_m == pytest.approx(one.route.length_m, rel=0.005)
    assert two.appraisal.discharge_m3s == pytest.approx(one.appraisal.discharge_m3s, rel=0.005)
    assert two.route.line.length > 1.4 * two.route.length_m


@pytest.mark.parametrize("case", ["R01c", "R04a", "R05a"])
def test_what_the_search_says_is_carried_is_found_again_a_billionth_lower(case, tmp_path):
    """Where suction governs: the samples of a path tell up to some 1e-4 more than the search lets through."""
    site = site_of(BY_ID[case], tmp_path)
    with open_dem(site.terrain, site.lines, site.file) as dem:
        ends = place_ends(site, dem)
        scene = survey(site, dem, ends, first_window(site, dem, ends), Reporter())
    bench = Bench(site, scene, resolve(site, scene), lambda _: None)
    flow = bench.flow(site.pipes[0])
    best = largest_discharge(bench.job, flow, tolerance=site.search.tolerance)
    assert best.low < 0.95 * flow.carried_at_length(best.path.length_m)
    assert shortest_path(bench.job, flow.limit_at(best.low * (1.0 - 1e-9))).path is not None
    assert best.low * (1.0 - 1e-12) <= flow.carried_by(best.path) <= best.low * (1.0 + 5e-4)
