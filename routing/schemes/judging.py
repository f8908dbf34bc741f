"""Checks and verdicts: figure against limit, at duty and at the lowest level."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from routing.hydraulics import INTAKE, OUTLET, SUCTION
from routing.records import GRADES, Appraisal, Check, Cost, Grade, Pipe, SurfaceKind, Verdict
from routing.schemes.appraising import Conditions

#: Reserve left below which a scheme is a caution, m of water.
SLIM_RESERVE_M = 0.5
#: Lift over barometric head above which a scheme is a caution.
HIGH_LIFT_SHARE = 0.65
#: Cells that a barrier must be wide for the DEM to show its crest.
LEAST_BARRIER_CELLS = 3.0
#: Below this V / sqrt(g D) a free horizontal outlet can draw air back along its crown.
AIR_DRAWING_FROUDE = 0.542

_RULE = "the crown pressure must stay above boiling by the reserve, everywhere on the line"
_PRACTICE = "common practice"
_CAUSES = {
    SUCTION: "the suction limit then leaves no flow",
    OUTLET: "the water is then level with the outlet",
    INTAKE: "the intake mouth then lacks its least submergence",
}

#: Checks that a siphon needs and that are not made yet: name and title.
NOT_MADE = (
    ("starting", "Starting: filling, vacuum needed, order of valves"),
    ("air_release", "Air coming out of the water at the crest, and its clearing"),
    ("full_vacuum", "Collapse when the column parts (full vacuum)"),
    ("bursting", "Bursting pressure with the outlet valve shut"),
    ("surge", "Surge when valves move"),
    ("ends", "Vortex at the intake, scour at the outlet"),
    ("freezing", "Freezing of standing or slow water"),
    ("holding", "Holding: anchors, bends, free spans"),
    ("drawdown_rate", "Rate at which the water body may fall"),
)


@dataclass(frozen=True, slots=True)
class Matter:
    """What is judged: a pipe, its appraisal and cost, and what the ground and the user say.

    ``barrier_cells`` is how many cells wide the ground above the present level is at the crest;
    ``whole_required_m3s`` and ``budget`` are ``None`` where nothing is asked.
    """

    pipe: Pipe
    count: int
    appraisal: Appraisal
    cost: Cost
    conditions: Conditions
    required_m3s: float | None
    budget: float | None
    vertical_error_m: float | None
    surface: SurfaceKind
    barrier_cells: float


def _by_limit(*, broken: bool, slim: bool) -> Grade:
    if broken:
        return "unfit"
    return "caution" if slim else "fit"


def _suction(matter: Matter) -> Check:
    left = matter.appraisal.reserve_left_m
    reserve = matter.conditions.limits.reserve_m
    at = matter.appraisal.duty.governing_chainage_m
    if left < -1e-6:
        reason = f"{-left:.2f} m of water are missing at chainage {at:.0f} m"
    else:
        reason = f"{left:.2f} m of water are left above the reserve of {reserve:g} m, least at chainage {at:.0f} m"
    grade = _by_limit(broken=left < -1e-6, slim=left < SLIM_RESERVE_M)
    return Check("suction", "Suction at the crown", grade, left, 0.0, "m", left, reason, _RULE)


def _lift_share(matter: Matter) -> Check:
    share = matter.appraisal.lift_m / matter.appraisal.barometric_head_m
    grade: Grade = "caution" if share > HIGH_LIFT_SHARE else "fit"
    reason = f"the lift of {matter.appraisal.lift_m:.2f} m is {share:.2f} of the barometric head"
    source = "workable suction lifts of 0.61 to 0.66 of the barometric head in NWCG and engineering tables"
    left = HIGH_LIFT_SHARE - share
    return Check("lift_share", "Lift against barometric head", grade, share, HIGH_LIFT_SHARE, "1", left, reason, source)


def _discharge(matter: Matter) -> Iterator[Check]:
    if matter.required_m3s is None:
        return
    total = matter.count * matter.appraisal.discharge_m3s
    left = total - matter.required_m3s
    broken = left < -1e-6 * matter.required_m3s
    word = "less than" if broken else "against"
    reason = f"{matter.count} x {matter.pipe.name} carry {total:.4g} m3/s, {word} the {matter.required_m3s:.4g} asked"
    yield Check(
        "discharge",
        "Discharge at the lowest level",
        _by_limit(broken=broken, slim=False),
        total,
        matter.required_m3s,
        "m3/s",
        left,
        reason,
        "energy balance with Colebrook-White friction, and the suction limit",
    )


def _collapse(matter: Matter) -> Check:
    title, unit = "Collapse of the pipe wall while running", "Pa"
    under = matter.conditions.limits.air_pressure_pa - matter.appraisal.least_inside_pressure_pa
    source = "thin-ring buckling, 2E/(1 - nu^2) (t/D)^3, with ovality and the factor of safety"
    if matter.appraisal.collapse_pressure_pa is None:
        reason = "the pipe's modulus or wall is not known"
        return Check("collapse", title, None, under, None, unit, None, reason, source)
    safety = matter.conditions.limits.collapse_safety
    allowed = matter.appraisal.collapse_pressure_pa / safety
    broken = under > allowed
    word = "exceed" if broken else "stay within"
    reason = f"{under / 1e3:.0f} kPa of underpressure {word} the {allowed / 1e3:.0f} kPa allowed (factor {safety:g})"
    grade = _by_limit(broken=broken, slim=False)
    return Check("collapse", title, grade, under, allowed, unit, allowed - under, reason, source)


def _breaking(matter: Matter) -> Check:
    lowest = matter.conditions.lowest.water_m
    breaks = matter.appraisal.breaking_level_m
    left = lowest - breaks
    cause = _CAUSES[matter.appraisal.largest.breaking_cause]
    reason = f"the siphon stops at level {breaks:.2f} m: {cause}"
    grade = _by_limit(broken=left < -1e-6, slim=False)
    return Check("breaking", "Works down to the lowest level", grade, breaks, lowest, "m", left, reason, _RULE)


def _budget(matter: Matter) -> Iterator[Check]:
    if matter.budget is None:
        return
    left = matter.budget - matter.cost.total
    money = matter.cost.currency or "of the price list"
    word = "over" if left < 0 else "under"
    invented = " (invented prices)" if matter.cost.invented else ""
    reason = f"{abs(left):,.0f} {money} {word} the budget{invented}"
    yield Check(
        "budget",
        "Cost against budget",
        _by_limit(broken=left < 0, slim=False),
        matter.cost.total,
        matter.budget,
        matter.cost.currency,
        left,
        reason,
        "the user's price list",
    )


def _ground_error(matter: Matter) -> Check:
    title = "Error of the DEM against the reserve left"
    left, error = matter.appraisal.reserve_left_m, matter.vertical_error_m
    if error is None:
        reason = "the vertical error of the DEM is not stated; have the crest levelled"
        return Check("dem_error", title, "caution", None, left, "m", None, reason, _PRACTICE)
    grade: Grade = "caution" if error > left else "fit"
    word = "more" if error > left else "less"
    reason = f"the error of {error:.2f} m (90 %) is {word} than the reserve left"
    return Check("dem_error", title, grade, error, left, "m", left - error, reason, _PRACTICE)


def _surface(matter: Matter) -> Check:
    words: dict[SurfaceKind, tuple[Grade, str]] = {
        "ground": ("fit", "the DEM shows bare ground"),
        "canopy": ("caution", "the DEM shows the tops of trees and buildings: the ground may be lower"),
        "unknown": ("caution", "whether the DEM shows bare ground or treetops is not stated"),
    }
    grade, reason = words[matter.surface]
    return Check("surface", "Kind of surface", grade, None, None, "", None, reason, _PRACTICE)


def _barrier(matter: Matter) -> Check:
    cells = matter.barrier_cells
    grade: Grade = "caution" if cells < LEAST_BARRIER_CELLS else "fit"
    reason = f"the barrier is {cells:.1f} cells wide where the route is highest"
    if grade == "caution":
        reason += ": the DEM may cut its crest down"
    limit = LEAST_BARRIER_CELLS
    return Check(
        "barrier", "Width of the barrier on the DEM", grade, cells, limit, "cells", cells - limit, reason, _PRACTICE
    )


def _outlet_air(matter: Matter) -> Check:
    title, source = "Air drawn in at the outlet", "air cavity in a horizontal pipe, Benjamin 1968 (figure from memory)"
    run, pipe, levels = matter.appraisal.duty, matter.pipe, matter.conditions.lowest
    froude = run.velocity_ms / math.sqrt(matter.conditions.limits.gravity_ms2 * pipe.bore_m)
    left = froude - AIR_DRAWING_FROUDE
    drowned = levels.tailwater_m is not None and levels.tailwater_m >= levels.outlet_m + 0.5 * pipe.bore_m
    throttled = run.valve_loss > matter.conditions.losses.valve_open + 1e-6
    if drowned:
        grade, reason = "fit", "the outlet is under water"
    elif throttled:
        grade, reason = "fit", "the throttled outlet valve keeps the pipe full"
    elif left < 0:
        grade, reason = "caution", f"free outlet at V/sqrt(gD) = {froude:.2f}: valve it or keep it under water"
    else:
        grade, reason = "fit", f"free outlet at V/sqrt(gD) = {froude:.2f}, fast enough to keep air out"
    made: Grade = "caution" if grade == "caution" else "fit"
    return Check("outlet_air", title, made, froude, AIR_DRAWING_FROUDE, "1", left, reason, source)


def _high_points(matter: Matter) -> Check:
    points = matter.appraisal.high_points
    grade: Grade = "caution" if points else "fit"
    reason = "the crest is the only high point above the water"
    if points:
        listed = ", ".join(f"{at:.0f}" for at in points[:6]) + (", ..." if len(points) > 6 else "")
        reason = f"{len(points)} more high point(s) above the water, where air gathers: chainage {listed} m"
    return Check("high_points", "High points besides the crest", grade, len(points), 0, "1", None, reason, _PRACTICE)


def list_checks(matter: Matter) -> tuple[Check, ...]:
    """Make every check, the ones that can rule a scheme out first, and list those not made."""
    not_made = (
        Check(name, title, None, None, None, "", None, "not made by this version", "") for name, title in NOT_MADE
    )
    return (
        _suction(matter),
        *_discharge(matter),
        _breaking(matter),
        _collapse(matter),
        *_budget(matter),
        _lift_share(matter),
        _ground_error(matter),
        _surface(matter),
        _barrier(matter),
        _outlet_air(matter),
        _high_points(matter),
        *not_made,
    )


def worst_of(grades: Iterator[Grade | None] | tuple[Grade | None, ...]) -> Grade:
    """Return the worst grade; a check not made counts as a caution."""
    return GRADES[max((GRADES.index(grade or "caution") for grade in grades), default=0)]


def judge(matter: Matter) -> Verdict:
    """Give the verdict on a scheme: as bad as its worst check, which is named as governing.

    Of several equally bad checks the first in the order of `list_checks` governs; where every check made is
    fit, the one that governs the discharge (suction) is named.
    """
    checks = list_checks(matter)
    made = tuple(check for check in checks if check.grade is not None)
    grade = worst_of(tuple(check.grade for check in checks))
    grade_of_made = worst_of(tuple(check.grade for check in made))
    governing = next(check for check in made if check.grade == grade_of_made)
    reason = governing.reason
    missing = len(checks) - len(made)
    if grade_of_made == "fit":
        reason = f"all {len(made)} checks made are fit; {missing} are not made. {reason}"
    return Verdict(grade, grade_of_made, governing, reason, checks)
