"""Pipes, levels and running states: what is worked out from the fields."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from routing.records import STANDARD_GRAVITY_MS2, Levels, Limits, Losses, Pipe, Profile, SiphonRun

levels = st.floats(-500.0, 9000.0)


def test_standard_gravity():
    """ISO 80000-3: 9.80665 m/s2 exactly."""
    assert STANDARD_GRAVITY_MS2 == 9.80665
    assert Limits(1e5).gravity_ms2 == 9.80665


@given(st.floats(0.01, 4.0), st.floats(0.0, 0.4))
def test_outside_is_bore_and_two_walls_and_the_area_is_that_of_a_circle(outside, share):
    pipe = Pipe("P", "steel", outside, share * outside, share * outside, 1e-4)
    assert pipe.bore_m + 2.0 * pipe.wall_m == pytest.approx(outside)
    assert pipe.area_m2 == pytest.approx(math.pi * (pipe.bore_m / 2.0) ** 2)


@pytest.mark.parametrize(("bore", "name"), [(0.3, "bore 300 mm"), (0.0158, "bore 15.8 mm"), (1.2, "bore 1200 mm")])
def test_a_pipe_known_by_its_bore(bore, name):
    pipe = Pipe.of_bore(bore, roughness_m=1e-5, darcy_factor=0.02)
    assert (pipe.name, pipe.bore_m, pipe.wall_m, pipe.least_wall_m) == (name, bore, 0.0, 0.0)
    assert (pipe.roughness_m, pipe.darcy_factor) == (1e-5, 0.02)
    assert pipe.modulus_pa is None  # no wall: collapse is a check not made
    assert Pipe.of_bore(bore).darcy_factor is None


@given(levels, levels, st.none() | levels, levels)
def test_the_fall_counts_from_the_higher_of_outlet_and_tailwater(water, outlet, tailwater, other):
    state = Levels(water, outlet, tailwater, 3.0)
    assert state.receiving_m == (outlet if tailwater is None else max(outlet, tailwater))
    assert state.fall_m == water - state.receiving_m
    moved = state.at_water(other)
    assert moved.water_m == other
    assert (moved.outlet_m, moved.tailwater_m, moved.intake_mouth_m) == (outlet, tailwater, 3.0)
    assert moved.fall_m - state.fall_m == pytest.approx(other - water, abs=1e-9)


def test_the_crest_is_the_first_of_equal_heights():
    profile = Profile(np.array([0.0, 4.0, 9.0, 11.5]), np.array([1.0, 3.0, 3.0, 0.0]))
    assert (profile.crest_index, profile.length_m) == (1, 11.5)


def test_local_losses_that_are_not_told():
    """Sharp-edged entrance 0.5, lost velocity head 1 (common practice); nothing else is assumed."""
    losses = Losses()
    assert (losses.entrance, losses.exit, losses.valve_open, losses.bends_per_m) == (0.5, 1.0, 0.0, 0.0)
    assert losses.fittings == ()


@pytest.mark.parametrize(("discharge", "runs"), [(0.0, False), (1e-9, True)])
def test_a_siphon_runs_if_anything_flows(discharge, runs):
    rest = (0.0, 0.0, 0.02, "energy", 0.1, math.inf, 0.0, 3.0, 2.0, 5.0, 5.0, np.zeros(1), 1.0, 90.0, "outlet level")
    assert SiphonRun(discharge, *rest).runs == runs
