"""Fields of the points of a plan: ends, crests, crossings, saddles."""

from __future__ import annotations

from dataclasses import dataclass

from routing.outputs.field import Field
from routing.records import Crossing


@dataclass(frozen=True, slots=True)
class MapPoint:
    """A point of ``points.geojson``: map position in the DEM's CRS; ``None`` where a thing does not apply."""

    kind: str
    name: str
    x: float
    y: float
    level_m: float | None
    route: str | None = None
    chainage_m: float | None = None
    proven: bool | None = None
    crossing: Crossing | None = None


POINT_FIELDS: tuple[Field[MapPoint], ...] = (
    Field(
        "kind",
        "",
        "text",
        None,
        "`intake`, `outlet`, `crest`, `crossing`, `lowest crest` or `spill`.",
        lambda _, p: p.kind,
    ),
    Field("name", "", "text", None, "What the point is; the name of a crossing.", lambda _, p: p.name),
    Field("route", "", "text", None, "Name of the route, for a crest.", lambda _, p: p.route),
    Field("chainage_m", "m", "number", 2, "Chainage on that route.", lambda _, p: p.chainage_m),
    Field(
        "level_m",
        "m",
        "number",
        3,
        "Level in the datum of the DEM: ground at crests and saddles, mouth at the intake, axis at the outlet.",
        lambda _, p: p.level_m,
    ),
    Field("x", "map unit", "number", "map", "Map position in the CRS of the DEM.", lambda _, p: p.x),
    Field("y", "map unit", "number", "map", "Map position in the CRS of the DEM.", lambda _, p: p.y),
    Field(
        "proven",
        "",
        "flag",
        None,
        "For a saddle: whether a lower one outside the window read is ruled out.",
        lambda _, p: p.proven,
    ),
    Field(
        "length_m",
        "m",
        "number",
        2,
        "For a crossing: shortest way on the grid over this very cell; a route a little beside it may be shorter.",
        lambda _, p: None if p.crossing is None else p.crossing.length_m,
    ),
    Field(
        "lift_m",
        "m",
        "number",
        3,
        "For a crossing: ground there above the lowest level.",
        lambda _, p: None if p.crossing is None else p.crossing.lift_m,
    ),
    Field(
        "used",
        "",
        "flag",
        None,
        "For a crossing: whether a route over it was found and appraised.",
        lambda _, p: None if p.crossing is None else p.crossing.used,
    ),
    Field(
        "note",
        "",
        "text",
        None,
        "For a crossing: why it was used, or why not.",
        lambda _, p: None if p.crossing is None else p.crossing.note,
    ),
)
