"""One job on the bench: what a discharge means for the search, by hand; routes, their names and their proofs."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from routing.planning.benches import Bench, _corners
from routing.planning.placing import first_window, place_ends
from routing.planning.reports import Reporter
from routing.planning.scenes import survey
from routing.planning.settings import resolve
from routing.search import Found, Limitation, shortest_path
from routing.terrain import open_dem

#: Water at 10 degC: 999.7 kg/m3, vapour pressure 1228 Pa (common tables, from memory).
STILL_M = (101_325.0 - 1228.0) / (999.7 * 9.81) - 2.5


def bench_of(job):
    site = job.site
    with open_dem(site.terrain, site.lines, site.file) as dem:
        ends = place_ends(site, dem)
        scene = survey(site, dem, ends, first_window(site, dem, ends), Reporter())
    return Bench(site, scene, resolve(site, scene), lambda _: None)


@pytest.fixture
def bench(make_job, ground):
    return bench_of(make_job(ground.reservoir(), losses={"bend_loss_per_km": 2.0}))


def head_of(discharge):
    """Velocity head in the bore of 300 mm."""
    return (discharge / (0.25 * math.pi * 0.3**2)) ** 2 / (2 * 9.81)


# ---------------------------------------------------------------- the ceiling


@pytest.mark.parametrize("discharge", [0.0, 0.05, 0.12])
@pytest.mark.parametrize("stretch", [1.0, 1.02])
def test_the_ceiling_of_a_discharge_is_that_of_the_hand(bench, discharge, stretch):
    """The method's formulas with a fixed Darcy factor of 0.02, bends of 0.002 a metre, and a crown 0.31 m up."""
    (pipe,) = bench.site.pipes
    head = head_of(discharge)
    gradient = (0.02 / 0.3 + 0.002) * head
    found = bench.limit_at(pipe, discharge, stretch)
    assert found.ceiling_level_m == pytest.approx(99.0 + STILL_M - 1.5 * head - 0.31, abs=2e-4)
    assert found.ceiling_gradient == pytest.approx(gradient * stretch)
    longest = (9.0 - 1.5 * head) / gradient / stretch if discharge else math.inf
    assert found.longest_m == pytest.approx(longest)
    assert found.cap_level_m == math.inf
    assert (found.rule, found.along) == ("bilinear", True)


@pytest.mark.parametrize("bed", [0.0, -2.0, 1.5])
def test_a_trench_lifts_the_ceiling_over_the_ground_and_supports_lower_it(make_job, ground, bed):
    bench = bench_of(make_job(ground.reservoir(), search={"bed_offset_m": bed}, limits={"highest_lift_m": 5.0}))
    (pipe,) = bench.site.pipes
    assert bench.offset_m(pipe) == pytest.approx(0.31 + bed)
    found = bench.limit_at(pipe, 0.0)
    assert found.ceiling_level_m == pytest.approx(99.0 + STILL_M - 0.31 - bed, abs=2e-4)
    assert found.cap_level_m == pytest.approx(99.0 + 5.0 - 0.31 - bed)


def test_by_the_rule_of_cells_edges_are_held_at_their_far_ends(make_job, ground):
    bench = bench_of(make_job(ground.reservoir(), search={"ground_rule": "cells"}))
    found = bench.limit_at(bench.site.pipes[0], 0.1)
    assert (found.rule, found.along) == ("cells", False)


@pytest.mark.parametrize("top", [101.0, 105.0])
def test_what_a_path_carries_touches_its_ceiling_or_uses_up_the_fall(make_job, ground, top):
    bench = bench_of(make_job(ground.reservoir(top=top)))
    (pipe,) = bench.site.pipes
    flow = bench.flow(pipe)
    path = shortest_path(bench.job, flow.limit_at(0.0)).path
    most = flow.carried_by(path)
    limit = flow.limit_at(most)
    room = limit.ceiling_level_m - limit.ceiling_gradient * path.at_length_m - path.at_level_m
    if top > 104.0:
        assert room.min() == pytest.approx(0.0, abs=1e-9)
        assert most < flow.carried_at_length(path.length_m)
    else:
        assert room.min() > 0.0
        assert most == pytest.approx(flow.carried_at_length(path.length_m))
        assert limit.longest_m == pytest.approx(path.length_m)


# ---------------------------------------------------------------- what the bench lends


def test_the_job_is_that_of_the_scene(bench):
    job, scene = bench.job, bench.scene
    assert (job.source, job.goal) == ((20, 10), (20, 60)) == (scene.intake_cell, scene.outlet_cell)
    assert not job.band.any()  # the window is the whole DEM
    conditions = bench.conditions_at(np.array([[20, 10], [20, 60]]))
    for levels, water_m in ((conditions.lowest, 99.0), (conditions.present, 100.0)):
        assert (levels.water_m, levels.outlet_m, levels.intake_mouth_m) == (water_m, 90.0, 95.0)
    assert (conditions.limits, conditions.losses) == (bench.setting.limits, bench.setting.losses)


def test_the_crown_lies_above_the_long_section(bench, ground):
    path = shortest_path(bench.job, Limitation()).path
    line = bench.section(path)
    profile = bench.profile(bench.site.pipes[0], line)
    np.testing.assert_array_equal(profile.crown_m, line.ground_m + bench.offset_m(bench.site.pipes[0]))
    np.testing.assert_array_equal(profile.chainage_m, line.chainage_m)
    assert profile.length_m == pytest.approx(ground.length(ground.reservoir()[20, 10:61]), rel=1e-6)


# ---------------------------------------------------------------- routes


def found(path, *, proven=True):
    return Found(path, 0.1, 0.11, proven, 3)


def test_one_path_has_one_name_and_another_the_next(bench):
    straight = shortest_path(bench.job, Limitation()).path
    other = shortest_path(replace(bench.job, goal=(25, 60)), Limitation()).path
    names = [bench.route(path, bench.section(path), found(path)).name for path in (straight, other, straight)]
    assert names == ["R1", "R2", "R1"]
    second_pipe = replace(bench)
    assert second_pipe.route(other, bench.section(other), found(other)).name == "R2"


def test_a_route_is_drawn_from_centre_to_centre(bench):
    path = shortest_path(replace(bench.job, goal=(33, 60)), Limitation()).path
    route = bench.route(path, bench.section(path), found(path))
    centres = [(500_000.0 + 10 * (col + 0.5), 5_000_000.0 - 10 * (row + 0.5)) for row, col in path.cells]
    assert route.line.coords[0] == centres[0]
    assert route.line.coords[-1] == centres[-1]
    assert set(route.line.coords) <= set(centres)
    assert len(route.line.coords) < len(centres)
    legs = np.hypot(*np.diff(np.array(centres), axis=0).T)
    assert route.line.length == pytest.approx(legs.sum())


@pytest.mark.parametrize("seed", range(5))
def test_cells_between_corners_lie_on_the_line_between_them(seed):
    rng = np.random.default_rng(seed)
    steps = np.repeat(rng.integers(-2, 3, (6, 2)), rng.integers(1, 4, 6), axis=0)
    cells = np.cumsum(np.concatenate([[[0, 0]], steps]), axis=0)
    kept = _corners(cells)
    turns = [i for i in range(1, len(steps)) if not np.array_equal(steps[i], steps[i - 1])]
    np.testing.assert_array_equal(kept, cells[[0, *turns, len(cells) - 1]])


def test_a_path_of_two_cells_has_two_corners():
    np.testing.assert_array_equal(_corners(np.array([[3, 4], [3, 5]])), [[3, 4], [3, 5]])


@pytest.mark.parametrize(("proven", "where"), [(True, "on the whole DEM"), (False, "inside the part")])
def test_the_proof_tells_bracket_lengths_and_where_it_holds(make_job, ground, proven, where):
    values = np.vstack([ground.reservoir(), np.full((200, 80), 90.0)])  # taller than the first window
    bench = bench_of(make_job(values))
    path = shortest_path(bench.job, Limitation()).path
    proof = bench.route(path, bench.section(path), found(path, proven=proven)).proof
    assert proof.whole_dem == proven
    assert (proof.discharge_low_m3s, proof.discharge_high_m3s) == (0.1, 0.11)
    assert proof.graph_length_m == path.length_m
    assert proof.straight_m == pytest.approx(math.hypot(500 / 0.9996, 10.0), rel=1e-6)
    assert proof.free_ratio == pytest.approx(1.0275, abs=1e-4)  # 16 neighbours: 1 / cos(half of 26.57 degrees)
    for words in (where, "16 neighbours", "0.11 m3/s", f"{path.length_m:.1f} m long", f"{proof.straight_m:.1f} m."):
        assert words in proof.text


def test_a_window_that_is_the_whole_dem_proves_for_the_whole_dem(bench):
    path = shortest_path(bench.job, Limitation()).path
    assert bench.route(path, bench.section(path), found(path, proven=False)).proof.whole_dem
