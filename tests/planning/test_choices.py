"""Ends left open, once a route is the best: the setting they make, and how far another place must be."""

import re

import numpy as np
import pytest

ANYWHERE = {"x": None, "y": None, "level_m": None, "height_above_ground_m": 0.3, "kind": "anywhere"}
SHORE = {"kind": "shore", "underwater_length_m": 20.0, "mouth_level_m": None}
#: UTM shrinks lengths to 0.9996 at its central meridian, where the made jobs lie.
STEP = 10.0 / 0.9996


def valley(ground):
    z = ground.reservoir()
    z[:, 42:] = 90.0 - 0.05 * np.arange(38)
    z[5:35, 28:42] += 0.05 * np.abs(np.arange(5, 35) - 20)[:, None]  # lowest at row 20, steeper from there
    return z


@pytest.fixture
def plan(make_job, ground):
    return make_job(
        valley(ground), intake=SHORE, outlet=ANYWHERE, demand={"discharge_m3s": 0.08, "most_pipes": 1}
    ).plan()


def test_the_setting_has_the_ends_of_the_best_route(plan):
    route = plan.schemes[0].route
    assert plan.setting.intake_cell == tuple(route.cells[0])
    assert plan.setting.outlet_cell == tuple(route.cells[-1])
    for end, (row, col) in ((plan.setting.intake, route.cells[0]), (plan.setting.outlet, route.cells[-1])):
        assert (end.x, end.y) == (500000.0 + 10.0 * (col + 0.5), 5000000.0 - 10.0 * (row + 0.5))
    assert plan.setting.lowest.outlet_m == plan.setting.present.outlet_m == route.outlet_m


def test_each_open_end_is_told_with_its_second_best_far_enough_away(plan):
    route = plan.schemes[0].route
    apart = max(0.1 * route.length_m, 5 * STEP)
    assert [note.split()[0] for note in plan.choice_notes] == ["Intake", "Outlet"]
    for note, cell in zip(plan.choice_notes, (route.cells[0], route.cells[-1]), strict=True):
        first, second = (np.array([float(x), float(y)]) for x, y in re.findall(r"x ([\d.]+), y ([\d.]+)", note))
        assert (first[0] - 500005.0) / 10.0 == cell[1]
        assert np.hypot(*(first - second)) >= apart * (1 - 1e-3)
        assert f"{apart:.0f} m or more away" in note
    assert "axis" not in plan.choice_notes[0]
    assert f"axis {route.outlet_m:.2f} m" in plan.choice_notes[1]


def test_only_the_end_left_open_is_told(make_job, ground):
    plan = make_job(valley(ground), intake=SHORE, outlet={"level_m": None, "height_above_ground_m": 0.3}).plan()
    (note,) = plan.choice_notes
    assert note.startswith("Intake chosen out of ")
    assert plan.setting.outlet_cell == (20, 60)


def test_costs_are_told_where_pipes_have_prices(make_job, ground, pipe):
    priced = pipe | {"supply_per_m": 10.0, "laying_per_m": 5.0}
    plan = make_job(valley(ground), outlet=ANYWHERE, pipes=(priced,)).plan()
    (note,) = plan.choice_notes
    best = plan.schemes[0]
    assert f"{best.cost.total:,.0f} {best.cost.currency}".strip() in note
    assert note.count("l/s, ") == 2
