"""The suction ceiling and its inverse: consistent with the running state and with each other."""

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from routing.errors import InputError
from routing.hydraulics import discharge_under, energy_discharge_m3s, run_at, run_siphon, suction_ceiling, water_at
from routing.records import Levels, Limits, Losses, Pipe

WATER = water_at(10.0)
CASE = (Levels(100.0, 90.0), Losses(), WATER, Limits(98_000.0))
PIPE = Pipe.of_bore(0.2, roughness_m=1e-5)


def clearance(ceiling, profile):
    return ceiling.level_m - ceiling.gradient * profile.chainage_m - profile.crown_m


@settings(max_examples=150)
@given(data=st.data())
def test_profile_touches_the_ceiling_of_its_suction_discharge(data, any_job):
    job = data.draw(any_job(fittings=False, turbulent=True))
    state = run_siphon(job.pipe, job.profile, *job.case)
    assume(state.suction_discharge_m3s > 0.0)
    ceiling = suction_ceiling(job.pipe, *job.case, state.suction_discharge_m3s)
    if state.reynolds > 2041 or state.governs == "energy":
        velocity = state.suction_discharge_m3s / job.pipe.area_m2
        at_jump = velocity * job.pipe.bore_m / job.water.kinematic_viscosity_m2s < 2041
        low = clearance(ceiling, job.profile).min()
        assert low == pytest.approx(0.0, abs=1e-9) or (at_jump and low >= 0.0)
    if state.governs == "suction":
        touching = int(np.argmin(clearance(ceiling, job.profile)))
        assert clearance(ceiling, job.profile)[touching] == pytest.approx(state.reserve_left_m, abs=1e-9)


@settings(max_examples=100)
@given(data=st.data(), share=st.floats(0.0, 1.0))
def test_clearance_is_the_reserve_along_the_whole_line(data, any_job, share):
    job = data.draw(any_job(fittings=False))
    full = run_siphon(job.pipe, job.profile, *job.case)
    state = run_at(job.pipe, job.profile, *job.case, share * full.discharge_m3s)
    ceiling = suction_ceiling(job.pipe, *job.case, state.discharge_m3s)
    weight = job.water.density_kgm3 * job.limits.gravity_ms2
    reserve = (state.crown_pressure_pa - job.water.vapour_pressure_pa) / weight - job.limits.reserve_m
    np.testing.assert_allclose(clearance(ceiling, job.profile), reserve, rtol=0.0, atol=1e-9)


@settings(max_examples=100)
@given(data=st.data())
def test_longest_pipe_is_the_length_whose_energy_discharge_it_is(data, any_job):
    job = data.draw(any_job())
    length = job.profile.length_m
    discharge = energy_discharge_m3s(job.pipe, length, *job.case)
    ceiling = suction_ceiling(job.pipe, *job.case, discharge)
    at_jump = abs(discharge / job.pipe.area_m2 * job.pipe.bore_m / job.water.kinematic_viscosity_m2s - 2040) < 1e-3
    assert ceiling.longest_m >= length * (1 - 1e-9)
    if not at_jump:
        assert ceiling.longest_m == pytest.approx(length, rel=1e-9)


@settings(max_examples=150)
@given(data=st.data())
def test_discharge_under_is_the_inverse_of_the_ceiling(data, any_job):
    job = data.draw(any_job())
    profile = job.profile
    found = discharge_under(job.pipe, *job.case, profile.chainage_m, profile.crown_m, profile.length_m)
    assume(found > 0.0)
    ceiling = suction_ceiling(job.pipe, *job.case, found)
    assert clearance(ceiling, profile).min() >= -1e-9
    assert ceiling.longest_m >= profile.length_m * (1 - 1e-9)
    more = suction_ceiling(job.pipe, *job.case, found * (1 + 1e-7))
    assert clearance(more, profile).min() < 0.0 or more.longest_m < profile.length_m
    # Never more than the line itself can run, and the same where it has no fittings.
    state = run_siphon(job.pipe, profile, *job.case)
    assert found <= state.discharge_m3s * (1 + 1e-12)
    if not job.losses.fittings:
        assert found == pytest.approx(state.discharge_m3s, rel=1e-12)


@settings(max_examples=60)
@given(data=st.data(), much=st.floats(0.0, 2.0))
def test_discharge_under_falls_with_higher_ground_and_greater_length(data, any_job, much):
    job = data.draw(any_job())
    at, crown, length = job.profile.chainage_m, job.profile.crown_m, job.profile.length_m
    base = discharge_under(job.pipe, *job.case, at, crown, length) * (1 + 1e-12)
    assert discharge_under(job.pipe, *job.case, at, crown + much, length) <= base
    assert discharge_under(job.pipe, *job.case, at + much, crown, length) <= base
    assert discharge_under(job.pipe, *job.case, at, crown, length * (1 + much)) <= base


def test_order_of_points_does_not_matter():
    rng = np.random.default_rng(5)
    at, crown = rng.uniform(0, 500, 1000), rng.uniform(95, 104, 1000)
    order = rng.permutation(1000)
    found = discharge_under(PIPE, *CASE, at, crown, 500.0)
    assert 0 < found == discharge_under(PIPE, *CASE, at[order], crown[order], 500.0)


def test_without_points_the_energy_limit_is_left():
    none = np.array([])
    assert discharge_under(PIPE, *CASE, none, none, 300.0) == energy_discharge_m3s(PIPE, 300.0, *CASE)


def test_nothing_under_a_broken_limit():
    at = np.array([10.0])
    assert discharge_under(PIPE, *CASE, at, np.array([108.0]), 300.0) == 0.0
    capped = (*CASE[:3], replace(CASE[3], highest_lift_m=2.0))
    assert discharge_under(PIPE, *capped, at, np.array([102.001]), 300.0) == 0.0
    assert discharge_under(PIPE, *capped, at, np.array([102.0]), 300.0) > 0.0
    level = (Levels(100.0, 100.0), *CASE[1:])
    assert discharge_under(PIPE, *level, at, np.array([101.0]), 300.0) == 0.0


def test_still_water_has_a_flat_ceiling():
    ceiling = suction_ceiling(PIPE, *CASE, 0.0)
    still_lift = (98_000 - WATER.vapour_pressure_pa) / (WATER.density_kgm3 * 9.80665) - 2.5
    assert ceiling.level_m == pytest.approx(100.0 + still_lift)
    assert (ceiling.gradient, ceiling.cap_m, ceiling.longest_m) == (0.0, math.inf, math.inf)
    assert suction_ceiling(PIPE, Levels(100.0, 100.0), *CASE[1:], 0.0).longest_m == -math.inf


def test_cap_fittings_and_bends_by_hand():
    losses = Losses(entrance=0.5, exit=1.0, valve_open=0.2, bends_per_m=0.01, fittings=((30.0, 0.3), (900.0, 0.4)))
    pipe = Pipe.of_bore(0.2, darcy_factor=0.02)
    limits = Limits(98_000.0, highest_lift_m=6.0)
    head = 0.25
    discharge = math.sqrt(2 * 9.80665 * head) * math.pi * 0.01
    ceiling = suction_ceiling(pipe, Levels(100.0, 90.0), losses, WATER, limits, discharge)
    still_lift = (98_000 - WATER.vapour_pressure_pa) / (WATER.density_kgm3 * 9.80665) - 2.5
    assert ceiling.level_m == pytest.approx(100.0 + still_lift - (1 + 0.5 + 0.3 + 0.4) * head)
    assert ceiling.gradient == pytest.approx((0.02 / 0.2 + 0.01) * head)
    assert ceiling.cap_m == 106.0
    assert ceiling.longest_m == pytest.approx((10 / head - (0.5 + 1.0 + 0.2 + 0.7)) / 0.11)
    assert ceiling.discharge_m3s == pytest.approx(discharge)


def test_impossible_discharge_has_a_negative_longest_pipe():
    assert suction_ceiling(PIPE, *CASE, 10.0).longest_m < 0.0
    smooth = Pipe.of_bore(0.2, darcy_factor=0.0)
    assert suction_ceiling(smooth, *CASE, 10.0).longest_m == -math.inf
    assert suction_ceiling(smooth, *CASE, 0.01).longest_m == math.inf


def test_ceiling_falls_as_discharge_grows():
    ceilings = [suction_ceiling(PIPE, *CASE, q) for q in np.linspace(0.0, 0.2, 41)]
    assert (np.diff([c.level_m for c in ceilings]) < 0).all()
    assert (np.diff([c.gradient for c in ceilings]) > 0).all()
    assert (np.diff([c.longest_m for c in ceilings[1:]]) < 0).all()


@pytest.mark.parametrize(
    ("call", "words"),
    [
        (lambda: suction_ceiling(PIPE, *CASE, -1.0), "discharge"),
        (lambda: energy_discharge_m3s(PIPE, -1.0, *CASE), "length of the pipe"),
        (lambda: energy_discharge_m3s(PIPE, math.nan, *CASE), "length of the pipe"),
        (lambda: discharge_under(PIPE, *CASE, np.zeros(2), np.zeros(3), 1.0), "do not match"),
        (lambda: discharge_under(PIPE, *CASE, np.array([-1.0]), np.zeros(1), 1.0), "negative"),
        (lambda: discharge_under(PIPE, *CASE, np.zeros(1), np.array([np.nan]), 1.0), "not finite"),
    ],
)
def test_refusals(call, words):
    with pytest.raises(InputError, match=words):
        call()


def test_a_thousand_points_take_under_a_millisecond():
    import time

    at = np.linspace(0.0, 3000.0, 1000)
    crown = 100.0 + 4.0 * np.sin(at / 300.0)
    best = math.inf
    for _ in range(20):
        start = time.perf_counter()
        discharge_under(PIPE, *CASE, at, crown, 3000.0)
        best = min(best, time.perf_counter() - start)
    assert best < 0.001
