import json
from dataclasses import fields, replace

import pytest

from routing.outputs.cautions import CAUTIONS, INVENTED_PRICES
from routing.outputs.fields import SCHEME_FIELDS
from routing.outputs.runfile import look_document, plan_document, prices_invented
from routing.outputs.values import json_text


def walk(value):
    if isinstance(value, dict):
        for name, item in value.items():
            assert isinstance(name, str)
            yield from walk(item)
    elif isinstance(value, list):
        for item in value:
            yield from walk(item)
    else:
        yield value


@pytest.fixture(params=["plan", "beside", "no route", "degrees", "antimeridian", "feet", "look"])
def document(request, make):
    return {
        "plan": lambda: plan_document(make.plan()),
        "no route": lambda: plan_document(make.no_route()),
        "degrees": lambda: plan_document(make.plan(make.degrees())),
        "antimeridian": lambda: plan_document(make.plan(make.antimeridian())),
        "feet": lambda: plan_document(make.plan(make.feet())),
        "beside": lambda: plan_document(make.beside()),
        "look": lambda: look_document(make.outlook()),
    }[request.param]()


def test_documents_are_plain_json(document):
    assert json.loads(json_text(document)) == document
    assert all(type(value) in {str, int, float, bool, type(None)} for value in walk(document))


def test_what_a_plan_document_holds(plan):
    found = plan_document(plan)
    assert found["document"] == "plan"
    assert found["title"] == plan.site.title
    assert found["feasible"] is True
    assert found["headline"].startswith("Best of 3 schemes within all limits: 1 x PE 315 SDR 17 on route R1")
    assert len(found["schemes"]) == 4
    assert found["shortfalls"][0]["cause"] == "energy"
    assert found["assumptions"] == list(plan.assumptions)
    assert found["warnings"] == [*plan.warnings, INVENTED_PRICES]
    assert found["cautions"] == list(CAUTIONS)
    assert found["timings_s"] == {"search": 0.31, "total": 0.5}
    assert found["lowest_crest"] == {
        "level_m": 103.02,
        "x": 500152.5,
        "y": 5299940.0,
        "towards": "outlet",
        "proven": True,
    }
    assert found["water_body"]["spill_level_m"] == 103.1
    assert found["to_wgs84"]["operation"]


def test_every_setting_is_told(plan):
    found = plan_document(plan)
    for record, told in ((plan.site, found["site"]), (plan.setting, found["setting"])):
        assert {field.name for field in fields(record)} - set(told) <= {"lines", "sha256"}
    assert found["site"]["limits"]["reserve_m"] == 2.5
    assert found["site"]["terrain"]["file"] == str(plan.site.terrain.file)
    assert len(found["site"]["pipes"]) == 3
    assert found["setting"]["limits"]["air_pressure_pa"] == 96_000.0
    assert found["terrain"]["window"]["dem_cols"] == 80
    assert {field.name for field in fields(plan.terrain.facts)} < set(found["terrain"])


def test_schemes_hold_all_fields_checks_and_costs(plan):
    first = plan_document(plan)["schemes"][0]
    assert {field.name for field in SCHEME_FIELDS} < set(first)
    assert [check["grade"] for check in first["checks"]] == ["fit", "fit", "not made"]
    assert first["checks"][2]["figure"] is None
    assert first["cost_lines"][0]["item"] == "supply"
    assert sum(line["amount"] for line in first["cost_lines"]) == pytest.approx(first["cost_total"])
    assert first["high_point_chainages_m"] == [210.0, 250.0]


def test_what_stands_beside_the_ranking(make):
    found = plan_document(make.beside())
    assert [(row["crossing"], row["scheme"], row["used"]) for row in found["crossings"]] == [
        ("C1", 1, True), ("C2", 3, True), ("C3", None, False),
    ]  # fmt: skip
    assert found["crossings_note"] == "2 of 3 places on the divide have a route"
    assert [(row["weight"], row["route"], row["same_as"]) for row in found["samples"]] == [
        (0.0, "R3", None), (1.0, "R1", "R1"), (10.0, "R4", None),
    ]  # fmt: skip
    assert found["choice_notes"] == ["The outlet was chosen among 41 places; the second best carries 110 l/s."]
    assert [scheme["crossing"] for scheme in found["schemes"]] == ["C1", "C1", "C2", "C2"]


def test_nothing_beside_the_ranking_is_told_as_nothing(plan):
    found = plan_document(plan)
    assert (found["crossings"], found["crossings_note"], found["samples"], found["choice_notes"]) == ([], "", [], [])


def test_no_route(make):
    found = plan_document(make.no_route())
    assert found["feasible"] is False
    assert "too high by 0.92 m" in found["headline"]
    assert found["lowest_crest"] is None
    assert [row["raise_m"] for row in found["shortfalls"]] == [1.347, 0.912, None]


def test_prices_that_are_not_invented_are_not_called_so(make):
    plan = make.plan()
    real = tuple(replace(s, cost=replace(s.cost, invented=False)) for s in plan.schemes)
    plan = replace(plan, schemes=real, site=replace(plan.site, prices=replace(plan.site.prices, invented=False)))
    assert not prices_invented(plan)
    assert INVENTED_PRICES not in plan_document(plan)["warnings"]
    assert prices_invented(make.plan(schemes=()))  # said by the price list, even with no scheme


def test_look_document(make):
    found = look_document(make.outlook())
    assert found["document"] == "look"
    assert found["nodata_share"] == 0.0125
    assert found["elevation_range_m"] == [91.0, 103.4]
    assert found["flat_water_level_m"] == 102.0
    assert found["lowest_lift_m"] == pytest.approx(3.02)
    # (96,000 - 1,228) Pa over 999.7 kg/m3 and 9.80665 m/s2, less 2.5 m
    assert found["still_water_lift_limit_m"] == pytest.approx(94_772 / (999.7 * 9.80665) - 2.5)
    assert look_document(make.outlook(lowest_crest=None))["lowest_lift_m"] is None
