"""The suction ceiling of a discharge, and the largest discharge under given ground: what a search of routes asks."""

from __future__ import annotations

import math

import numpy as np

from routing.hydraulics.case import Case
from routing.hydraulics.checking import check_discharge, check_number, check_points
from routing.records import Ceiling, FloatArray, Levels, Limits, Losses, Pipe, Water

_LONGEST_LINE_M = 1e7


def suction_ceiling(
    pipe: Pipe, levels: Levels, losses: Losses, water: Water, limits: Limits, discharge_m3s: float
) -> Ceiling:
    """Return how high the crown may lie, by chainage, and how long the pipe may be, for one discharge.

    ``z_crown(s) <= level - gradient s`` keeps the crown pressure at or above vapour pressure plus reserve, with
    ``level = H + (p_air - p_vapour)/gamma - reserve - (1 + K_in + K_fittings) V^2/2g`` and
    ``gradient = (f/D + bends) V^2/2g``. All fittings are counted from chainage 0, where a route's own section may
    count them later: the ceiling is never too high.

    Parameters
    ----------
    pipe, levels, losses, water, limits
        The case.
    discharge_m3s
        Discharge of one pipe, 0 or more.

    Returns
    -------
    Ceiling
        For the crown, not for the ground. ``longest_m`` is ``inf`` where nothing is lost by the metre (still water
        included) and ``-inf`` where it then cannot be carried at all.

    Raises
    ------
    InputError
        Where a number is outside its range.
    """
    case = Case.of(pipe, levels, losses, water, limits)
    velocity = check_discharge(discharge_m3s) / case.conduit.area_m2
    head = case.conduit.velocity_head_m(velocity)
    per_metre = case.conduit.factor(velocity) / case.conduit.bore_m + losses.bends_per_m
    left = levels.fall_m - case.local_of_line(0.0) * head
    if head * per_metre > 0.0:
        longest = left / (head * per_metre)
    elif head > 0.0:
        longest = math.inf if left >= 0.0 else -math.inf
    else:
        longest = math.inf if levels.fall_m > 0.0 else -math.inf
    return Ceiling(
        discharge_m3s=velocity * case.conduit.area_m2,
        level_m=case.still_ceiling_m - (1.0 + losses.entrance + case.fittings_total) * head,
        gradient=per_metre * head,
        cap_m=case.cap_m,
        longest_m=longest,
    )


def energy_discharge_m3s(
    pipe: Pipe, length_m: float, levels: Levels, losses: Losses, water: Water, limits: Limits
) -> float:
    """Return the discharge in m3/s that uses up the whole fall over a length, outlet valve open.

    ``H - receiving level = (K_in + K_exit + K_valve + K_fittings + bends L + f L/D) V^2/2g``; 0 where there is no
    fall, ``inf`` where nothing resists (no length, no local loss). Where the fall lies in the jump between laminar and
    turbulent loss it is the discharge at the jump.

    Parameters
    ----------
    pipe, levels, losses, water, limits
        The case.
    length_m
        Length of the pipe, 0 or more.

    Raises
    ------
    InputError
        Where a number is outside its range.
    """
    case = Case.of(pipe, levels, losses, water, limits)
    length = check_number("length of the pipe", length_m, 0.0, _LONGEST_LINE_M, "m")
    return case.energy_velocity_ms(length) * case.conduit.area_m2


def discharge_under(  # noqa: PLR0913, PLR0917 - the five records of a case and a long section
    pipe: Pipe,
    levels: Levels,
    losses: Losses,
    water: Water,
    limits: Limits,
    chainage_m: FloatArray,
    crown_m: FloatArray,
    length_m: float,
) -> float:
    """Return the largest discharge whose ceiling clears all points and whose longest pipe reaches a length.

    The inverse of :func:`suction_ceiling`, to rounding: there the tightest point touches the ceiling. Fittings are
    counted from chainage 0 as there.

    Parameters
    ----------
    pipe, levels, losses, water, limits
        The case.
    chainage_m, crown_m : (n,) arrays
        Points that the crown must pass, in any order; none leaves the energy limit alone.
    length_m
        Length of the pipe.

    Returns
    -------
    float
        Discharge of one pipe in m3/s; 0 where even still water breaks a limit, or where there is no fall.

    Raises
    ------
    InputError
        Where a number is outside its range or the arrays do not match.
    """
    case = Case.of(pipe, levels, losses, water, limits)
    chainage, crown = check_points(chainage_m, crown_m)
    length = check_number("length of the pipe", length_m, 0.0, _LONGEST_LINE_M, "m")
    if crown.size and crown.max() > case.cap_m:
        return 0.0
    local = np.asarray(1.0 + losses.entrance + case.fittings_total + losses.bends_per_m * chainage)
    suction = case.conduit.largest_velocity_under_ms(case.still_ceiling_m - crown, local, chainage)
    return min(suction, case.energy_velocity_ms(length)) * case.conduit.area_m2
