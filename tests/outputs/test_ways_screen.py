import io
from dataclasses import replace

import pytest
from rich.console import Console, Group

from routing.outputs.screen import summary
from routing.outputs.ways_screen import least_bad_parts, ways_parts


def shown(parts, width=100):
    console = Console(file=io.StringIO(), width=width)
    console.print(Group(*parts))
    return console.file.getvalue()


@pytest.fixture
def plan(make):
    return make.beside()


def test_the_best_scheme_over_each_crossing_in_one_line(plan):
    lines = shown(ways_parts(plan)).splitlines()
    assert lines[1].strip() == "Other ways over"
    assert [line.split()[:3] for line in lines[4:6]] == [["1", "R1", "C1"], ["3", "R2", "C2"]]
    assert lines[4].split()[-6:] == ["281", "3.72", "2.32", "19,800", "fit", "suction"]
    assert lines[6].rstrip() == (
        "- C3, at least 391 m, ground 4.10 m above the lowest level: no way on from it keeps to the limits"
    )
    assert lines[7].strip() == "2 of 3 places on the divide have a route."
    assert len(lines) == 9


@pytest.mark.parametrize(
    ("kept", "expected"),
    [
        ((0, 1, 2), "3 paths found, 2 of them not among the routes"),
        ((0, 2), "2 paths found, none of them among the routes"),
        ((0,), "1 path found, not among the routes"),
        ((1,), "1 path found, among the routes"),
    ],
)
def test_weights_in_one_line(plan, kept, expected):
    text = shown(ways_parts(replace(plan, samples=tuple(plan.samples[k] for k in kept))))
    assert f"Weights tried: {expected}; see samples.csv." in text.splitlines()[-1]


def test_a_single_way_over_is_not_said_again(plan):
    alone = replace(plan, crossings=plan.crossings[:1], samples=(), crossings_note="1 place can be crossed.")
    assert shown(ways_parts(alone)).split("\n")[1:-1] == ["Other ways over", "1 place can be crossed."]


def test_a_crossing_whose_schemes_are_gone_is_not_passed_over(plan):
    gone = replace(plan, schemes=plan.schemes[:2])
    assert "- C2, at least 306 m, ground 3.50 m above the lowest level: no scheme goes over it" in shown(
        ways_parts(gone)
    )


def test_nothing_known_makes_no_section(make):
    assert ways_parts(make.plan()) == []
    assert least_bad_parts(make.plan()) == []


def test_least_bad_routes_only_where_none_is_feasible(make, plan):
    assert least_bad_parts(plan) == []
    lines = [line.rstrip() for line in shown(least_bad_parts(make.beside_no_route())).splitlines()]
    assert lines[1] == "Least bad routes"
    assert lines[2].endswith("m, 1 x PE 250 SDR 17: needs 0.80 m of trench, level or reserve")
    assert lines[2].startswith("- R2 over C2, 306 m, lift ")
    assert lines[3].startswith("- R3, ")
    assert lines[3].endswith("1 x PE 315 SDR 17: needs 1.00 m of trench, level or reserve")
    assert max(map(len, lines)) <= 100


def test_a_plan_without_any_route_has_no_least_bad_one(make):
    assert least_bad_parts(make.plan(schemes=())) == []


def test_sections_of_the_screen_in_order(make, plan):
    text = shown([summary(plan)])
    places = [text.index(name) for name in ("Scheme 1", "Choice of ends", "Other ways over", "No route for")]
    assert places == sorted(places)
    assert "The outlet was chosen among 41 places" in text
    none = shown([summary(make.beside_no_route())])
    assert none.index("Other ways over") < none.index("Least bad routes") < none.index("No route for")
    assert "Choice of ends" not in shown([summary(make.plan())])
    for lines in (text.splitlines(), none.splitlines()):
        assert max(len(line.rstrip()) for line in lines) <= 100


def test_names_and_notes_are_not_read_as_markup(plan):
    odd = replace(plan, crossings_note="see [bold]a[/]", choice_notes=("[red]x[/]",))
    text = shown([summary(odd)])
    assert "See [bold]a[/]." in text
    assert "[red]x[/]" in text
