"""GeoJSON layers per RFC 7946: routes, water body, zones, points, samples.

WGS 84 longitude and latitude with 7 decimals, two ordinates, no ``crs`` member, flat scalar properties. Levels
are properties in the DEM's own datum: a third ordinate would have to be a height above the ellipsoid (section 4).
Written with plain ``json``, since a table library would take longer to load than all of this takes to run.
"""

from __future__ import annotations

import json
from typing import Any

from routing.outputs.field import row
from routing.outputs.fields import SCHEME_FIELDS
from routing.outputs.geometry import Drawn, draw_line, draw_point, draw_polygon
from routing.outputs.lonlat import LonLat, joined
from routing.outputs.other_fields import WATER_FIELDS, ZONE_FIELDS
from routing.outputs.point_fields import POINT_FIELDS, MapPoint
from routing.outputs.values import Value
from routing.outputs.ways import own_samples
from routing.outputs.ways_fields import SAMPLE_FIELDS
from routing.records import Plan, Route

Layer = dict[str, Any]


def routes_layer(plan: Plan) -> Layer:
    """Return the schemes as a FeatureCollection: one feature a scheme, its route as geometry.

    Raises
    ------
    OutputError
        If the routes cannot be placed in WGS 84.
    """
    lonlat = LonLat(plan.terrain.facts.crs_wkt)
    drawn = {route.name: draw_line(route.line, lonlat) for route in routes_of(plan)}
    return _layer(
        [
            (f"scheme-{scheme.rank}", drawn[scheme.route.name], row(SCHEME_FIELDS, plan, scheme))
            for scheme in plan.schemes
        ]
    )


def water_layer(plan: Plan) -> Layer:
    """Return the water body as a FeatureCollection of one polygon feature (none where there is no shoreline).

    Raises
    ------
    OutputError
        If the shoreline cannot be placed in WGS 84.
    """
    body = plan.water_body
    if body.shoreline.is_empty:
        return _layer([])
    drawn = draw_polygon(body.shoreline, LonLat(plan.terrain.facts.crs_wkt))
    return _layer([("water-body", drawn, row(WATER_FIELDS, plan, body))])


def zones_layer(plan: Plan) -> Layer:
    """Return the zones as a FeatureCollection: one feature a zone, as mended and joined; none where there are none.

    Raises
    ------
    OutputError
        If a zone cannot be placed in WGS 84.
    """
    lonlat = LonLat(plan.terrain.facts.crs_wkt)
    return _layer(
        [
            (f"zone-{number}", draw_polygon(zone.shape, lonlat), row(ZONE_FIELDS, plan, zone))
            for number, zone in enumerate(plan.zones, start=1)
        ]
    )


def samples_layer(plan: Plan) -> Layer:
    """Return the candidates by weights that no scheme runs on, one line feature each; none where there are none.

    Raises
    ------
    OutputError
        If a route cannot be placed in WGS 84.
    """
    lonlat = LonLat(plan.terrain.facts.crs_wkt)
    return _layer(
        [
            (f"sample-{own.number}", draw_line(own.sample.route.line, lonlat), row(SAMPLE_FIELDS, plan, own))
            for own in own_samples(plan)
        ]
    )


def points_layer(plan: Plan) -> Layer:
    """Return intake, outlet, the crest of each route, the crossings, the lowest crest and the spill as Point features.

    Intake and outlet are those of the best scheme; where they were left open, each route's own are there too.

    Raises
    ------
    OutputError
        If a point cannot be placed in WGS 84.
    """
    lonlat = LonLat(plan.terrain.facts.crs_wkt)
    return _layer(
        [
            (ident, draw_point(point.x, point.y, lonlat), row(POINT_FIELDS, plan, point))
            for ident, point in _points(plan).items()
        ]
    )


def routes_of(plan: Plan) -> list[Route]:
    """Return each route of the plan once, in the order of the ranking."""
    found: dict[str, Route] = {}
    for scheme in plan.schemes:
        found.setdefault(scheme.route.name, scheme.route)
    return list(found.values())


def _points(plan: Plan) -> dict[str, MapPoint]:
    setting = plan.setting
    points = {
        "intake": MapPoint("intake", "intake", setting.intake.x, setting.intake.y, setting.lowest.intake_mouth_m),
        "outlet": MapPoint("outlet", "outlet", setting.outlet.x, setting.outlet.y, setting.lowest.outlet_m),
    }
    for route in routes_of(plan):
        points |= _own_ends(plan, route)
        k = route.crest_index
        points[f"crest-{route.name}"] = MapPoint(
            "crest",
            f"highest ground on route {route.name}",
            float(route.x[k]),
            float(route.y[k]),
            route.crest_m,
            route.name,
            float(route.chainage_m[k]),
        )
    for crossing in plan.crossings:
        points[f"crossing-{crossing.name}"] = MapPoint(
            "crossing", crossing.name, crossing.x, crossing.y, crossing.level_m, crossing=crossing
        )
    saddles = (
        ("lowest-crest", "lowest crest", "lowest possible crest between water and outlet", plan.lowest_crest),
        ("spill", "spill", "where the water body would overflow", plan.water_body.spill),
    )
    for ident, kind, name, saddle in saddles:
        if saddle is not None:
            points[ident] = MapPoint(kind, name, saddle.x, saddle.y, saddle.level_m, proven=saddle.proven)
    return points


def _own_ends(plan: Plan, route: Route) -> dict[str, MapPoint]:
    """Return the ends of a route, where they were left open."""
    name, points = route.name, {}
    if plan.site.intake.kind != "point":
        place = float(route.x[0]), float(route.y[0])
        points[f"intake-{name}"] = MapPoint("intake", f"intake of route {name}", *place, route.mouth_m, name, 0.0)
    if plan.site.outlet.kind != "point":
        place = float(route.x[-1]), float(route.y[-1])
        points[f"outlet-{name}"] = MapPoint(
            "outlet", f"outlet of route {name}", *place, route.outlet_m, name, route.length_m
        )
    return points


def _layer(features: list[tuple[str, Drawn, dict[str, Value]]]) -> Layer:
    layer: Layer = {"type": "FeatureCollection"}
    if features:
        layer["bbox"] = joined([drawn.extent for _, drawn, _ in features]).bbox()
    layer["features"] = [
        {
            "type": "Feature",
            "id": ident,
            **({} if drawn.geometry["type"] == "Point" else {"bbox": drawn.extent.bbox()}),
            "properties": properties,
            "geometry": drawn.geometry,
        }
        for ident, drawn, properties in features
    ]
    return layer


def layer_text(layer: Layer) -> str:
    """Return a layer as text, one feature a line.

    Raises
    ------
    ValueError
        If a NaN or an infinity got in: a fault of ours.
    """
    features = [json.dumps(feature, allow_nan=False, ensure_ascii=False) for feature in layer["features"]]
    head = {name: value for name, value in layer.items() if name != "features"}
    opening = json.dumps(head, allow_nan=False, ensure_ascii=False)[:-1]
    body = ",\n".join(features)
    return f'{opening}, "features": [\n{body}\n]}}\n' if features else f'{opening}, "features": []}}\n'
