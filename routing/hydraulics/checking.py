"""The gatekeeper: what enters this room is checked here once, with the value found; nothing behind it checks again."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator

import numpy as np

from routing.errors import InputError, Problem
from routing.hydraulics.friction import LARGEST_RELATIVE_ROUGHNESS
from routing.records import FloatArray, Levels, Limits, Losses, Pipe, Profile, Water

#: One number to be checked: name, value, least, largest, unit.
_Row = tuple[str, float, float, float, str]

_FAR_M = 1e5  # no level or length of a job on Earth is larger


def _pipe_rows(pipe: Pipe) -> Iterator[_Row]:
    yield "outside diameter of the pipe", pipe.outside_diameter_m, 1e-3, 20.0, "m"
    yield "wall of the pipe", pipe.wall_m, 0.0, 1.0, "m"
    yield "least wall of the pipe", pipe.least_wall_m, 0.0, 1.0, "m"
    yield "bore of the pipe", pipe.bore_m, 1e-3, 20.0, "m"
    if pipe.darcy_factor is not None:
        yield "Darcy factor of the pipe", pipe.darcy_factor, 0.0, 1.0, ""
    elif pipe.bore_m > 0.0:
        yield "roughness of the pipe", pipe.roughness_m, 0.0, LARGEST_RELATIVE_ROUGHNESS * pipe.bore_m, "m"


def _level_rows(levels: Levels) -> Iterator[_Row]:
    yield "water level", levels.water_m, -_FAR_M, _FAR_M, "m"
    yield "outlet level", levels.outlet_m, -_FAR_M, _FAR_M, "m"
    if levels.tailwater_m is not None:
        yield "tailwater level", levels.tailwater_m, -_FAR_M, _FAR_M, "m"
    if levels.intake_mouth_m is not None:
        yield "level of the intake mouth", levels.intake_mouth_m, -_FAR_M, _FAR_M, "m"


def _loss_rows(losses: Losses) -> Iterator[_Row]:
    yield "entrance loss", losses.entrance, 0.0, 1e3, ""
    yield "exit loss", losses.exit, 0.0, 1e3, ""
    yield "loss of the open valve", losses.valve_open, 0.0, 1e6, ""
    yield "bend loss per metre", losses.bends_per_m, 0.0, 1e2, "1/m"
    for chainage, loss in losses.fittings:
        yield "chainage of a fitting", chainage, 0.0, 1e7, "m"
        yield f"loss of the fitting at {chainage:g} m", loss, 0.0, 1e6, ""


def _water_rows(water: Water) -> Iterator[_Row]:
    yield "density of the water", water.density_kgm3, 500.0, 2000.0, "kg/m3"
    yield "kinematic viscosity of the water", water.kinematic_viscosity_m2s, 1e-8, 1e-1, "m2/s"
    yield "vapour pressure of the water", water.vapour_pressure_pa, 0.0, 2e5, "Pa"


def _limit_rows(limits: Limits) -> Iterator[_Row]:
    yield "air pressure", limits.air_pressure_pa, 1e4, 2e5, "Pa"
    yield "reserve", limits.reserve_m, 0.0, 20.0, "m"
    if limits.highest_lift_m is not None:
        yield "highest lift", limits.highest_lift_m, 0.0, 100.0, "m"
    yield "least submergence of the intake", limits.least_submergence_m, 0.0, 100.0, "m"
    yield "factor of safety against collapse", limits.collapse_safety, 1.0, 10.0, ""
    yield "acceleration of gravity", limits.gravity_ms2, 9.7, 9.9, "m/s2"


def _problems(rows: Iterable[_Row]) -> list[Problem]:
    return [
        Problem(f"the {name} is outside its range", f"{value:g} {unit}".strip(), f"{low:g} to {high:g} {unit}".strip())
        for name, value, low, high, unit in rows
        if not low <= value <= high  # refuses NaN as well
    ]


def check_records(pipe: Pipe, levels: Levels, losses: Losses, water: Water, limits: Limits) -> None:
    """Refuse records that hold a number outside its range; all problems are told at once.

    Parameters
    ----------
    pipe, levels, losses, water, limits
        The records of one case.

    Raises
    ------
    InputError
        With one :class:`~routing.errors.Problem` for each number.
    """
    rows = (_pipe_rows(pipe), _level_rows(levels), _loss_rows(losses), _water_rows(water), _limit_rows(limits))
    problems = [problem for group in rows for problem in _problems(group)]
    single = losses.entrance + losses.exit + losses.valve_open + losses.bends_per_m + sum(k for _, k in losses.fittings)
    if pipe.darcy_factor == 0.0 and single == 0.0:
        problems.append(
            Problem(
                "nothing resists the flow, so that the discharge has no bound",
                "Darcy factor 0 and no local loss",
                "at least one loss above 0",
                "give the exit loss (1 for a jet or a still receiving water)",
            )
        )
    if problems:
        raise InputError(*problems)


def check_number(name: str, value: float, low: float, high: float, unit: str = "") -> float:
    """Return a number as ``float`` if it lies in a range; the ends are allowed.

    Parameters
    ----------
    name
        What the number is, for the message.
    value, low, high
        The number and its range.
    unit
        Unit, for the message.

    Raises
    ------
    InputError
        If it does not, or is not a number.
    """
    problems = _problems([(name, value, low, high, unit)])
    if problems:
        raise InputError(*problems)
    return float(value)


def check_discharge(discharge_m3s: float) -> float:
    """Return a discharge as ``float`` if it is finite and not negative.

    Raises
    ------
    InputError
        If it is not.
    """
    if not (math.isfinite(discharge_m3s) and discharge_m3s >= 0.0):
        raise InputError(Problem("the discharge cannot be used", f"{discharge_m3s:g} m3/s", "0 m3/s or more, finite"))
    return float(discharge_m3s)


def _first_bad(name: str, values: FloatArray) -> Problem | None:
    bad = ~np.isfinite(values)
    if not bad.any():
        return None
    at = int(np.argmax(bad))
    return Problem(f"the {name} holds a value that is not finite", f"{values[at]} at position {at}", "finite numbers")


def check_points(chainage_m: FloatArray, crown_m: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return points of a long section as two float64 vectors of one length, finite, chainage not negative.

    Parameters
    ----------
    chainage_m, crown_m : (n,) arrays
        Anything that numpy turns into vectors of numbers; n may be 0.

    Raises
    ------
    InputError
        Where they are not.
    """
    chainage = np.ascontiguousarray(chainage_m, dtype=np.float64)
    crown = np.ascontiguousarray(crown_m, dtype=np.float64)
    if chainage.ndim != 1 or chainage.shape != crown.shape:
        found = f"chainage {chainage.shape}, crown {crown.shape}"
        raise InputError(Problem("chainage and crown levels do not match", found, "two vectors of one length"))
    problems = [p for p in (_first_bad("chainage", chainage), _first_bad("crown level", crown)) if p]
    if not problems and chainage.size and chainage.min() < 0.0:
        problems.append(Problem("the chainage is negative", f"{chainage.min():g} m", "0 m or more"))
    if problems:
        raise InputError(*problems)
    return chainage, crown


def check_profile(profile: Profile) -> tuple[FloatArray, FloatArray]:
    """Return chainage and crown of a profile that can be used: two points or more, from 0, strictly rising.

    Raises
    ------
    InputError
        Where it is not so; the first wrong place is named.
    """
    chainage, crown = check_points(profile.chainage_m, profile.crown_m)
    if chainage.size < 2:
        raise InputError(Problem("the profile is too short", f"{chainage.size} points", "2 points or more"))
    if chainage[0] != 0.0:
        raise InputError(
            Problem(
                "the profile does not start at the intake", f"first chainage {chainage[0]:g} m", "first chainage 0 m"
            )
        )
    steps = np.diff(chainage)
    if steps.min() <= 0.0:
        at = int(np.argmax(steps <= 0.0))
        found = f"{chainage[at]:g} m, then {chainage[at + 1]:g} m at position {at + 1}"
        raise InputError(Problem("the chainage does not rise", found, "strictly rising chainages"))
    return chainage, crown
