import dataclasses
import re

import pytest

from routing.outputs.field import row
from routing.outputs.fields import SCHEME_FIELDS, TABLES
from routing.records import Proof, SiphonRun

UNIT_ENDS = {"m": "_m", "mm": "_mm", "m3/s": "_m3s", "m/s": "_ms", "Pa": "_pa", "m2": "_m2"}


@pytest.mark.parametrize(("file", "name"), [(file, name) for file, fields in TABLES.items() for name in fields])
def test_every_field_is_described(file, name):
    field = TABLES[file][name]
    assert re.fullmatch(r"[a-z][a-z0-9_]*", name)
    assert field.sense.endswith(".")
    assert field.sense[0].isupper() or field.sense[0] == "`"
    if field.unit in UNIT_ENDS:
        assert name.endswith(UNIT_ENDS[field.unit])
    if field.kind != "number":
        assert field.decimals is None


def test_names_are_unique():
    names = [field.name for field in SCHEME_FIELDS]
    assert len(names) == len(set(names)) == len(TABLES["schemes.csv"])


def test_every_scheme_has_every_field_of_its_kind(make):
    kinds = {"text": str, "integer": int, "number": float, "flag": bool}
    for plan in (make.plan(), make.no_route(), make.plan(make.degrees()), make.plan(make.feet())):
        for scheme in plan.schemes:
            for name, value in row(SCHEME_FIELDS, plan, scheme).items():
                assert value is None or type(value) is kinds[TABLES["schemes.csv"][name].kind], name


def test_values_are_those_of_the_records(plan):
    best = plan.schemes[0]
    found = row(SCHEME_FIELDS, plan, best)
    expected = {
        "rank": 1,
        "pipe": "PE 315 SDR 17",
        "bore_mm": 275.8,  # 315 - 2 x 19.6
        "required_total_m3s": 0.1,
        "duty_m3s": 0.1,
        "total_discharge_m3s": 0.1213,
        "limited_by": "energy",
        "crest_m": 103.4,
        "lowest_level_m": 100.0,
        "present_level_m": 102.0,
        "fall_m": 8.0,
        "present_fall_m": 10.0,
        "breaking_level_m": 97.8,
        "verdict": "fit",
        "governs_verdict": "suction",
        "checks_made": 2,
        "checks_not_made": 1,
        "high_points": 2,
        "prices_invented": True,
        "currency": "EUR",
        "proven_whole_dem": True,
    }
    assert {name: found[name] for name in expected} == expected
    assert found["lift_m"] == pytest.approx(103.4 + 0.315 - 100.0)
    assert found["crest_x"] == pytest.approx(best.route.x[best.route.crest_index], abs=5e-4)
    assert found["least_crown_pressure_pa"] == round(min(best.appraisal.duty.crown_pressure_pa))
    assert found["lift_share"] == pytest.approx(found["lift_m"] / 9.79, abs=1e-3)


def test_what_is_infinite_or_unknown_is_nothing(make):
    plan = make.plan()
    dead = row(SCHEME_FIELDS, plan, plan.schemes[3])
    assert dead["valve_loss"] is None
    assert dead["total_discharge_m3s"] == 0.0
    assert row(SCHEME_FIELDS, plan, plan.schemes[0])["suction_discharge_m3s"] is None
    no_demand = make.plan(
        site=dataclasses.replace(plan.site, demand=dataclasses.replace(plan.site.demand, discharge_m3s=None))
    )
    assert row(SCHEME_FIELDS, no_demand, no_demand.schemes[0])["required_total_m3s"] is None


def test_records_of_results_are_covered():
    """A figure added to a run or a proof must be given a place in the dictionary, or be named here with a reason."""
    told = {field.name for field in SCHEME_FIELDS}
    renamed = {
        "governs": "limited_by",
        "whole_dem": "proven_whole_dem",
        "text": "proof",
        "discharge_low_m3s": "search_discharge_low_m3s",
        "discharge_high_m3s": "search_discharge_high_m3s",
        "crown_pressure_pa": "least_crown_pressure_pa",
    }
    left_out = {"reynolds", "friction_factor"}  # steps on the way to the velocity, not results
    for record in (SiphonRun, Proof):
        for field in dataclasses.fields(record):
            assert field.name in left_out or renamed.get(field.name, field.name) in told, field.name
