"""Air: refusals and laws. Published values are in tests/published/test_water_and_air.py."""

import math

import numpy as np
import pytest

from routing.errors import InputError
from routing.hydraulics import barometric_head_m, standard_pressure_pa, water_at


def test_pressure_falls_with_altitude():
    pressures = [standard_pressure_pa(h) for h in np.linspace(-500.0, 9000.0, 50)]
    assert (np.diff(pressures) < 0).all()


def test_pressure_gradient_is_the_weight_of_air():
    # Hydrostatics with the gas law, by hand: dp/dh = -p g/(R T), T = 288.15 - 0.0065 h.
    for altitude in (0.0, 3000.0, 8000.0):
        slope = (standard_pressure_pa(altitude + 1) - standard_pressure_pa(altitude - 1)) / 2
        weight = standard_pressure_pa(altitude) * 9.80665 / (287.05287 * (288.15 - 0.0065 * altitude))
        assert slope == pytest.approx(-weight, rel=1e-6)


@pytest.mark.parametrize("altitude", [-501.0, 9001.0, math.nan])
def test_altitudes_refused(altitude):
    with pytest.raises(InputError, match="-500 to 9000 m above mean sea level"):
        standard_pressure_pa(altitude)


def test_head_scales_with_gravity():
    water = water_at(10.0)
    assert barometric_head_m(0.0, water) == 0.0
    assert barometric_head_m(1e5, water, 9.7) > barometric_head_m(1e5, water, 9.9)


@pytest.mark.parametrize("pressure", [-1.0, math.nan, math.inf])
def test_pressures_refused(pressure):
    with pytest.raises(InputError, match="air pressure"):
        barometric_head_m(pressure, water_at(10.0))
