"""Appraisal of a pipe on a long section: offsets, high points, throttling to the duty, levels."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.signal import find_peaks

from routing.errors import InputError
from routing.hydraulics import collapse_pressure_pa, pe_pipe, steel_pipe
from routing.records import Levels, Pipe, Profile
from routing.schemes import crown_offset_m, high_points_m

FT = 0.3048


def test_crown_of_a_pipe_that_lies_on_the_ground():
    # 219.1 x 8 mm: the top of the bore is one wall below the top of the pipe.
    assert crown_offset_m(steel_pipe(219.1, 8.0), 0.0) == pytest.approx(0.2191 - 0.008)
    assert crown_offset_m(steel_pipe(219.1, 8.0), -0.5) == pytest.approx(0.2111 - 0.5)
    assert crown_offset_m(Pipe.of_bore(0.2), 0.1) == pytest.approx(0.3)


@pytest.mark.parametrize("sdr", [11.0, 17.0, 26.0])
def test_crown_is_underside_and_wall_and_bore(sdr):
    pipe = pe_pipe(315.0, sdr, temperature_c=20.0, load_hours=100.0)
    assert crown_offset_m(pipe, 0.3) == pytest.approx(0.3 + pipe.wall_m + pipe.bore_m)


# -- High points -------------------------------------------------------------------------------------------------


def profile(*crown):
    return Profile(np.arange(float(len(crown))), np.array(crown, dtype=float))


@settings(max_examples=400)
@given(
    crown=st.lists(st.integers(-300, 300), min_size=2, max_size=60, unique=True),
    dip=st.integers(0, 200),
    above=st.integers(-300, 300),
)
def test_high_points_are_scipys_peaks_of_that_prominence(crown, dip, above):
    made = profile(*crown)
    peaks, facts = find_peaks(made.crown_m, prominence=0.0)
    expected = [
        float(at)
        for at, prominence in zip(peaks, facts["prominences"], strict=True)
        if prominence > dip and crown[at] > above and at != made.crest_index
    ]
    assert high_points_m(made, above, dip) == tuple(expected)


@pytest.mark.parametrize(
    ("crown", "found"),
    [
        ((0, 5, 1, 3, 0), (3.0,)),
        ((0, 3, 1, 5, 0), (1.0,)),
        ((0, 5, 1, 1.4, 0), ()),  # a dip of 0.4 m does not part
        ((0, 5, 1, 3, 3, 3, 0), (3.0,)),  # a flat top counts once
        ((0, 5, 5, 0), ()),
        ((3, 0, 5, 0), ()),  # the intake is no high point
        ((0, 5, 0, 3), ()),  # nor is the outlet
        ((0, 5, 0, -1, -0.2, -2), ()),  # under water
        ((0, 5, 1, 3, 0, 4, 0), (3.0, 5.0)),
        ((0, 1, 2, 3, 4), ()),
    ],
)
def test_high_points_of_made_profiles(crown, found):
    assert high_points_m(profile(*crown), 0.5, 0.5) == found


@settings(max_examples=100)
@given(
    crown=st.lists(st.floats(-5, 5), min_size=2, max_size=40),
    dip=st.floats(0, 3),
    more=st.floats(0, 3),
    above=st.floats(-5, 5),
)
def test_a_larger_dip_never_finds_more(crown, dip, more, above):
    made = profile(*crown)
    assert set(high_points_m(made, above, dip + more)) <= set(high_points_m(made, above, dip))


# -- Duty --------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("share", [0.2, 0.7, 0.99])
def test_duty_throttles(job_of, share):
    job = job_of()
    largest = job.appraise().largest
    found = job.appraise(share * largest.discharge_m3s)
    assert found.largest.discharge_m3s == largest.discharge_m3s
    assert found.duty.discharge_m3s == pytest.approx(share * largest.discharge_m3s)
    assert found.duty.valve_loss > found.largest.valve_loss
    assert found.reserve_left_m > found.largest.reserve_left_m
    assert np.all(found.crown_pressure_pa > found.largest.crown_pressure_pa)
    assert found.least_inside_pressure_pa == found.duty.crown_pressure_pa.min()


def test_no_duty_or_one_beyond_the_fall_runs_as_hard_as_it_may(job_of):
    job = job_of()
    free = job.appraise()
    assert free.duty == free.largest
    beyond = job.appraise(1.001 * free.largest.energy_discharge_m3s)
    assert beyond.duty.discharge_m3s == beyond.largest.discharge_m3s
    assert beyond.duty_m3s > beyond.discharge_m3s


@settings(max_examples=60)
@given(share=st.floats(0.05, 0.95))
def test_what_is_missing_beyond_the_suction_limit_is_metres_of_crown_water_or_reserve(share, job_of):
    job = job_of(crown_m=(98.0, 105.6, 102.0, 93.0))
    largest = job.appraise().largest
    assert largest.governs == "suction"
    low, high = largest.suction_discharge_m3s, largest.energy_discharge_m3s
    duty = low + share * (high - low)
    missing = -job.appraise(duty).reserve_left_m
    assert missing > 0.0
    lowered = replace(job, crown_m=tuple(z - missing for z in job.crown_m))
    risen = replace(job, lowest=job.lowest.at_water(job.lowest.water_m + missing))
    assert lowered.appraise(duty).reserve_left_m == pytest.approx(0.0, abs=1e-9)
    assert risen.appraise(duty).reserve_left_m == pytest.approx(0.0, abs=1e-9)
    # With that much more water the duty is the largest discharge, if the fall still is the larger limit.
    assert risen.appraise().discharge_m3s == pytest.approx(duty, rel=1e-9)
    slack = replace(job, limits=replace(job.limits, reserve_m=max(0.0, job.limits.reserve_m - missing)))
    expected = max(0.0, missing - job.limits.reserve_m)
    assert slack.appraise(duty).reserve_left_m == pytest.approx(-expected, abs=1e-9)


@given(change=st.floats(-2.5, 5.0))
def test_reserve_left_falls_one_for_one_with_the_reserve_asked(change, job_of):
    job = job_of()
    duty = 0.05
    other = replace(job, limits=replace(job.limits, reserve_m=2.5 + change))
    assert other.appraise(duty).reserve_left_m == pytest.approx(job.appraise(duty).reserve_left_m - change)


def test_bad_duty_is_refused(job_of):
    for duty in (-0.1, float("nan")):
        with pytest.raises(InputError, match="discharge"):
            job_of().appraise(duty)


# -- Levels and limits -------------------------------------------------------------------------------------------


def test_appraised_at_the_lowest_level_with_the_present_one_beside_it(job_of):
    found = job_of().appraise(0.1)
    assert found.lift_m == pytest.approx(104.8 - 98.8)
    assert found.fall_m == pytest.approx(98.8 - 93.0)
    assert found.present.lift_m == pytest.approx(104.8 - 101.2)
    assert found.present.fall_m == pytest.approx(101.2 - 93.0)
    assert found.present.discharge_m3s > found.discharge_m3s


def test_tailwater_above_the_outlet_takes_from_the_fall(job_of):
    drowned = job_of(lowest=Levels(98.8, 93.0, 95.0, 98.0)).appraise()
    low = job_of(lowest=Levels(98.8, 93.0, 92.0, 98.0)).appraise()
    assert drowned.fall_m == pytest.approx(3.8)
    assert low.fall_m == pytest.approx(5.8)


def test_wall_and_air_are_those_of_the_job(job_of):
    job = job_of()
    found = job.appraise()
    assert found.collapse_pressure_pa == collapse_pressure_pa(job.pipe)
    assert found.barometric_head_m == pytest.approx(97_070.0 / (job.water.density_kgm3 * 9.80665))
    assert replace(job, pipe=Pipe.of_bore(0.25)).appraise().collapse_pressure_pa is None


def test_high_points_count_from_the_lowest_level(job_of):
    job = job_of(chainage_m=(0.0, 30.0, 60.0, 90.0, 115.0), crown_m=(98.0, 104.8, 97.0, 100.0, 93.0))
    assert job.appraise().high_points == (90.0,)
    high = replace(job, lowest=Levels(100.5, 93.0, None, 98.0))
    assert high.appraise().high_points == ()


def test_a_line_that_the_inlet_leg_cannot_feed_runs_throttled(throttling):
    found = throttling.appraise()
    assert found.governs == "suction"
    assert found.discharge_m3s / FT**3 == pytest.approx(10.009, rel=0.003)
    assert found.valve_loss > 0.0
    assert found.reserve_left_m == pytest.approx(0.0, abs=1e-9)
    open_ = throttling.appraise(11.74 * FT**3 * 0.999)
    assert open_.reserve_left_m < 0.0
    assert open_.valve_loss == found.valve_loss


def test_full_bore_that_would_part_the_column_lacks_metres(parting):
    found = parting.appraise(95.2 * FT**3)
    # 33.9 - 35.0 ft absolute at 95.3 ft3/s.
    assert found.reserve_left_m == pytest.approx(-1.1 * FT, abs=0.1 * FT)
    assert found.discharge_m3s < 95.2 * FT**3


@pytest.mark.parametrize(("share", "found"), [(0.52, (60.0,)), (0.48, ())])
def test_a_dip_of_half_a_bore_parts_two_high_points(job_of, share, found):
    job = job_of()
    dip = share * job.pipe.bore_m
    humps = (98.0, 104.8, 104.7 - dip, 104.7, 93.0)
    assert replace(job, chainage_m=(0.0, 30.0, 45.0, 60.0, 115.0), crown_m=humps).appraise().high_points == found
