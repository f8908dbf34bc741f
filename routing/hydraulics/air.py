"""Air pressure by altitude, and as a column of water."""

from __future__ import annotations

import math

from routing.errors import InputError, Problem
from routing.records import STANDARD_GRAVITY_MS2, Water

#: Range of altitudes in geopotential metres: from below the Dead Sea to above any reservoir.
LOWEST_ALTITUDE_M, HIGHEST_ALTITUDE_M = -500.0, 9000.0

_SEA_LEVEL_PA = 101_325.0
_SEA_LEVEL_K = 288.15
_LAPSE_KM = 0.0065
_GAS_CONSTANT = 287.05287  # J/(kg K) of dry air, ISO 2533
_EXPONENT = STANDARD_GRAVITY_MS2 / (_GAS_CONSTANT * _LAPSE_KM)


def standard_pressure_pa(altitude_m: float) -> float:
    """Return the pressure of the standard atmosphere (ISO 2533, ICAO) in Pa.

    ``p = 101325 (1 - 0.0065 h / 288.15)^5.25588``: the mean over the year in middle latitudes. Weather moves it by
    some 3 % either way; an allowance for a low is made by the caller.

    Parameters
    ----------
    altitude_m
        Height above mean sea level in *geopotential* metres, -500 to 9000. Levelled heights are within a few metres
        of it. Taking a geometric height for it errs by 20 Pa (2 mm of water) at 4000 m, to the safe side.

    Raises
    ------
    InputError
        Outside the range.

    Examples
    --------
    >>> round(standard_pressure_pa(2000.0), 1)
    79495.2
    """
    if not LOWEST_ALTITUDE_M <= altitude_m <= HIGHEST_ALTITUDE_M:
        raise InputError(
            Problem(
                "the altitude is outside the range of the standard atmosphere used here",
                f"{altitude_m:g} m",
                f"{LOWEST_ALTITUDE_M:g} to {HIGHEST_ALTITUDE_M:g} m above mean sea level",
                "give the altitude in metres above mean sea level, or the air pressure itself",
            )
        )
    return float(_SEA_LEVEL_PA * (1.0 - _LAPSE_KM * altitude_m / _SEA_LEVEL_K) ** _EXPONENT)


def barometric_head_m(pressure_pa: float, water: Water, gravity_ms2: float = STANDARD_GRAVITY_MS2) -> float:
    """Return the height in m of a column of this water that balances a pressure, ``p / (rho g)``.

    Parameters
    ----------
    pressure_pa
        Pressure in Pa, 0 or more.
    water
        The liquid.
    gravity_ms2
        Acceleration of gravity.

    Raises
    ------
    InputError
        For a pressure that is negative or not finite.
    """
    if not (math.isfinite(pressure_pa) and pressure_pa >= 0.0):
        raise InputError(Problem("the air pressure cannot be used", f"{pressure_pa:g} Pa", "0 Pa or more, finite"))
    return pressure_pa / (water.density_kgm3 * gravity_ms2)
