"""Water: range, monotony, refusals. Published values are in tests/published/test_water_and_air.py."""

import math

import numpy as np
import pytest

from routing.errors import InputError
from routing.hydraulics import water_at


def test_whole_range_is_smooth_and_monotone():
    waters = [water_at(t) for t in np.linspace(0.0, 40.0, 401)]
    vapour = np.array([w.vapour_pressure_pa for w in waters])
    viscosity = np.array([w.kinematic_viscosity_m2s for w in waters])
    density = np.array([w.density_kgm3 for w in waters])
    assert (np.diff(vapour) > 0).all()
    assert (np.diff(viscosity) < 0).all()
    # Densest at 4 °C (3.98, a fact of any handbook).
    assert np.linspace(0.0, 40.0, 401)[np.argmax(density)] == pytest.approx(3.98, abs=0.11)


def test_temperature_is_kept():
    assert water_at(10).temperature_c == 10.0


@pytest.mark.parametrize("celsius", [-0.01, 40.01, math.nan, math.inf, 283.15])
def test_temperatures_refused(celsius):
    with pytest.raises(InputError, match="0 to 40 °C") as caught:
        water_at(celsius)
    assert f"{celsius:g} °C" in str(caught.value)
