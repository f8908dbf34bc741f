from dataclasses import replace

from routing.outputs.pictures.subject import overview, single_routes


def test_the_overview_has_all_routes_and_the_best_scheme(plan):
    subject = overview(plan)
    assert [route.name for route in subject.routes] == ["R1", "R2"]
    assert subject.scheme is plan.schemes[0]
    assert overview(replace(plan, schemes=())).scheme is None


def test_each_route_has_the_best_scheme_on_it(everything):
    first, second = single_routes(everything)
    assert (first.name, first.scheme.rank) == ("R1", 1)
    assert (second.name, second.scheme.rank) == ("R2", 3)
    assert [crossing.name for crossing in second.crossings] == ["C2"]
    assert len(overview(everything).crossings) == 3
