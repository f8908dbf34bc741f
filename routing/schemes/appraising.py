"""A route with a pipe at the site's levels: everything that the hydraulics say of it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from routing.hydraulics import barometric_head_m, collapse_pressure_pa, run_at, run_siphon
from routing.records import Appraisal, FloatArray, Levels, Limits, Losses, Pipe, Profile, SiphonRun, Water


@dataclass(frozen=True, slots=True)
class Conditions:
    """What a siphon works under: levels now and at the lowest, losses, water, limits."""

    present: Levels
    lowest: Levels
    losses: Losses
    water: Water
    limits: Limits


def crown_offset_m(pipe: Pipe, bed_offset_m: float) -> float:
    """Return how far the crown of the bore lies above the ground.

    The pipe's underside lies ``bed_offset_m`` above the ground (below it where negative: a trench), so the crown
    is higher by the outside diameter less one wall.
    """
    return bed_offset_m + pipe.outside_diameter_m - pipe.wall_m


def high_points_m(profile: Profile, above_m: float, least_dip_m: float) -> tuple[float, ...]:
    """Return the chainages of high points other than the crest, where air can gather.

    Parameters
    ----------
    profile
        Long section of the crown.
    above_m
        Only high points above this level count (below the water surface the pressure keeps air small).
    least_dip_m
        A high point counts where the crown falls by more than this on both sides before it rises higher.
    """
    crown = profile.crown_m
    peaks: list[int] = []
    # The ends are no high points: the first one can only come after a rise.
    rising, peak, trough = False, 0, 0
    for i in range(1, crown.size):
        if rising:
            if crown[i] > crown[peak]:
                peak = i
            elif crown[i] < crown[peak] - least_dip_m:
                peaks.append(peak)
                rising, trough = False, i
        elif crown[i] < crown[trough]:
            trough = i
        elif crown[i] > crown[trough] + least_dip_m:
            rising, peak = True, i
    crest = profile.crest_index
    return tuple(float(profile.chainage_m[i]) for i in peaks if i != crest and crown[i] > above_m)


def _at_duty(
    pipe: Pipe, profile: Profile, conditions: Conditions, duty_m3s: float | None, largest: SiphonRun
) -> SiphonRun:
    """Run throttled to the duty where the fall can drive it (even if the suction limit is then broken)."""
    if duty_m3s is None or duty_m3s > largest.energy_discharge_m3s:
        return largest
    return run_at(pipe, profile, conditions.lowest, conditions.losses, conditions.water, conditions.limits, duty_m3s)


def appraise(pipe: Pipe, profile: Profile, conditions: Conditions, duty_m3s: float | None = None) -> Appraisal:
    """Appraise one pipe on one long section.

    Parameters
    ----------
    pipe
        The pipe.
    profile
        Long section of its crown.
    conditions
        Levels, losses, water and limits.
    duty_m3s
        Discharge asked of this one pipe, or ``None``.

    Returns
    -------
    Appraisal

    Raises
    ------
    InputError
        If a record holds a number that is not allowed.
    """
    rest = (conditions.losses, conditions.water, conditions.limits)
    largest = run_siphon(pipe, profile, conditions.lowest, *rest)
    duty = _at_duty(pipe, profile, conditions, duty_m3s, largest)
    pressures: FloatArray = duty.crown_pressure_pa
    return Appraisal(
        profile_crown_m=profile.crown_m,
        largest=largest,
        duty=duty,
        present=run_siphon(pipe, profile, conditions.present, *rest),
        duty_m3s=duty_m3s,
        collapse_pressure_pa=collapse_pressure_pa(pipe),
        least_inside_pressure_pa=float(np.min(pressures)),
        barometric_head_m=barometric_head_m(
            conditions.limits.air_pressure_pa, conditions.water, conditions.limits.gravity_ms2
        ),
        high_points=high_points_m(profile, conditions.lowest.water_m, 0.5 * pipe.bore_m),
    )
