from dataclasses import replace

from routing.outputs.field import row
from routing.outputs.other_fields import (
    CHECK_FIELDS,
    COST_FIELDS,
    NOT_MADE,
    SECTION_FIELDS,
    WATER_FIELDS,
    CheckRow,
    CostRow,
    SectionRow,
)


def test_water(plan):
    assert row(WATER_FIELDS, plan, plan.water_body) == {
        "kind": "water body",
        "level_m": 102.0,
        "area_m2": 23_800.0,
        "source": "level",
        "void_cells": 8,
        "touches_dem_edge": True,
        "touches_window_edge": False,
        "spill_level_m": 103.1,
        "spill_x": 500_152.5,
        "spill_y": 5_299_980.0,
        "spill_towards": "outlet",
        "spill_proven": False,
    }


def test_an_unknown_spill_is_nothing(plan):
    found = row(WATER_FIELDS, plan, replace(plan.water_body, spill=None))
    assert {name: value for name, value in found.items() if name.startswith("spill")} == dict.fromkeys(
        ("spill_level_m", "spill_x", "spill_y", "spill_towards", "spill_proven")
    )


def test_a_check_not_made_is_called_so(plan):
    scheme = plan.schemes[0]
    made, _, not_made = (row(CHECK_FIELDS, plan, CheckRow(scheme, check)) for check in scheme.verdict.checks)
    assert (made["grade"], made["governs"]) == ("fit", True)
    assert (not_made["grade"], not_made["governs"]) == (NOT_MADE, False)


def test_cost_line(plan):
    scheme = plan.schemes[1]
    found = row(COST_FIELDS, plan, CostRow(scheme, scheme.cost.lines[0]))
    assert (found["scheme"], found["count"], found["item"], found["unit"]) == (2, 2, "supply", "m")
    assert abs(found["quantity"] * found["rate"] - found["amount"]) < 0.05


def test_section_sample(plan):
    scheme = plan.schemes[0]
    found = row(SECTION_FIELDS, plan, SectionRow(scheme.route, 0, scheme, 98.0, 107.0, 113_686.4))
    assert found == {
        "route": "R1",
        "chainage_m": 0.0,
        "x": 500_040.0,
        "y": 5_299_850.0,
        "ground_m": 97.667,
        "scheme": 1,
        "crown_m": 98.0,
        "ceiling_m": 107.0,
        "crown_pressure_pa": 113_686.0,
    }
