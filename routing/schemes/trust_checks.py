"""Checks of how far a figure can be trusted, and of air: these make a caution at worst."""

from __future__ import annotations

import math

from routing.records import Check, Grade, SurfaceKind
from routing.schemes.matter import PRACTICE, ROUNDING_M, Matter
from routing.schemes.saying import amount, apart, fixed
from routing.schemes.unmade import unmade

#: Lift over barometric head above which a scheme is a caution.
HIGH_LIFT_SHARE = 0.65
#: Cells that a barrier must be wide for the DEM to show its crest.
LEAST_BARRIER_CELLS = 3.0
#: Below this V / sqrt(g D) an air cavity runs up a level pipe from its free end. A pipe that falls to its end can
#: draw air at somewhat higher values (up to some 0.64 at 30 degrees: Bendiksen 1984, from memory).
AIR_DRAWING_FROUDE = 0.542


def lift_share(matter: Matter) -> Check:
    """Hold the lift against the share of the barometric head that is workable."""
    lift = matter.appraisal.lift_m
    share = lift / matter.appraisal.barometric_head_m
    grade: Grade = "caution" if share > HIGH_LIFT_SHARE else "fit"
    figure, limit = apart(share, HIGH_LIFT_SHARE, 2)
    if abs(lift) <= ROUNDING_M:
        reason = "the crest is level with the lowest level: no lift"
    elif lift > 0.0:
        reason = f"the lift of {amount(lift, 2)} m is {figure} of the barometric head; up to {limit} is workable"
    else:
        reason = f"the crest lies {amount(lift, 2)} m below the lowest level: no lift"
    source = "workable suction lifts of 0.61 to 0.66 of the barometric head in NWCG and engineering tables"
    left = HIGH_LIFT_SHARE - share
    return Check("lift_share", "Lift against barometric head", grade, share, HIGH_LIFT_SHARE, "1", left, reason, source)


def ground_error(matter: Matter) -> Check:
    """Hold the error of the DEM against the reserve left."""
    title = "Error of the DEM against the reserve left"
    left, error = matter.appraisal.reserve_left_m, matter.vertical_error_m
    if error is None:
        reason = "the vertical error of the DEM is not stated; have the crest levelled"
        return Check("dem_error", title, "caution", None, left, "m", None, reason, PRACTICE)
    grade: Grade = "caution" if error > left else "fit"
    reason = f"the error of {fixed(error, 2)} m (90 %)"
    if left > ROUNDING_M:
        figure, limit = apart(error, left, 2)
        relation = "is more than" if error > left else "keeps within"
        reason = f"the error of {figure} m (90 %) {relation} the {limit} m of reserve left"
    else:
        reason += " finds no reserve left to take it"
    return Check("dem_error", title, grade, error, left, "m", left - error, reason, PRACTICE)


def surface(matter: Matter) -> Check:
    """Say whether the DEM shows bare ground."""
    words: dict[SurfaceKind, tuple[Grade, str]] = {
        "ground": ("fit", "the DEM shows bare ground"),
        "canopy": ("caution", "the DEM shows the tops of trees and buildings: the ground may be lower"),
        "unknown": ("caution", "whether the DEM shows bare ground or treetops is not stated"),
    }
    grade, reason = words[matter.surface]
    return Check("surface", "Kind of surface", grade, None, None, "", None, reason, PRACTICE)


def barrier(matter: Matter) -> Check:
    """Hold the width of the barrier against what a DEM can show."""
    cells, limit = matter.barrier_cells, LEAST_BARRIER_CELLS
    grade: Grade = "caution" if cells < limit else "fit"
    reason = f"the barrier is {apart(cells, limit, 1)[0]} cells wide where the route is highest"
    if grade == "caution":
        reason += ": the DEM may cut its crest down"
    title = "Width of the barrier on the DEM"
    return Check("barrier", title, grade, cells, limit, "cells", cells - limit, reason, PRACTICE)


def outlet_air(matter: Matter) -> Check:
    """Judge whether air can run up a free outlet.

    A valve that holds back half a bore of water or more keeps the crown before it wetted: there the pressure at the
    axis is K V^2/2g above that of the air.
    """
    run, pipe, levels = matter.appraisal.duty, matter.pipe, matter.conditions.lowest
    title, source = "Air drawn in at the outlet", "air cavity in a level pipe, Benjamin 1968 (figure from memory)"
    if not run.runs:
        return unmade("outlet_air", title, source, "nothing flows")
    gravity = matter.conditions.limits.gravity_ms2
    froude = run.velocity_ms / math.sqrt(gravity * pipe.bore_m)
    held_m = run.valve_loss * run.velocity_ms**2 / (2.0 * gravity)
    left = froude - AIR_DRAWING_FROUDE
    figure, limit = apart(froude, AIR_DRAWING_FROUDE, 2)
    grade: Grade = "fit"
    if levels.tailwater_m is not None and levels.tailwater_m >= levels.outlet_m + 0.5 * pipe.bore_m:
        reason = "the outlet is under water"
    elif held_m >= 0.5 * pipe.bore_m:
        reason = f"the outlet valve holds {fixed(held_m, 2)} m of water back and so keeps the pipe full"
    elif left < 0.0:
        grade = "caution"
        reason = f"free outlet at V/sqrt(gD) = {figure}, slower than {limit}: throttle it or keep it under water"
    else:
        reason = f"free outlet at V/sqrt(gD) = {figure}, fast enough to keep air out of a level pipe"
    return Check("outlet_air", title, grade, froude, AIR_DRAWING_FROUDE, "1", left, reason, source)


def high_points(matter: Matter) -> Check:
    """Count the high points besides the crest."""
    points = matter.appraisal.high_points
    grade: Grade = "caution" if points else "fit"
    reason = "no high point above the lowest level besides the crest"
    if points:
        listed = ", ".join(f"{at:.0f}" for at in points[:6]) + (", ..." if len(points) > 6 else "")
        number = "1 more high point" if len(points) == 1 else f"{len(points)} more high points"
        reason = f"{number} above the lowest level, where air gathers: chainage {listed} m"
    return Check("high_points", "High points besides the crest", grade, len(points), 0, "1", None, reason, PRACTICE)
