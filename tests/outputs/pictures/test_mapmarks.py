"""Which routes are drawn each in its own way."""

from dataclasses import replace

from routing.outputs.pictures.framing import frame_of
from routing.outputs.pictures.mapmarks import named_routes
from routing.outputs.pictures.shapes import line_points
from routing.outputs.pictures.style import ROUTE_LOOKS
from routing.outputs.pictures.subject import overview


def named(make, bends, crossings=None):
    place, plan = make.place(), make.plan()
    routes = [make.route(f"R{k + 1}", place, bend) for k, bend in enumerate(bends)]
    if crossings:
        routes = [replace(route, crossing=name) for route, name in zip(routes, crossings, strict=True)]
    schemes = tuple(make.scheme(k + 1, route, plan.site.pipes[0], 1) for k, route in enumerate(routes))
    subject = overview(replace(plan, schemes=schemes))
    frame = frame_of(subject, 2.0)
    paths = {route.name: line_points(route.line, frame) for route in subject.routes}
    return [route.name for route in named_routes(subject, frame, paths)]


def test_routes_that_would_hide_each_other_are_one(make):
    assert named(make, [0.0, 1.0, 60.0, 61.0]) == ["R1", "R3"]


def test_no_more_than_there_are_looks_and_in_the_order_of_the_ranking(make):
    assert named(make, [12.0 * k for k in range(9)]) == [f"R{k + 1}" for k in range(len(ROUTE_LOOKS))]


def test_a_crossing_of_its_own_goes_before_a_better_rank(make):
    crossings = ["C1"] * 8 + ["C2"]
    assert named(make, [12.0 * k for k in range(9)], crossings) == ["R1", "R2", "R3", "R4", "R5", "R9"]


def test_no_route_no_name(make):
    assert named(make, []) == []
