"""Friction factor: laws, edges, refusals. Published values are in tests/published/test_friction.py."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from routing.errors import InputError
from routing.hydraulics import CRITICAL_REYNOLDS, darcy_factor

TURBULENT = st.floats(2041.0, 1e10)
ROUGHNESS = st.floats(0.0, 0.1)


@settings(max_examples=200)
@given(TURBULENT, ROUGHNESS)
def test_result_satisfies_the_implicit_equation_to_rounding(reynolds, roughness):
    x = 1.0 / math.sqrt(darcy_factor(reynolds, roughness))
    # One unit of rounding in f moves the residual by some 1e-15 x.
    assert x + 2.0 * math.log10(roughness / 3.7 + 2.51 * x / reynolds) == pytest.approx(0.0, abs=4e-14)


@settings(max_examples=100)
@given(TURBULENT, ROUGHNESS, st.floats(1.001, 10.0))
def test_factor_falls_with_reynolds_and_rises_with_roughness(reynolds, roughness, ratio):
    assert darcy_factor(reynolds * ratio, roughness) <= darcy_factor(reynolds, roughness)
    rougher = min(roughness * ratio, 0.1)
    assert darcy_factor(reynolds, rougher) >= darcy_factor(reynolds, roughness)
    # The loss itself, f V^2, rises with the flow all the same.
    assert darcy_factor(reynolds * ratio, roughness) * ratio**2 > darcy_factor(reynolds, roughness)


@settings(max_examples=50)
@given(st.lists(st.floats(1.0, 1e9), min_size=1, max_size=20), ROUGHNESS)
def test_arrays_equal_scalars(reynolds, roughness):
    found = darcy_factor(np.array(reynolds), roughness)
    expected = [darcy_factor(r, roughness) for r in reynolds]
    np.testing.assert_allclose(found, expected, rtol=2e-15)


def test_arrays_broadcast():
    found = darcy_factor(np.array([[1e4], [1e5]]), np.array([0.0, 1e-3, 1e-2]))
    assert found.shape == (2, 3)
    assert found[1, 2] == darcy_factor(1e5, 1e-2)
    assert darcy_factor(1e5, np.array([1e-3, 1e-2])).shape == (2,)


def test_laminar_up_to_the_critical_reynolds_number_then_a_jump_up():
    assert darcy_factor(1000.0, 0.05) == 0.064
    assert darcy_factor(CRITICAL_REYNOLDS, 0.0) == 64.0 / CRITICAL_REYNOLDS
    assert darcy_factor(np.array([CRITICAL_REYNOLDS]), 0.0)[0] == 64.0 / CRITICAL_REYNOLDS
    assert darcy_factor(CRITICAL_REYNOLDS * (1 + 1e-12), 0.0) > 1.5 * 64.0 / CRITICAL_REYNOLDS


def test_still_types():
    assert isinstance(darcy_factor(1e5, 1e-3), float)
    assert isinstance(darcy_factor(100, 0), float)


@pytest.mark.parametrize("reynolds", [0.0, -1.0, math.nan, math.inf])
def test_reynolds_numbers_refused(reynolds):
    with pytest.raises(InputError, match="Reynolds number is outside its range"):
        darcy_factor(reynolds, 0.0)
    with pytest.raises(InputError, match="Reynolds number is outside its range"):
        darcy_factor(np.array([1e5, reynolds]), 0.0)


@pytest.mark.parametrize("roughness", [-1e-9, 0.11, math.nan])
def test_roughnesses_refused(roughness):
    with pytest.raises(InputError, match=r"0 to 0\.1"):
        darcy_factor(1e5, roughness)
    with pytest.raises(InputError, match=r"0 to 0\.1"):
        darcy_factor(1e5, np.array([0.0, roughness]))
