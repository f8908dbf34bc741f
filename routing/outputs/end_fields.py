"""Fields of a scheme that say where its route begins and ends: with ends left open, each route has its own."""

from __future__ import annotations

from routing.outputs.field import Field, Told
from routing.records import Scheme

SchemeField = Field[Scheme]


def _outlet_level(told: Told, scheme: Scheme) -> float:
    level = scheme.route.outlet_m
    return told.setting.lowest.outlet_m if level is None else level


def receiving_level(told: Told, scheme: Scheme) -> float:
    """Return the higher of the outlet's axis and the tailwater, for the outlet that the route ends at."""
    tailwater, outlet = told.setting.lowest.tailwater_m, _outlet_level(told, scheme)
    return outlet if tailwater is None else max(outlet, tailwater)


END_FIELDS: tuple[SchemeField, ...] = (
    Field(
        "intake_x",
        "map unit",
        "number",
        "map",
        "Map position of the intake; with a stated underwater length that of the shore.",
        lambda _, s: s.route.x[0],
    ),
    Field(
        "intake_y",
        "map unit",
        "number",
        "map",
        "Map position of the intake; with a stated underwater length that of the shore.",
        lambda _, s: s.route.y[0],
    ),
    Field(
        "intake_mouth_level_m",
        "m",
        "number",
        3,
        "Level of the top of the intake mouth; empty where it is not known.",
        lambda t, s: t.setting.lowest.intake_mouth_m if s.route.mouth_m is None else s.route.mouth_m,
    ),
    Field(
        "underwater_length_m",
        "m",
        "number",
        2,
        "Part of the length from the mouth to the shore at the lowest level; empty where the intake is a point.",
        lambda _, s: s.route.underwater_length_m,
    ),
    Field("outlet_x", "map unit", "number", "map", "Map position of the outlet.", lambda _, s: s.route.x[-1]),
    Field("outlet_y", "map unit", "number", "map", "Map position of the outlet.", lambda _, s: s.route.y[-1]),
    Field("outlet_level_m", "m", "number", 3, "Level of the outlet's axis.", _outlet_level),
)
