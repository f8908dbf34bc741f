"""Running states: against a slow twin, laws, levels, edges. Published siphons are in tests/published."""

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from routing.errors import InputError
from routing.hydraulics import run_at, run_siphon, water_at
from routing.records import Levels, Limits, Losses, Pipe, Profile

WATER = water_at(10.0)
LIMITS = Limits(98_000.0)
PIPE = Pipe.of_bore(0.2, roughness_m=1e-5)
PROFILE = Profile(np.array([0.0, 60.0, 150.0, 300.0]), np.array([99.0, 103.0, 101.0, 90.0]))
LEVELS = Levels(100.0, 90.0, intake_mouth_m=97.0)
BASE = (PIPE, PROFILE, LEVELS, Losses(), WATER, LIMITS)


def run(job):
    return run_siphon(job.pipe, job.profile, *job.case)


def lost_m(job, state):
    """Head lost from end to end, put together from what the state says of itself."""
    losses, head = job.losses, state.velocity_ms**2 / (2 * job.limits.gravity_ms2)
    k = losses.entrance + losses.exit + losses.bends_per_m * job.profile.length_m + sum(k for _, k in losses.fittings)
    return (k + state.valve_loss + state.friction_factor * job.profile.length_m / job.pipe.bore_m) * head


@settings(max_examples=40)
@given(data=st.data())
def test_agrees_with_the_slow_twin(data, any_job, slow_twin):
    job = data.draw(any_job())
    state, twin = run(job), slow_twin(job)
    assert state.energy_discharge_m3s == pytest.approx(twin.energy_discharge(), rel=1e-9)
    assert state.suction_discharge_m3s == pytest.approx(twin.suction_discharge(), rel=1e-9, abs=1e-15)
    assert state.discharge_m3s == min(state.energy_discharge_m3s, state.suction_discharge_m3s)
    if state.discharge_m3s > 0:
        heads = twin.crown_heads(state.discharge_m3s)
        assert state.reserve_left_m == pytest.approx(min(heads), abs=1e-6)
        gauge = np.array(heads[: len(job.profile.chainage_m)]) + job.limits.reserve_m
        pressure = gauge * job.water.density_kgm3 * job.limits.gravity_ms2 + job.water.vapour_pressure_pa
        np.testing.assert_allclose(state.crown_pressure_pa, pressure, rtol=0.0, atol=0.01)


@settings(max_examples=150)
@given(data=st.data())
def test_energy_line_closes(data, any_job):
    job = data.draw(any_job())
    state = run(job)
    if state.runs:
        assert lost_m(job, state) == pytest.approx(state.fall_m, rel=1e-9)
        assert state.valve_loss >= job.losses.valve_open
    else:
        assert state.valve_loss == math.inf
        assert state.reserve_left_m <= 0.0


@settings(max_examples=150)
@given(data=st.data())
def test_no_reserve_is_left_where_suction_governs(data, any_job):
    job = data.draw(any_job(turbulent=True))
    state = run(job)
    assume(state.runs and state.reynolds > 2041)
    weight = job.water.density_kgm3 * job.limits.gravity_ms2
    if state.governs == "suction":
        assert 0.0 <= state.reserve_left_m * weight <= 1.0
        assert state.valve_loss > job.losses.valve_open
    else:
        assert state.reserve_left_m >= 0.0
        assert state.valve_loss == job.losses.valve_open


@settings(max_examples=100)
@given(data=st.data(), rise=st.floats(0.001, 3.0))
def test_more_water_never_runs_less(data, any_job, rise):
    job = data.draw(any_job())
    higher = replace(job, levels=job.levels.at_water(job.levels.water_m + rise))
    assert run(higher).discharge_m3s >= run(job).discharge_m3s * (1 - 1e-12)


@settings(max_examples=60)
@given(data=st.data(), much=st.floats(0.01, 2.0))
def test_each_hindrance_never_runs_more(data, any_job, much):
    job = data.draw(any_job())
    base = run(job).discharge_m3s * (1 + 1e-12)
    profile = job.profile
    hindered = [
        replace(job, limits=replace(job.limits, reserve_m=job.limits.reserve_m + much)),
        replace(job, limits=replace(job.limits, air_pressure_pa=job.limits.air_pressure_pa - 5000 * much)),
        replace(job, losses=replace(job.losses, entrance=job.losses.entrance + much)),
        replace(job, profile=Profile(profile.chainage_m * (1 + much), profile.crown_m), losses=job.losses),
        replace(job, profile=Profile(profile.chainage_m, profile.crown_m + much)),
        replace(job, pipe=replace(job.pipe, outside_diameter_m=job.pipe.bore_m / (1 + much))),
        replace(job, levels=replace(job.levels, tailwater_m=job.levels.outlet_m + much)),
    ]
    for other in hindered:
        if other.pipe.roughness_m <= 0.1 * other.pipe.bore_m:
            assert run(other).discharge_m3s <= base


@settings(max_examples=100)
@given(data=st.data(), share=st.floats(0.0, 1.0))
def test_throttled_state_closes_and_keeps_more_reserve(data, any_job, share):
    job = data.draw(any_job())
    full = run(job)
    assume(full.runs)
    state = run_at(job.pipe, job.profile, *job.case, share * full.discharge_m3s)
    assert state.governs == full.governs
    assert state.reserve_left_m >= full.reserve_left_m - 1e-9
    if share * full.discharge_m3s > 1e-12:
        assert lost_m(job, state) == pytest.approx(state.fall_m, rel=1e-9)
        assert state.discharge_m3s == pytest.approx(share * full.discharge_m3s, rel=1e-12)
        assert state.valve_loss >= full.valve_loss * (1 - 1e-9)


def test_plain_siphon_by_hand():
    # V^2/2g = 10/(1.5 + 0.02*300/0.2) = 0.31746 m; crown at 60 m: 98 kPa, 3 m above the water, 1.5 + 6 heads lost.
    pipe = Pipe.of_bore(0.2, darcy_factor=0.02)
    state = run_siphon(pipe, PROFILE, LEVELS, Losses(), WATER, Limits(98_000.0, reserve_m=0.5))
    head = 10 / 31.5
    assert state.velocity_ms == pytest.approx(math.sqrt(2 * 9.80665 * head))
    assert state.crown_pressure_pa[1] == pytest.approx(98_000 - (3 + 7.5 * head) * WATER.density_kgm3 * 9.80665)
    assert (state.governs, state.lift_m, state.fall_m) == ("energy", 3.0, 10.0)
    assert (state.crest_chainage_m, state.valve_loss, state.friction_factor) == (60.0, 0.0, 0.02)


def test_a_lower_hump_far_along_can_govern():
    profile = Profile(np.array([0.0, 10.0, 900.0, 1000.0]), np.array([99.0, 103.0, 102.5, 80.0]))
    state = run_siphon(PIPE, profile, Levels(100.0, 80.0), Losses(), WATER, LIMITS)
    assert state.crest_chainage_m == 10.0
    assert state.governing_chainage_m == 900.0
    assert state.governs == "suction"
    assert state.suction_discharge_m3s < state.energy_discharge_m3s


def test_no_fall_is_told_as_energy():
    for outlet in (100.0, 101.0):
        state = run_siphon(PIPE, PROFILE, replace(LEVELS, outlet_m=outlet), Losses(), WATER, LIMITS)
        assert (state.discharge_m3s, state.governs, state.friction_factor) == (0.0, "energy", 0.0)
        assert state.breaking_cause == "outlet"
        assert not state.runs


def test_too_high_for_still_water_tells_what_is_missing():
    still_lift = (98_000 - WATER.vapour_pressure_pa) / (WATER.density_kgm3 * 9.80665) - 2.5
    profile = Profile(PROFILE.chainage_m, PROFILE.crown_m + 5.0)
    state = run_siphon(PIPE, profile, LEVELS, Losses(), WATER, LIMITS)
    assert (state.discharge_m3s, state.governs) == (0.0, "suction")
    assert state.reserve_left_m == pytest.approx(still_lift - 8.0)
    assert state.reserve_left_m < 0.0
    # The pressures are those of still water.
    assert state.crown_pressure_pa[1] == pytest.approx(98_000 - 8 * WATER.density_kgm3 * 9.80665)


def test_highest_lift_is_a_flat_cap():
    allowed = run_siphon(PIPE, PROFILE, LEVELS, Losses(), WATER, replace(LIMITS, highest_lift_m=3.25))
    free = run_siphon(*BASE)
    assert allowed.discharge_m3s == free.discharge_m3s
    assert allowed.reserve_left_m == min(free.reserve_left_m, 0.25)
    refused = run_siphon(PIPE, PROFILE, LEVELS, Losses(), WATER, replace(LIMITS, highest_lift_m=2.0))
    assert (refused.discharge_m3s, refused.governs) == (0.0, "suction")
    assert refused.reserve_left_m == pytest.approx(-1.0)
    assert refused.governing_chainage_m == 60.0


# The breaking level is the highest of three; each is put on top in turn. Still water lifts 7.37 m here.
@pytest.mark.parametrize(
    ("crest", "outlet", "mouth", "lift", "cause", "level"),
    [
        (106.0, 90.0, 97.0, None, "suction", None),
        (103.0, 90.0, 90.0, 2.5, "suction", 100.5),
        (103.0, 99.0, 97.0, None, "outlet", 99.0),
        (103.0, 90.0, 98.5, None, "intake", 98.8),
        (103.0, 90.0, None, None, "suction", None),
    ],
)
def test_breaking_level(crest, outlet, mouth, lift, cause, level):
    profile = Profile(np.array([0.0, 60.0, 300.0]), np.array([90.0, crest, 90.0]))
    levels = Levels(100.0, outlet, intake_mouth_m=mouth)
    limits = Limits(98_000.0, highest_lift_m=lift, least_submergence_m=0.3)
    state = run_siphon(PIPE, profile, levels, Losses(), WATER, limits)
    still_lift = (98_000 - WATER.vapour_pressure_pa) / (WATER.density_kgm3 * 9.80665) - 2.5
    assert state.breaking_cause == cause
    assert state.breaking_level_m == pytest.approx(crest - still_lift if level is None else level)


@settings(max_examples=60)
@given(data=st.data())
def test_it_runs_just_above_the_breaking_level_and_not_below(data, any_job):
    job = data.draw(any_job())
    level = run(job).breaking_level_m
    above = replace(job, levels=job.levels.at_water(level + 1e-3))
    below = replace(job, levels=job.levels.at_water(level - 1e-3))
    assert run(above).runs
    assert not run(below).runs


def test_tailwater_takes_the_place_of_a_lower_outlet():
    drowned = run_siphon(PIPE, PROFILE, replace(LEVELS, tailwater_m=95.0), Losses(), WATER, LIMITS)
    raised = run_siphon(PIPE, PROFILE, replace(LEVELS, outlet_m=95.0), Losses(), WATER, LIMITS)
    assert drowned.discharge_m3s == raised.discharge_m3s
    assert drowned.fall_m == 5.0


# -- The jump between laminar and turbulent loss ------------------------------------------------------------------

SMALL = Pipe.of_bore(0.01)
FLAT = Profile(np.array([0.0, 50.0, 100.0]), np.array([99.0, 99.5, 99.0]))


def head_at_jump(factor, losses, length=100.0):
    velocity = 2040 * WATER.kinematic_viscosity_m2s / 0.01
    k = losses.entrance + losses.exit
    return (k + factor * length / 0.01) * velocity**2 / (2 * 9.80665)


def test_energy_inside_the_jump_stays_there_and_the_valve_closes_the_balance():
    losses = Losses()
    low, high = head_at_jump(64 / 2040, losses), head_at_jump(0.0491, losses)
    assert high > 1.5 * low
    discharges = []
    for fall in np.linspace(low * 1.001, high * 0.995, 7):
        job = (SMALL, FLAT, Levels(100.0, 100.0 - fall), losses, WATER, LIMITS)
        state = run_siphon(*job)
        discharges.append(state.discharge_m3s)
        assert state.governs == "energy"
        assert state.reynolds == pytest.approx(2040, rel=1e-9)
        assert state.friction_factor == pytest.approx(64 / 2040, rel=1e-9)
        spent = head_at_jump(64 / 2040, losses)
        head = state.velocity_ms**2 / (2 * 9.80665)
        assert state.valve_loss * head == pytest.approx(fall - spent, rel=1e-6)
        again = run_at(*job, state.discharge_m3s)
        assert again.valve_loss == pytest.approx(state.valve_loss, rel=1e-9)
    assert np.ptp(discharges) <= 1e-15 * discharges[0]
    after = run_siphon(SMALL, FLAT, Levels(100.0, 100.0 - 1.02 * high), losses, WATER, LIMITS)
    assert after.reynolds > 2040
    assert after.valve_loss == 0.0


def test_suction_inside_the_jump_stays_there_with_reserve_left():
    losses = Losses()
    low, high = head_at_jump(64 / 2040, losses, 50.0), head_at_jump(0.0491, losses, 50.0)
    still_lift = (98_000 - WATER.vapour_pressure_pa) / (WATER.density_kgm3 * 9.80665) - 2.5
    profile = Profile(FLAT.chainage_m, np.array([99.0, 100.0 + still_lift - 0.5 * (low + high), 80.0]))
    state = run_siphon(SMALL, profile, Levels(100.0, 80.0), losses, WATER, LIMITS)
    assert state.governs == "suction"
    assert state.reynolds == pytest.approx(2040, rel=1e-9)
    assert 0.1 * low < state.reserve_left_m < high
    assert state.valve_loss > 0.0


def test_fixed_factor_knows_no_jump():
    pipe = replace(SMALL, darcy_factor=0.04)
    falls = np.linspace(0.01, 5.0, 60)
    flows = [run_siphon(pipe, FLAT, Levels(100.0, 100.0 - h), Losses(), WATER, LIMITS).discharge_m3s for h in falls]
    np.testing.assert_allclose(np.array(flows) ** 2 / falls, flows[0] ** 2 / falls[0], rtol=1e-12)


# -- Given discharge ---------------------------------------------------------------------------------------------


def test_still_water_behind_a_shut_valve():
    state = run_at(*BASE, 0.0)
    assert (state.discharge_m3s, state.velocity_ms, state.valve_loss) == (0.0, 0.0, math.inf)
    assert state.crown_pressure_pa[1] == pytest.approx(98_000 - 3 * WATER.density_kgm3 * 9.80665)


@pytest.mark.parametrize("discharge", [5e-324, 1e-310, 1e-200, 1e-30])
def test_next_to_nothing_is_still_water_in_all_but_name(discharge):
    still, state = run_at(*BASE, 0.0), run_at(*BASE, discharge)
    np.testing.assert_allclose(state.crown_pressure_pa, still.crown_pressure_pa, rtol=1e-12)
    assert state.reserve_left_m == pytest.approx(still.reserve_left_m)
    assert state.valve_loss > 1e30


def test_more_than_the_fall_carries_is_refused():
    most = run_siphon(*BASE).energy_discharge_m3s
    assert run_at(*BASE, most).discharge_m3s == pytest.approx(most)
    with pytest.raises(InputError, match="cannot carry") as caught:
        run_at(*BASE, 1.001 * most)
    assert f"{most:.6g}" in str(caught.value)


def test_beyond_the_suction_limit_is_returned_with_what_is_missing():
    profile = Profile(PROFILE.chainage_m, PROFILE.crown_m + np.array([0.0, 3.5, 0.0, 0.0]))
    limit = run_siphon(PIPE, profile, LEVELS, Losses(), WATER, LIMITS)
    assert limit.governs == "suction"
    state = run_at(
        PIPE, profile, LEVELS, Losses(), WATER, LIMITS, 0.5 * (limit.discharge_m3s + limit.energy_discharge_m3s)
    )
    assert state.reserve_left_m < 0.0
    assert state.governs == "suction"
    assert state.governing_chainage_m == 60.0


@pytest.mark.parametrize("discharge", [-1e-9, math.nan, math.inf])
def test_discharges_refused(discharge):
    with pytest.raises(InputError, match="discharge"):
        run_at(*BASE, discharge)


# -- Fittings ----------------------------------------------------------------------------------------------------


def test_a_fitting_acts_from_its_place_on():
    near = run_siphon(PIPE, PROFILE, LEVELS, Losses(fittings=((60.0, 2.0),)), WATER, LIMITS)
    far = run_siphon(PIPE, PROFILE, LEVELS, Losses(fittings=((60.001, 2.0),)), WATER, LIMITS)
    assert near.discharge_m3s == far.discharge_m3s  # energy governs; both count
    drop = 2.0 * near.velocity_ms**2 / (2 * 9.80665) * WATER.density_kgm3 * 9.80665
    assert far.crown_pressure_pa[1] - near.crown_pressure_pa[1] == pytest.approx(drop, rel=1e-6)
    # Between two points of the profile the loss is seen where it acts: just behind this crest, not at the next point.
    peak = Profile(PROFILE.chainage_m, np.array([99.0, 103.0, 95.0, 90.0]))
    behind = run_siphon(PIPE, peak, LEVELS, Losses(fittings=((60.001, 2.0),)), WATER, LIMITS)
    on = run_siphon(PIPE, peak, LEVELS, Losses(fittings=((60.0, 2.0),)), WATER, LIMITS)
    assert behind.governing_chainage_m == 60.001
    assert behind.reserve_left_m == pytest.approx(on.reserve_left_m, abs=1e-3)
    assert behind.crown_pressure_pa.size == 4


def test_a_fitting_beyond_the_end_costs_head_all_the_same():
    beyond = run_siphon(PIPE, PROFILE, LEVELS, Losses(fittings=((400.0, 2.0),)), WATER, LIMITS)
    at_end = run_siphon(PIPE, PROFILE, LEVELS, Losses(exit=3.0), WATER, LIMITS)
    assert beyond.discharge_m3s == pytest.approx(at_end.discharge_m3s, rel=1e-12)


def test_long_profiles_are_quick():
    import time

    chainage = np.linspace(0.0, 3000.0, 2000)
    crown = 100.0 + 4.0 * np.sin(chainage / 300.0) - chainage / 300.0
    job = (PIPE, Profile(chainage, crown), Levels(100.0, 90.0), Losses(), WATER, LIMITS)
    run_siphon(*job)
    best = math.inf
    for _ in range(10):
        start = time.perf_counter()
        run_siphon(*job)
        best = min(best, time.perf_counter() - start)
    assert best < 0.005
