"""The ends of each route: fields, points on the map, and the first of equal names."""

from __future__ import annotations

from dataclasses import replace

import pytest

from routing.outputs.end_fields import END_FIELDS
from routing.outputs.field import row
from routing.outputs.fields import SCHEME_FIELDS
from routing.outputs.geojson import points_layer, routes_of


def opened(plan, intake="shore", outlet="line"):
    """The plan with its ends left open, and the outlet of the second route at another level."""
    site = replace(
        plan.site, intake=replace(plan.site.intake, kind=intake), outlet=replace(plan.site.outlet, kind=outlet)
    )
    names = list(dict.fromkeys(scheme.route.name for scheme in plan.schemes))
    schemes = tuple(
        replace(one, route=replace(one.route, outlet_m=90.0 + names.index(one.route.name), mouth_m=95.5))
        for one in plan.schemes
    )
    return replace(plan, site=site, schemes=schemes)


def test_ends_are_those_of_the_route(plan):
    scheme = opened(plan).schemes[0]
    found = row(END_FIELDS, plan, scheme)
    route = scheme.route
    assert found["intake_x"] == pytest.approx(route.x[0], abs=1e-3)
    assert found["intake_y"] == pytest.approx(route.y[0], abs=1e-3)
    assert found["outlet_x"] == pytest.approx(route.x[-1], abs=1e-3)
    assert found["outlet_y"] == pytest.approx(route.y[-1], abs=1e-3)
    assert (found["outlet_level_m"], found["intake_mouth_level_m"]) == (90.0, 95.5)
    assert found["underwater_length_m"] == 12.5


def test_levels_that_a_route_does_not_carry_are_those_of_the_setting(plan):
    scheme = plan.schemes[0]
    found = row(END_FIELDS, plan, replace(scheme, route=replace(scheme.route, underwater_length_m=None)))
    assert found["outlet_level_m"] == pytest.approx(plan.setting.lowest.outlet_m, abs=1e-3)
    assert found["intake_mouth_level_m"] == plan.setting.lowest.intake_mouth_m
    assert found["underwater_length_m"] is None


@pytest.mark.parametrize(("tailwater", "receiving"), [(None, 90.0), (89.0, 90.0), (91.5, 91.5)])
def test_the_receiving_level_is_that_of_the_own_outlet(plan, tailwater, receiving):
    lowest = replace(plan.setting.lowest, tailwater_m=tailwater)
    told = replace(opened(plan), setting=replace(plan.setting, lowest=lowest))
    assert row(SCHEME_FIELDS, told, told.schemes[0])["receiving_level_m"] == receiving


def test_each_route_has_points_of_its_own_where_ends_were_left_open(plan):
    told = opened(plan)
    by_id = {feature["id"]: feature["properties"] for feature in points_layer(told)["features"]}
    for route in routes_of(told):
        intake, outlet = by_id[f"intake-{route.name}"], by_id[f"outlet-{route.name}"]
        assert (intake["kind"], intake["route"], intake["chainage_m"], intake["level_m"]) == (
            "intake",
            route.name,
            0,
            95.5,
        )
        assert (outlet["kind"], outlet["level_m"]) == ("outlet", route.outlet_m)
        assert outlet["chainage_m"] == pytest.approx(route.length_m, abs=0.01)
        assert (outlet["x"], outlet["y"]) == (
            pytest.approx(route.x[-1], abs=1e-3),
            pytest.approx(route.y[-1], abs=1e-3),
        )
    assert {"intake", "outlet"} <= set(by_id)


def test_points_of_fixed_ends_are_told_once(plan):
    told = opened(plan, intake="point", outlet="anywhere")
    ids = {feature["id"] for feature in points_layer(told)["features"]}
    assert not [name for name in ids if name.startswith("intake-")]
    assert [name for name in ids if name.startswith("outlet-")]
    assert not [f["id"] for f in points_layer(plan)["features"] if f["id"].startswith(("intake-", "outlet-"))]


def test_of_routes_of_one_name_the_best_schemes_is_told(plan):
    first = plan.schemes[0]
    other = replace(first, rank=99, route=replace(first.route, outlet_m=1.0))
    told = replace(plan, schemes=(*plan.schemes, other))
    found = next(route for route in routes_of(told) if route.name == first.route.name)
    assert found.outlet_m == first.route.outlet_m
