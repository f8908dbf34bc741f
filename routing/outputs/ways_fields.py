"""Fields of what stands beside the ranking: crossings, and candidates by weights."""

from __future__ import annotations

from routing.outputs.field import Field
from routing.outputs.ways import CrossingRow, SampleRow

CROSSING_FIELDS: tuple[Field[CrossingRow], ...] = (
    Field(
        "crossing", "", "text", None, "Name of the crossing, from the shortest way on.", lambda _, r: r.crossing.name
    ),
    Field("x", "map unit", "number", "map", "Map position in the CRS of the DEM.", lambda _, r: r.crossing.x),
    Field("y", "map unit", "number", "map", "Map position in the CRS of the DEM.", lambda _, r: r.crossing.y),
    Field("level_m", "m", "number", 3, "Ground level there, in the datum of the DEM.", lambda _, r: r.crossing.level_m),
    Field(
        "length_m",
        "m",
        "number",
        2,
        "Shortest way over this very cell on the grid, end to end; a route a little beside it may be shorter.",
        lambda _, r: r.crossing.length_m,
    ),
    Field("lift_m", "m", "number", 3, "Ground there above the lowest level.", lambda _, r: r.crossing.lift_m),
    Field("used", "", "flag", None, "Whether a route over it was found and appraised.", lambda _, r: r.crossing.used),
    Field(
        "scheme",
        "",
        "integer",
        None,
        "Rank of the best scheme over it; empty where there is none.",
        lambda _, r: None if r.best is None else r.best.rank,
    ),
    Field("schemes", "", "integer", None, "How many schemes go over it.", lambda _, r: r.schemes),
    Field("note", "", "text", None, "Why it was used, or why not.", lambda _, r: r.crossing.note),
)

SAMPLE_FIELDS: tuple[Field[SampleRow], ...] = (
    Field("sample", "", "integer", None, "Number of the candidate, in order of weight.", lambda _, r: r.number),
    Field(
        "weight",
        "1/m",
        "number",
        3,
        "Smallest weight that found it: metres of route that a metre over ground one metre too high counts for.",
        lambda _, r: r.sample.weight,
    ),
    Field("pipe", "", "text", None, "Name of the pipe that it was looked for with.", lambda _, r: r.sample.pipe),
    Field(
        "duty_m3s",
        "m3/s",
        "number",
        6,
        "Discharge asked of one pipe; empty where none is asked.",
        lambda _, r: r.sample.appraisal.duty_m3s,
    ),
    Field("route", "", "text", None, "Name of its route.", lambda _, r: r.sample.route.name),
    Field(
        "same_as",
        "",
        "text",
        None,
        "Name of the route of the schemes that is the same path; empty where none is.",
        lambda _, r: r.same_as or None,
    ),
    Field(
        "length_m",
        "m",
        "number",
        2,
        "Length along the ground, slopes included.",
        lambda _, r: r.sample.route.length_m,
    ),
    Field(
        "lift_m",
        "m",
        "number",
        3,
        "Crown at the crest above the lowest level.",
        lambda _, r: r.sample.appraisal.lift_m,
    ),
    Field("crest_m", "m", "number", 3, "Highest ground on it.", lambda _, r: r.sample.route.crest_m),
    Field(
        "discharge_m3s",
        "m3/s",
        "number",
        6,
        "Largest discharge of one pipe at the lowest level.",
        lambda _, r: r.sample.appraisal.discharge_m3s,
    ),
    Field(
        "reserve_left_m",
        "m",
        "number",
        3,
        "Metres of water left above the reserve at duty and lowest level; negative: missing.",
        lambda _, r: r.sample.appraisal.reserve_left_m,
    ),
    Field(
        "missing_m",
        "m",
        "number",
        3,
        "Trench depth, rise of the lowest level or cut of the reserve that would make it keep the limit; 0: none.",
        lambda _, r: r.missing_m,
    ),
    Field(
        "governing_chainage_m",
        "m",
        "number",
        2,
        "Chainage at which the reserve left is least.",
        lambda _, r: r.sample.appraisal.duty.governing_chainage_m,
    ),
    Field(
        "governing",
        "",
        "text",
        None,
        "Whether it works at duty and lowest level, and if not what it lacks and what would mend it.",
        lambda _, r: r.reason,
    ),
)
