"""The loss equation solved for velocity."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from routing.hydraulics import water_at
from routing.hydraulics.flow import Conduit
from routing.records import Pipe

WATER = water_at(10.0)


def conduit(bore, roughness=0.0, factor=None):
    return Conduit.of(Pipe.of_bore(bore, roughness_m=roughness * bore, darcy_factor=factor), WATER, 9.81)


def loss(pipe, velocity, local, length):
    return (local + pipe.factor(velocity) * length / pipe.bore_m) * pipe.velocity_head_m(velocity)


LOCAL, LENGTH, HEAD = st.floats(0.0, 100.0), st.floats(0.01, 1e5), st.floats(1e-8, 1e3)


@settings(max_examples=300)
@given(bore=st.floats(0.002, 5.0), roughness=st.floats(0.0, 0.1), local=LOCAL, length=LENGTH, head=HEAD)
def test_velocity_uses_up_the_head_or_stays_at_the_jump(bore, roughness, local, length, head):
    pipe = conduit(bore, roughness)
    velocity = pipe.largest_velocity_ms(head, local, length)
    if velocity == pytest.approx(pipe.jump_velocity_ms, rel=1e-9):
        assert loss(pipe, velocity * (1 - 1e-6), local, length) <= head
        assert loss(pipe, velocity * (1 + 1e-6), local, length) >= head
    else:
        assert loss(pipe, velocity, local, length) == pytest.approx(head, rel=1e-12)


@settings(max_examples=100)
@given(bore=st.floats(0.002, 1.0), local=LOCAL, length=LENGTH, head=HEAD, more=st.floats(1.0, 3.0))
def test_velocity_never_falls_with_head(bore, local, length, head, more):
    pipe = conduit(bore, 1e-3)
    low, high = pipe.largest_velocity_ms(head, local, length), pipe.largest_velocity_ms(more * head, local, length)
    assert high >= low * (1 - 1e-14)


def test_continuous_sweep_through_the_jump():
    pipe = conduit(0.02)
    reynolds = [pipe.reynolds(pipe.largest_velocity_ms(h, 1.5, 100.0)) for h in np.geomspace(0.05, 5.0, 400)]
    assert (np.diff(reynolds) >= 0).all()
    flat = [r for r in reynolds if abs(r - 2040) < 1e-6]
    assert 10 < len(flat) < 100
    assert min(reynolds) < 2000
    assert max(reynolds) > 2100


def test_no_head_no_flow():
    pipe = conduit(0.1)
    assert pipe.largest_velocity_ms(0.0, 1.0, 10.0) == 0.0
    assert pipe.largest_velocity_ms(-1.0, 1.0, 10.0) == 0.0
    assert pipe.factor(0.0) == 0.0
    assert pipe.largest_velocity_ms(1e-300, 1.0, 10.0) > 0.0


def test_fixed_factor_is_closed_form():
    pipe = conduit(0.1, factor=0.02)
    assert pipe.largest_velocity_ms(3.0, 1.0, 10.0) == pytest.approx(math.sqrt(2 * 9.81))


def test_where_nothing_resists_the_velocity_has_no_bound():
    assert conduit(0.1, factor=0.0).largest_velocity_ms(1.0, 0.0, 10.0) == math.inf
    assert conduit(0.1, 1e-4).largest_velocity_ms(1.0, 0.0, 0.0) == math.inf
    assert conduit(0.1, 1e-4).largest_velocity_ms(0.0, 0.0, 0.0) == 0.0


def test_many_points_equal_the_least_of_single_ones():
    rng = np.random.default_rng(3)
    for _ in range(200):
        pipe = conduit(float(rng.uniform(0.01, 0.5)), float(rng.uniform(0, 0.01)))
        n = int(rng.integers(1, 30))
        headroom, at = rng.uniform(0.01, 9.0, n), rng.uniform(0.0, 2000.0, n)
        local = 1.0 + rng.uniform(0.0, 5.0, n)
        single = [pipe.largest_velocity_ms(*map(float, p)) for p in zip(headroom, local, at, strict=True)]
        assert pipe.largest_velocity_under_ms(headroom, local, at) == pytest.approx(min(single), rel=1e-13)


def test_a_far_point_that_is_tighter_by_a_hair_is_found():
    # In a small pipe f is above the 0.02 of the first guess, so that the near point is taken for the tightest.
    pipe = conduit(0.02, 0.005)
    head, factor = pipe.velocity_head_m(0.8), pipe.factor(0.8)
    assert factor > 0.03
    local, at = np.array([1.5, 1.5]), np.array([0.0, 100.0])
    headroom = head * np.array([1.5, (1.5 + factor * 100.0 / 0.02) * (1 - 5e-4)])
    found = pipe.largest_velocity_under_ms(headroom, local, at)
    assert found < 0.8 * (1 - 2e-4)
    assert loss(pipe, found, 1.5, 100.0) == pytest.approx(headroom[1], rel=1e-12)


def test_many_points_edges():
    pipe, none = conduit(0.1), np.array([])
    assert pipe.largest_velocity_under_ms(none, none, none) == math.inf
    assert pipe.largest_velocity_under_ms(np.array([1.0, 0.0]), np.ones(2), np.ones(2)) == 0.0
    assert pipe.largest_velocity_under_ms(np.array([1.0, -2.0]), np.ones(2), np.ones(2)) == 0.0
