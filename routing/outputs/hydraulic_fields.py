"""Fields of a scheme that come from its hydraulics: discharges, levels, pressures."""

from __future__ import annotations

import numpy as np

from routing.outputs.end_fields import receiving_level
from routing.outputs.field import Field, Shown, Told
from routing.records import Scheme

SchemeField = Field[Scheme]


def _least_pressure(_: Told, scheme: Scheme) -> float | None:
    pressure = scheme.appraisal.crown_pressure_pa
    return float(np.min(pressure)) if pressure.size else None


def _lift_share(_: Told, scheme: Scheme) -> float | None:
    head = scheme.appraisal.barometric_head_m
    return scheme.appraisal.lift_m / head if head > 0.0 else None


DISCHARGE_FIELDS: tuple[SchemeField, ...] = (
    Field(
        "required_total_m3s",
        "m3/s",
        "number",
        6,
        "Discharge asked of all pipes together; empty where none is asked.",
        lambda t, _: t.site.demand.discharge_m3s,
    ),
    Field(
        "duty_m3s",
        "m3/s",
        "number",
        6,
        "Discharge asked of one pipe; empty where none is asked.",
        lambda _, s: s.appraisal.duty_m3s,
    ),
    Field(
        "total_discharge_m3s",
        "m3/s",
        "number",
        6,
        "Largest discharge of all pipes together at the lowest level.",
        lambda _, s: s.total_discharge_m3s,
        Shown("total", "l/s", 1e3, "three figures"),
    ),
    Field(
        "discharge_m3s",
        "m3/s",
        "number",
        6,
        "Largest discharge of one pipe at the lowest level.",
        lambda _, s: s.appraisal.discharge_m3s,
    ),
    Field(
        "limited_by",
        "",
        "text",
        None,
        "What limits the largest discharge: `energy` (the whole fall is used up) or `suction` (crown pressure).",
        lambda _, s: s.appraisal.governs,
    ),
    Field(
        "energy_discharge_m3s",
        "m3/s",
        "number",
        6,
        "Discharge of one pipe that would use up the whole fall.",
        lambda _, s: s.appraisal.largest.energy_discharge_m3s,
    ),
    Field(
        "suction_discharge_m3s",
        "m3/s",
        "number",
        6,
        "Discharge of one pipe that would bring the crown to its pressure limit; empty where none does.",
        lambda _, s: s.appraisal.largest.suction_discharge_m3s,
    ),
    Field(
        "velocity_ms",
        "m/s",
        "number",
        3,
        "Mean velocity at the largest discharge.",
        lambda _, s: s.appraisal.largest.velocity_ms,
    ),
    Field(
        "duty_velocity_ms",
        "m/s",
        "number",
        3,
        "Mean velocity at duty (at the largest discharge where none is asked).",
        lambda _, s: s.appraisal.duty.velocity_ms,
    ),
    Field(
        "valve_loss",
        "",
        "number",
        3,
        "K of the outlet valve at the largest discharge, on V^2/2g; empty where the valve is shut or nothing flows.",
        lambda _, s: s.appraisal.valve_loss,
    ),
    Field(
        "duty_valve_loss",
        "",
        "number",
        3,
        "K of the outlet valve at duty, on V^2/2g; empty where the valve is shut or nothing flows.",
        lambda _, s: s.appraisal.duty.valve_loss,
    ),
    Field(
        "present_discharge_m3s",
        "m3/s",
        "number",
        6,
        "Largest discharge of one pipe at the present level.",
        lambda _, s: s.appraisal.present.discharge_m3s,
    ),
    Field(
        "present_total_discharge_m3s",
        "m3/s",
        "number",
        6,
        "Largest discharge of all pipes together at the present level.",
        lambda _, s: s.count * s.appraisal.present.discharge_m3s,
    ),
)

GEOMETRY_FIELDS: tuple[SchemeField, ...] = (
    Field(
        "length_m",
        "m",
        "number",
        2,
        "Length of the route along the ground, slopes included.",
        lambda _, s: s.route.length_m,
        Shown("length", "m", 1.0, "whole"),
    ),
    Field(
        "straight_m",
        "m",
        "number",
        2,
        "Straight distance between the ends in space: no route is shorter.",
        lambda _, s: s.route.proof.straight_m,
    ),
    Field(
        "crest_m",
        "m",
        "number",
        3,
        "Highest ground on the route, in the datum of the DEM.",
        lambda _, s: s.route.crest_m,
    ),
    Field(
        "crest_chainage_m",
        "m",
        "number",
        2,
        "Chainage of the highest ground, from the intake.",
        lambda _, s: s.route.chainage_m[s.route.crest_index],
    ),
    Field(
        "crest_x",
        "map unit",
        "number",
        "map",
        "Map position of the highest ground, in the CRS of the DEM.",
        lambda _, s: s.route.x[s.route.crest_index],
    ),
    Field(
        "crest_y",
        "map unit",
        "number",
        "map",
        "Map position of the highest ground, in the CRS of the DEM.",
        lambda _, s: s.route.y[s.route.crest_index],
    ),
    Field(
        "lowest_level_m",
        "m",
        "number",
        3,
        "Lowest level of the water body at which the siphon must work.",
        lambda t, _: t.setting.lowest.water_m,
    ),
    Field("present_level_m", "m", "number", 3, "Level of the water body now.", lambda t, _: t.setting.present.water_m),
    Field("receiving_level_m", "m", "number", 3, "The higher of outlet axis and tailwater.", receiving_level),
    Field(
        "lift_m",
        "m",
        "number",
        3,
        "Crown at the crest above the lowest level.",
        lambda _, s: s.appraisal.lift_m,
        Shown("lift", "m", 1.0, "two"),
    ),
    Field("fall_m", "m", "number", 3, "Lowest level above the receiving level.", lambda _, s: s.appraisal.fall_m),
    Field(
        "present_lift_m",
        "m",
        "number",
        3,
        "Crown at the crest above the present level.",
        lambda _, s: s.appraisal.present.lift_m,
    ),
    Field(
        "present_fall_m",
        "m",
        "number",
        3,
        "Present level above the receiving level.",
        lambda _, s: s.appraisal.present.fall_m,
    ),
    Field(
        "high_points",
        "",
        "integer",
        None,
        "High points above the water surface other than the crest: air gathers there.",
        lambda _, s: len(s.appraisal.high_points),
    ),
)

PRESSURE_FIELDS: tuple[SchemeField, ...] = (
    Field(
        "reserve_m",
        "m",
        "number",
        3,
        "Metres of water asked to be kept between crown pressure and boiling.",
        lambda t, _: t.setting.limits.reserve_m,
    ),
    Field(
        "reserve_left_m",
        "m",
        "number",
        3,
        "Metres of water left above that reserve at duty and lowest level; negative: missing.",
        lambda _, s: s.appraisal.reserve_left_m,
        Shown("reserve", "left, m", 1.0, "two"),
    ),
    Field(
        "governing_chainage_m",
        "m",
        "number",
        2,
        "Chainage at which the reserve left is least.",
        lambda _, s: s.appraisal.duty.governing_chainage_m,
    ),
    Field(
        "least_crown_pressure_pa",
        "Pa",
        "number",
        0,
        "Lowest absolute pressure at the crown, at duty and lowest level.",
        _least_pressure,
    ),
    Field("lift_share", "", "number", 3, "Lift as a share of the barometric head.", _lift_share),
    Field(
        "least_inside_pressure_pa",
        "Pa",
        "number",
        0,
        "Lowest absolute pressure inside the pipe that its wall is checked for.",
        lambda _, s: s.appraisal.least_inside_pressure_pa,
    ),
    Field(
        "collapse_pressure_pa",
        "Pa",
        "number",
        0,
        "Outside over inside pressure at which the wall would buckle; empty where the pipe data do not say.",
        lambda _, s: s.appraisal.collapse_pressure_pa,
    ),
    Field(
        "breaking_level_m",
        "m",
        "number",
        3,
        "Level of the water body at which the siphon stops.",
        lambda _, s: s.appraisal.breaking_level_m,
    ),
    Field(
        "breaking_cause",
        "",
        "text",
        None,
        "Why it stops there: `suction` (the limit leaves no flow), `outlet` (level with it), `intake` (may draw air).",
        lambda _, s: s.appraisal.largest.breaking_cause,
    ),
)
