import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from routing.outputs.pictures.steps import exaggeration, multiples, places_of, round_length, round_step


@given(st.floats(1e-6, 1e9), st.floats(1.0, 50.0))
def test_a_step_is_round_and_just_large_enough(span, most):
    step = round_step(span, most)
    digit = step / 10.0 ** math.floor(math.log10(step) + 1e-9)
    assert min(abs(digit - d) for d in (1.0, 2.0, 5.0, 10.0)) < 1e-6
    assert span / step <= most * (1 + 1e-6)
    assert span / step > most / 2.6  # the next smaller would be too many


@given(st.floats(1e-3, 1e7))
def test_a_length_is_round_and_just_small_enough(longest):
    length = round_length(longest)
    assert length <= longest * (1 + 1e-6)
    assert length > longest / 2.6


@pytest.mark.parametrize(("span", "most"), [(0.0, 5.0), (math.nan, 5.0), (math.inf, 5.0), (1.0, 0.0)])
def test_no_step_for_no_range(span, most):
    with pytest.raises(ValueError, match="above 0"):
        round_step(span, most)


def test_multiples_hold_both_ends():
    np.testing.assert_allclose(multiples(0.3, 0.6, 0.1), [0.3, 0.4, 0.5, 0.6])
    np.testing.assert_allclose(multiples(-7.0, 3.0, 5.0), [-5.0, 0.0])
    assert multiples(1.2, 1.4, 1.0).size == 0


@pytest.mark.parametrize(("step", "places"), [(100.0, 0), (1.0, 0), (0.5, 1), (0.1, 1), (0.02, 2), (0.001, 3)])
def test_places(step, places):
    assert places_of(step) == places
    assert float(f"{3 * step:.{places}f}") == pytest.approx(3 * step)


@pytest.mark.parametrize(
    ("most", "times"), [(0.2, 1.0), (1.0, 1.0), (1.7, 1.5), (7.9, 6.0), (14.9, 10.0), (2500.0, 2000.0)]
)
def test_exaggeration_is_round_and_never_below_one(most, times):
    assert exaggeration(most) == times
