"""Fields of the files beside the schemes: long sections, checks, cost lines, water body, zones."""

from __future__ import annotations

from dataclasses import dataclass

from routing.outputs.field import Field
from routing.records import Check, CostLine, Route, Scheme, WaterBody, Zone

#: What stands in place of a grade for a check that was not made.
NOT_MADE = "not made"


@dataclass(frozen=True, slots=True)
class SectionRow:
    """One sample of a long section, with what the best scheme of the route has there."""

    route: Route
    index: int
    scheme: Scheme
    crown_m: float
    ceiling_m: float
    crown_pressure_pa: float


@dataclass(frozen=True, slots=True)
class CheckRow:
    """A check with the scheme that it belongs to."""

    scheme: Scheme
    check: Check


@dataclass(frozen=True, slots=True)
class CostRow:
    """A cost line with the scheme that it belongs to."""

    scheme: Scheme
    line: CostLine


SECTION_FIELDS: tuple[Field[SectionRow], ...] = (
    Field("route", "", "text", None, "Name of the route.", lambda _, r: r.route.name),
    Field(
        "chainage_m",
        "m",
        "number",
        3,
        "Distance along the ground from the intake.",
        lambda _, r: r.route.chainage_m[r.index],
    ),
    Field("x", "map unit", "number", "map", "Map position in the CRS of the DEM.", lambda _, r: r.route.x[r.index]),
    Field("y", "map unit", "number", "map", "Map position in the CRS of the DEM.", lambda _, r: r.route.y[r.index]),
    Field("ground_m", "m", "number", 3, "Ground level.", lambda _, r: r.route.ground_m[r.index]),
    Field(
        "scheme",
        "",
        "integer",
        None,
        "Rank of the best scheme on the route: the columns after this one are its own.",
        lambda _, r: r.scheme.rank,
    ),
    Field("crown_m", "m", "number", 3, "Level of the top of the bore.", lambda _, r: r.crown_m),
    Field(
        "ceiling_m",
        "m",
        "number",
        3,
        "Highest level that the crown may have there, at duty and lowest level.",
        lambda _, r: r.ceiling_m,
    ),
    Field(
        "crown_pressure_pa",
        "Pa",
        "number",
        0,
        "Absolute pressure at the crown, at duty and lowest level.",
        lambda _, r: r.crown_pressure_pa,
    ),
)

CHECK_FIELDS: tuple[Field[CheckRow], ...] = (
    Field("scheme", "", "integer", None, "Rank of the scheme.", lambda _, r: r.scheme.rank),
    Field("route", "", "text", None, "Name of the route.", lambda _, r: r.scheme.route.name),
    Field("pipe", "", "text", None, "Name of the pipe.", lambda _, r: r.scheme.pipe.name),
    Field("count", "", "integer", None, "Number of pipes.", lambda _, r: r.scheme.count),
    Field("check", "", "text", None, "Name of the check.", lambda _, r: r.check.name),
    Field("title", "", "text", None, "What is checked.", lambda _, r: r.check.title),
    Field(
        "grade",
        "",
        "text",
        None,
        f"`fit`, `caution`, `unfit`, or `{NOT_MADE}`.",
        lambda _, r: r.check.grade or NOT_MADE,
    ),
    Field(
        "governs",
        "",
        "flag",
        None,
        "Whether this check decides the verdict.",
        lambda _, r: r.check.name == r.scheme.verdict.governing.name,
    ),
    Field("figure", "as `unit`", "number", None, "What was found.", lambda _, r: r.check.figure),
    Field("limit", "as `unit`", "number", None, "What is allowed.", lambda _, r: r.check.limit),
    Field("unit", "", "text", None, "Unit of figure, limit and reserve.", lambda _, r: r.check.unit),
    Field(
        "reserve",
        "as `unit`",
        "number",
        None,
        "What is left to the limit; negative: missing.",
        lambda _, r: r.check.reserve,
    ),
    Field("reason", "", "text", None, "The finding in words.", lambda _, r: r.check.reason),
    Field("source", "", "text", None, "Where the limit comes from.", lambda _, r: r.check.source),
)

COST_FIELDS: tuple[Field[CostRow], ...] = (
    Field("scheme", "", "integer", None, "Rank of the scheme.", lambda _, r: r.scheme.rank),
    Field("route", "", "text", None, "Name of the route.", lambda _, r: r.scheme.route.name),
    Field("pipe", "", "text", None, "Name of the pipe.", lambda _, r: r.scheme.pipe.name),
    Field("count", "", "integer", None, "Number of pipes.", lambda _, r: r.scheme.count),
    Field("item", "", "text", None, "What is paid for.", lambda _, r: r.line.text),
    Field("quantity", "as `unit`", "number", 3, "How much of it.", lambda _, r: r.line.quantity),
    Field("unit", "", "text", None, "Unit of the quantity.", lambda _, r: r.line.unit),
    Field("rate", "currency per unit", "number", 4, "Price of one unit.", lambda _, r: r.line.rate),
    Field("amount", "currency", "number", 2, "Quantity times rate.", lambda _, r: r.line.amount),
    Field("currency", "", "text", None, "Currency of the price list.", lambda _, r: r.scheme.cost.currency),
    Field(
        "prices_invented",
        "",
        "flag",
        None,
        "Whether the prices are invented examples.",
        lambda _, r: r.scheme.cost.invented,
    ),
)

WATER_FIELDS: tuple[Field[WaterBody], ...] = (
    Field("kind", "", "text", None, "Always `water body`.", lambda _, __: "water body"),
    Field("level_m", "m", "number", 3, "Level that it was found at, in the datum of the DEM.", lambda _, b: b.level_m),
    Field(
        "area_m2",
        "m2",
        "number",
        0,
        "Area of the water surface; a part only where the DEM cuts it.",
        lambda _, b: b.area_m2,
    ),
    Field(
        "source",
        "",
        "text",
        None,
        "`level` (flooded from the intake) or `polygon` (given by the user).",
        lambda _, b: b.source,
    ),
    Field("void_cells", "", "integer", None, "Cells without data that the water encloses.", lambda _, b: b.void_cells),
    Field(
        "touches_dem_edge",
        "",
        "flag",
        None,
        "Whether the DEM ends in the water: the area is then a part only.",
        lambda _, b: b.touches_edge,
    ),
    Field(
        "touches_window_edge",
        "",
        "flag",
        None,
        "Whether the window read ends in the water though the DEM goes on: the area is then a part only.",
        lambda _, b: b.touches_open_border,
    ),
    Field(
        "spill_level_m",
        "m",
        "number",
        3,
        "Level at which it would overflow; empty where that is unknown.",
        lambda _, b: None if b.spill is None else b.spill.level_m,
    ),
    Field(
        "spill_x",
        "map unit",
        "number",
        "map",
        "Where it would overflow, in the CRS of the DEM.",
        lambda _, b: None if b.spill is None else b.spill.x,
    ),
    Field(
        "spill_y",
        "map unit",
        "number",
        "map",
        "Where it would overflow, in the CRS of the DEM.",
        lambda _, b: None if b.spill is None else b.spill.y,
    ),
    Field(
        "spill_towards",
        "",
        "text",
        None,
        "Whether it overflows towards the `outlet` or the `edge` of the DEM.",
        lambda _, b: None if b.spill is None else b.spill.towards,
    ),
    Field(
        "spill_proven",
        "",
        "flag",
        None,
        "Whether a lower overflow outside the window read is ruled out.",
        lambda _, b: None if b.spill is None else b.spill.proven,
    ),
)

ZONE_FIELDS: tuple[Field[Zone], ...] = (
    Field("zone", "", "text", None, "Name of the zone in the site file.", lambda _, z: z.name),
    Field("kind", "", "text", None, "`barred` (routes keep out) or `cost`.", lambda _, z: z.kind),
    Field(
        "cost_factor",
        "",
        "number",
        3,
        "What the price of laying is multiplied by there; empty for a barred zone.",
        lambda _, z: z.cost_factor if z.kind == "cost" else None,
    ),
    Field(
        "polygons",
        "",
        "integer",
        None,
        "How many polygons it has after mending and joining.",
        lambda _, z: len(getattr(z.shape, "geoms", (z.shape,))),
    ),
)
