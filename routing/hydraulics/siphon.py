"""How a siphon runs along a long section: discharge, crown pressures, what governs, and when it breaks."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from routing.errors import InputError, Problem
from routing.hydraulics.case import Case
from routing.hydraulics.checking import check_discharge, check_profile
from routing.records import FloatArray, Governs, Levels, Limits, Losses, Pipe, Profile, SiphonRun, Water

#: Causes of the breaking level.
SUCTION, OUTLET, INTAKE = "suction", "outlet", "intake"

#: A discharge given back after a round trip through V = Q/A may lie this far above the energy limit.
_ROUNDING = 1e-9
#: A reserve this close to nothing, in m, is nothing: at the suction limit rounding leaves 1e-13 of either sign.
_NO_RESERVE_M = 1e-9


@dataclass(frozen=True, slots=True)
class _Section:
    """A case laid along a long section, with its two limits as velocities.

    The first ``points`` entries of the arrays are those of the profile; after them come fittings that stand between
    two of its points, where the pressure drops as well.
    """

    case: Case
    points: int
    length_m: float
    chainage_m: FloatArray
    headroom_m: FloatArray
    local: FloatArray
    crest: int
    crest_m: float
    energy_ms: float
    suction_ms: float

    @classmethod
    def of(cls, case: Case, profile: Profile) -> _Section:
        chainage, crown = check_profile(profile)
        points, length, crest = chainage.size, float(chainage[-1]), int(np.argmax(crown))
        between = [at for at, _ in case.losses.fittings if at < length]
        if between:
            crown = np.concatenate([crown, np.interp(between, chainage, crown)])
            chainage = np.concatenate([chainage, between])
        # Level differences first: they are small, so that no digits are lost to the height of the datum.
        headroom = (case.levels.water_m - crown) + case.still_lift_m
        local = case.local_to_crown(chainage)
        suction = 0.0
        if crown[crest] <= case.cap_m:
            suction = case.conduit.largest_velocity_under_ms(headroom, local, chainage)
        return cls(
            case=case,
            points=points,
            length_m=length,
            chainage_m=chainage,
            headroom_m=headroom,
            local=local,
            crest=crest,
            crest_m=float(crown[crest]),
            energy_ms=case.energy_velocity_ms(length),
            suction_ms=suction,
        )

    @property
    def governs(self) -> Governs:
        return "suction" if self.suction_ms < self.energy_ms else "energy"


def run_siphon(pipe: Pipe, profile: Profile, levels: Levels, losses: Losses, water: Water, limits: Limits) -> SiphonRun:
    """Return the state in which the siphon runs as hard as it may.

    The discharge is the smaller of two limits. *Energy*: the whole fall is used up with the outlet valve open,
    ``fall = (K_in + K_exit + K_valve + K_fittings + bends L + f L/D) V^2/2g``. *Suction*: at some chainage the crown
    pressure ``p/gamma = p_air/gamma + H - z(s) - (1 + K_in + K(<= s) + bends s + f s/D) V^2/2g`` is down to vapour
    pressure plus reserve. Where suction governs, ``valve_loss`` is the K of the outlet valve that throttles the
    siphon to it: run wider open than that, the water column may part.

    Parameters
    ----------
    pipe, levels, losses, water, limits
        The case. A fixed ``pipe.darcy_factor`` holds at any Reynolds number.
    profile
        The crown along the pipe. The pressure is judged at its points and at the fittings; between these crown and
        losses are straight lines, so that no lower pressure hides there. A fitting beyond the end counts in the
        energy balance all the same.

    Returns
    -------
    SiphonRun
        Discharge 0, valve loss ``inf`` and static pressures where nothing can flow: no fall (``governs`` is
        ``"energy"``), or a limit broken in still water (``"suction"``, ``reserve_left_m`` negative: what is
        missing). At the laminar-turbulent jump the discharge stays at the jump and the valve takes up the rest.

    Raises
    ------
    InputError
        Where a number is outside its range or the profile cannot be used.
    """
    section = _Section.of(Case.of(pipe, levels, losses, water, limits), profile)
    return _state(section, min(section.energy_ms, section.suction_ms))


def run_at(
    pipe: Pipe,
    profile: Profile,
    levels: Levels,
    losses: Losses,
    water: Water,
    limits: Limits,
    discharge_m3s: float,
) -> SiphonRun:
    """Return the state in which the outlet valve holds the siphon at a given discharge.

    Parameters
    ----------
    pipe, profile, levels, losses, water, limits
        As for :func:`run_siphon`.
    discharge_m3s
        Discharge of one pipe; 0 is still water behind a shut valve.

    Returns
    -------
    SiphonRun
        ``governs`` names the limit that opening the valve further would meet first (the smaller one). A discharge
        beyond the suction limit is returned all the same, with ``reserve_left_m`` negative: the pressures are then
        what full-bore flow would need, not what would occur.

    Raises
    ------
    InputError
        Where the discharge is beyond the energy limit: no valve setting gives it; or on bad numbers.
    """
    section = _Section.of(Case.of(pipe, levels, losses, water, limits), profile)
    area = section.case.conduit.area_m2
    velocity = check_discharge(discharge_m3s) / area
    if velocity > section.energy_ms * (1.0 + _ROUNDING):
        raise InputError(
            Problem(
                "the fall cannot carry this discharge through this pipe",
                f"{discharge_m3s:g} m3/s",
                f"at most {section.energy_ms * area:.6g} m3/s with the valve open",
                "ask for less, take a larger pipe or more pipes, or lower the outlet",
            )
        )
    return _state(section, velocity)


def _valve_loss(section: _Section, head_m: float, friction: float) -> float:
    """Return the K of the outlet valve, open loss included, that closes the energy balance."""
    case = section.case
    if head_m <= 0.0:
        return math.inf
    have = case.levels.fall_m / head_m
    rest = case.local_of_line(section.length_m) + friction * section.length_m - case.losses.valve_open
    # What rounding leaves of a balance that closes with the valve open is not a throttled valve.
    return have - rest if have - rest - case.losses.valve_open > _ROUNDING * have else case.losses.valve_open


def _state(section: _Section, velocity_ms: float) -> SiphonRun:
    """Return the full-bore state at a velocity, whether or not the limits allow it."""
    case, chainage = section.case, section.chainage_m
    conduit = case.conduit
    head = conduit.velocity_head_m(velocity_ms)
    factor = conduit.factor(velocity_ms)
    friction = factor / conduit.bore_m
    left = section.headroom_m - (section.local + friction * chainage) * head
    pressure = (left + case.limits.reserve_m) * case.unit_weight_nm3 + case.water.vapour_pressure_pa
    governing = int(np.argmin(left))
    reserve = float(left[governing])
    if case.cap_m - section.crest_m < reserve:
        governing, reserve = section.crest, case.cap_m - section.crest_m
    if abs(reserve) <= _NO_RESERVE_M:
        reserve = 0.0
    breaking, cause = _breaking(case, section.crest_m)
    return SiphonRun(
        discharge_m3s=velocity_ms * conduit.area_m2,
        velocity_ms=velocity_ms,
        reynolds=conduit.reynolds(velocity_ms),
        friction_factor=factor,
        governs=section.governs,
        energy_discharge_m3s=section.energy_ms * conduit.area_m2,
        suction_discharge_m3s=section.suction_ms * conduit.area_m2,
        valve_loss=_valve_loss(section, head, friction),
        lift_m=section.crest_m - case.levels.water_m,
        fall_m=case.levels.fall_m,
        crest_chainage_m=float(chainage[section.crest]),
        governing_chainage_m=float(chainage[governing]),
        crown_pressure_pa=pressure[: section.points],
        reserve_left_m=reserve,
        breaking_level_m=breaking,
        breaking_cause=cause,
    )


def _breaking(case: Case, crest_m: float) -> tuple[float, str]:
    """Return the water level at which flow ends, and why: the highest of the three levels, the first if equal."""
    lift = case.still_lift_m
    if case.limits.highest_lift_m is not None:
        lift = min(lift, case.limits.highest_lift_m)
    causes = [(crest_m - lift, SUCTION), (case.levels.receiving_m, OUTLET)]
    if case.levels.intake_mouth_m is not None:
        causes.append((case.levels.intake_mouth_m + case.limits.least_submergence_m, INTAKE))
    return max(causes, key=lambda item: item[0])
