"""Ends left open on real ground (origin and licences: tests/data/README.md); levels and places are invented."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from skimage.morphology import reconstruction

import routing
from routing.errors import SiteError
from routing.planning.benches import Bench
from routing.planning.candidates import offer_of
from routing.planning.edges import outer_edge
from routing.planning.outlets import DRAIN_TOLERANCE_M, drains
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.planning.settings import resolve
from routing.terrain import open_dem

DATA = Path(__file__).parent.parent / "data"
CASES = {case["id"]: case for case in json.loads((DATA / "cases.json").read_text())["cases"]}

SITE = """
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
{intake}
[outlet]
{outlet}
[limits]
least_submergence_m = 0.0
{rest}
[[pipes]]
table = "ISO 4427"
material = "PE100"
outside_diameter_mm = 315.0
sdr = 11.0
"""


@pytest.fixture
def site_of(tmp_path):
    def write(name, intake="", outlet=None, rest=""):
        case = CASES[name]
        x, y = case["outlet_xy"]
        ends = {"intake": intake, "outlet": outlet or f"x = {x}\ny = {y}", "rest": rest}
        file = tmp_path / "site.toml"
        file.write_text(SITE.format(**(case | ends | {"dem": (DATA / case["dem"]).as_posix()})))
        return routing.load_site(file)

    return write


def bench_of(site):
    with open_dem(site.terrain, site.lines, site.file) as dem:
        ends = place_ends(site, dem)
        scene = survey(site, dem, ends, first_window(site, dem, ends), Reporter())
    return Bench(site, scene, resolve(site, scene), lambda _: None)


def best_of(bench):
    (found,) = offer_of(bench, bench.site.pipes[0]).candidates
    return found


def with_points(bench, source, goal, axis_m):
    scene = replace(bench.scene, intakes=None, outlets=None, intake_cell=source, outlet_cell=goal)
    setting = bench.setting
    levels = {name: replace(getattr(setting, name), outlet_m=axis_m) for name in ("present", "lowest")}
    return replace(bench, scene=scene, setting=replace(setting, **levels), names={})


@pytest.mark.parametrize("name", ["R04a", "R05a"])
def test_a_measured_shore_is_the_best_of_separate_plans(site_of, name):
    """A ridge on 90 m cells, and a crater on 10 m cells: all cells near the one chosen, and 50 others."""
    bench = bench_of(site_of(name, intake='kind = "shore"'))
    axis, goal = bench.setting.lowest.outlet_m, bench.scene.outlet_cell
    best, cells = best_of(bench), bench.scene.intakes.cells
    near = np.flatnonzero(np.abs(cells - best.route.cells[0]).max(axis=1) <= 3)
    others = np.random.default_rng(9).choice(len(cells), 50, replace=False)
    single = []
    for row, col in cells[np.union1d(near, others)]:
        alone = best_of(with_points(bench, (int(row), int(col)), goal, axis))
        single.append(alone.appraisal.discharge_m3s)
    assert len(single) > 50
    assert best.appraisal.discharge_m3s == pytest.approx(max(single), rel=2e-3)


def test_an_outlet_anywhere_outside_a_crater(site_of):
    """No cell near the one chosen, and none of many others, has a shorter route for the duty."""
    outlet = 'kind = "anywhere"\nbeyond_toe_m = 40.0'
    bench = bench_of(site_of("R05a", outlet=outlet, rest="[demand]\ndischarge_m3s = 0.25\nmost_pipes = 1"))
    best = best_of(bench)
    places = bench.scene.outlets
    chosen = best.route.cells[-1]
    near = np.flatnonzero(np.abs(places.cells - chosen).max(axis=1) <= 6)
    others = np.random.default_rng(8).choice(len(places.cells), 80, replace=False)
    lengths = []
    for k in np.union1d(near, others):
        cell = int(places.cells[k, 0]), int(places.cells[k, 1])
        alone = offer_of(
            with_points(bench, bench.scene.intake_cell, cell, float(places.axis_m[k])), bench.site.pipes[0]
        )
        if alone.shortfall is None:
            lengths += [one.route.proof.graph_length_m for one in alone.candidates]
    assert len(lengths) > 100
    assert best.route.proof.graph_length_m == pytest.approx(min(lengths), rel=1e-6)
    assert best.appraisal.largest.energy_discharge_m3s >= 0.25


@pytest.mark.parametrize(("name", "dry"), [("R01a", 0.25), ("R04a", 0.25), ("R05a", 0.95)])
def test_ground_that_drains_is_that_of_another_flooding(site_of, name, dry):
    """Held against scikit-image's reconstruction by erosion, which knows the cells alone.

    Between opposite corners of a patch the bilinear ground may rise above the cells: a few cells more are hollows then.
    """
    scene = bench_of(site_of(name, outlet=None if name == "R01a" else 'kind = "anywhere"')).scene
    level, edge = scene.grid.level, outer_edge(scene.terrain)
    seed = np.where(edge, level, level.max())
    filled = reconstruction(seed, level, method="erosion", footprint=np.ones((3, 3)))
    by_cells = filled <= level + DRAIN_TOLERANCE_M
    found = drains(scene.grid, edge)
    assert not np.any(found & ~by_cells)
    assert np.mean(found != by_cells) < 0.02
    assert np.mean(found) > dry


def test_potholes_are_no_place_for_an_outlet(site_of):
    with pytest.raises(SiteError, match="closed hollows") as caught:
        bench_of(site_of("R01a", outlet='kind = "anywhere"'))
    assert "x 429374.8, y 5150601.9" in caught.value.problems[0].found


def test_a_whole_plan_with_both_ends_open(site_of):
    shore = 'kind = "shore"\nunderwater_length_m = 10.0'
    plan = routing.plan(site_of("R05a", intake=shore, outlet='kind = "anywhere"\nbeyond_toe_m = 20.0'))
    best = plan.schemes[0]
    assert plan.feasible
    assert best.route.proof.whole_dem
    assert best.route.underwater_length_m == 10.0
    assert best.route.length_m == pytest.approx(best.route.proof.graph_length_m, rel=0.03)
    assert [note.split()[0] for note in plan.choice_notes] == ["Intake", "Outlet"]
    assert all("Second best" in note for note in plan.choice_notes)
    seen = [scheme.route.outlet_m for scheme in plan.schemes]
    for scheme, outlet in zip(plan.schemes, seen, strict=True):
        row, col = scheme.route.cells[-1]
        assert outlet == plan.terrain.elevation_m[row, col]
        assert scheme.appraisal.fall_m == pytest.approx(plan.setting.lowest.water_m - outlet)
