"""The dictionary of output fields: every name, unit and meaning that a file, a table or a screen shows.

``SCHEME_FIELDS`` drives the properties of ``routes.geojson``, the columns of ``schemes.csv``, the table on the
terminal, the scheme entries of ``run.json`` and the reference page. ``TABLES`` holds the fields of every file.
"""

from __future__ import annotations

from typing import Any

from routing.outputs.end_fields import END_FIELDS
from routing.outputs.field import Field, Shown, Told
from routing.outputs.hydraulic_fields import DISCHARGE_FIELDS, GEOMETRY_FIELDS, PRESSURE_FIELDS
from routing.outputs.other_fields import (
    CHECK_FIELDS,
    COST_FIELDS,
    SECTION_FIELDS,
    WATER_FIELDS,
    ZONE_FIELDS,
)
from routing.outputs.point_fields import POINT_FIELDS
from routing.outputs.ways_fields import CROSSING_FIELDS, SAMPLE_FIELDS
from routing.records import Scheme

SchemeField = Field[Scheme]


def _made(_: Told, scheme: Scheme) -> int:
    return len(scheme.verdict.checks) - len(scheme.verdict.not_made)


_IDENTITY: tuple[SchemeField, ...] = (
    Field(
        "rank",
        "",
        "integer",
        None,
        "Place in the ranking, 1 is the best.",
        lambda _, s: s.rank,
        Shown("#", style="count"),
    ),
    Field(
        "route", "", "text", None, "Name of the route, in the order found.", lambda _, s: s.route.name, Shown("route")
    ),
    Field(
        "crossing",
        "",
        "text",
        None,
        "Name of the crossing that the route takes, as in `crossings.csv`; empty where none is known.",
        lambda _, s: s.route.crossing or None,
    ),
    Field("pipe", "", "text", None, "Name of the pipe in the site file.", lambda _, s: s.pipe.name, Shown("pipe")),
    Field("material", "", "text", None, "Material of the pipe.", lambda _, s: s.pipe.material),
    Field("outside_diameter_mm", "mm", "number", 1, "Outside diameter.", lambda _, s: 1e3 * s.pipe.outside_diameter_m),
    Field("wall_mm", "mm", "number", 2, "Mean wall, from which the bore follows.", lambda _, s: 1e3 * s.pipe.wall_m),
    Field("bore_mm", "mm", "number", 1, "Inside diameter.", lambda _, s: 1e3 * s.pipe.bore_m),
    Field(
        "count",
        "",
        "integer",
        None,
        "Number of equal pipes side by side.",
        lambda _, s: s.count,
        Shown("n", style="count"),
    ),
)

_VERDICT: tuple[SchemeField, ...] = (
    Field(
        "verdict",
        "",
        "text",
        None,
        "`fit`, `caution` or `unfit`; as bad as the worst check, at duty and lowest level.",
        lambda _, s: s.verdict.grade,
    ),
    Field(
        "verdict_of_made",
        "",
        "text",
        None,
        "The verdict with the checks not made left out.",
        lambda _, s: s.verdict.grade_of_made,
    ),
    Field(
        "governs_verdict",
        "",
        "text",
        None,
        "Name of the check that decides the verdict.",
        lambda _, s: s.verdict.governing.name,
    ),
    Field("verdict_reason", "", "text", None, "Why the verdict is what it is.", lambda _, s: s.verdict.reason),
    Field("checks_made", "", "integer", None, "How many checks were made.", _made),
    Field(
        "checks_not_made",
        "",
        "integer",
        None,
        "How many checks were not made; each is listed in `checks.csv`.",
        lambda _, s: len(s.verdict.not_made),
    ),
)

_COST: tuple[SchemeField, ...] = (
    Field(
        "cost_total",
        "currency",
        "number",
        2,
        "Cost of the scheme: the sum of its lines in `costs.csv`; 0 where nothing has a price.",
        lambda _, s: s.cost.total,
        Shown("cost", style="three figures"),
    ),
    Field("currency", "", "text", None, "Currency of the price list.", lambda _, s: s.cost.currency),
    Field("price_date", "", "text", None, "Date of the price list.", lambda _, s: s.cost.date),
    Field(
        "prices_invented",
        "",
        "flag",
        None,
        "Whether the prices are invented examples: then no cost here means anything.",
        lambda _, s: s.cost.invented,
    ),
)

_PROOF: tuple[SchemeField, ...] = (
    Field(
        "graph_length_m",
        "m",
        "number",
        2,
        "Length of the route on the search graph.",
        lambda _, s: s.route.proof.graph_length_m,
    ),
    Field(
        "free_ratio",
        "",
        "number",
        4,
        "Longest that a shortest graph path can be over the straight line on free ground.",
        lambda _, s: s.route.proof.free_ratio,
    ),
    Field(
        "search_discharge_low_m3s",
        "m3/s",
        "number",
        6,
        "Largest discharge of one pipe over any route: the search proved at least this.",
        lambda _, s: s.route.proof.discharge_low_m3s,
    ),
    Field(
        "search_discharge_high_m3s",
        "m3/s",
        "number",
        6,
        "Largest discharge of one pipe over any route: the search proved at most this.",
        lambda _, s: s.route.proof.discharge_high_m3s,
    ),
    Field(
        "proven_whole_dem",
        "",
        "flag",
        None,
        "Whether the proof holds for the whole DEM, not only for the window read.",
        lambda _, s: s.route.proof.whole_dem,
    ),
    Field("proof", "", "text", None, "How good the route is known to be.", lambda _, s: s.route.proof.text),
)

#: Every field of a scheme, in the order of the files.
SCHEME_FIELDS: tuple[SchemeField, ...] = (
    *_IDENTITY, *_VERDICT, *DISCHARGE_FIELDS, *GEOMETRY_FIELDS, *END_FIELDS, *PRESSURE_FIELDS, *_COST, *_PROOF,
)  # fmt: skip

#: The fields of every file, by file and by name.
TABLES: dict[str, dict[str, Field[Any]]] = {
    file: {field.name: field for field in fields}
    for file, fields in (
        ("schemes.csv", SCHEME_FIELDS),
        ("sections.csv", SECTION_FIELDS),
        ("checks.csv", CHECK_FIELDS),
        ("costs.csv", COST_FIELDS),
        ("crossings.csv", CROSSING_FIELDS),
        ("samples.csv", SAMPLE_FIELDS),
        ("water.geojson", WATER_FIELDS),
        ("zones.geojson", ZONE_FIELDS),
        ("points.geojson", POINT_FIELDS),
    )
}
