import csv
import io
import locale
from dataclasses import replace

import numpy as np
import pandas as pd
import pytest

from routing.errors import OvercrestError
from routing.outputs.fields import TABLES
from routing.outputs.tables import (
    ceiling_m,
    checks_table,
    costs_table,
    crossings_table,
    fields_table,
    samples_table,
    schemes_table,
    sections_table,
)

WRITERS = {
    "schemes.csv": schemes_table,
    "sections.csv": sections_table,
    "checks.csv": checks_table,
    "costs.csv": costs_table,
    "crossings.csv": crossings_table,
    "samples.csv": samples_table,
}


def rows(text):
    return list(csv.DictReader(io.StringIO(text, newline=""), strict=True))


@pytest.mark.parametrize("name", WRITERS)
def test_head_and_shape(make, name):
    text = WRITERS[name](make.beside())
    lines = list(csv.reader(io.StringIO(text, newline=""), strict=True))
    assert lines[0] == list(TABLES[name])
    assert {len(line) for line in lines} == {len(TABLES[name])}
    # RFC 4180, section 2: lines end in CRLF, the last one may too
    assert text.endswith("\r\n")
    assert text.count("\n") == text.count("\r\n")
    assert not any(word in text.lower() for word in ("nan", "inf,", "none", "\ufeff"))


@pytest.mark.parametrize("name", WRITERS)
def test_no_rows_where_there_is_nothing(make, name):
    assert len(WRITERS[name](make.plan(schemes=())).splitlines()) == 1


def test_schemes(plan):
    found = rows(schemes_table(plan))
    assert [row["rank"] for row in found] == ["1", "2", "3", "4"]
    assert found[0]["total_discharge_m3s"] == "0.121300"
    assert found[0]["suction_discharge_m3s"] == ""
    assert found[3]["valve_loss"] == ""
    assert found[0]["prices_invented"] == "true"


@pytest.mark.parametrize("file", ["schemes.csv", "crossings.csv", "samples.csv"])
def test_pandas_reads_types(make, file):
    frame = pd.read_csv(io.StringIO(WRITERS[file](make.beside())))
    for name, field in TABLES[file].items():
        kind = frame[name].dtype.kind
        assert (
            kind
            in {"integer": "if" if frame[name].hasnans else "i", "number": "if", "text": "OU", "flag": "b"}[field.kind]
            or frame[name].dtype == "str"
        ), name


def test_numbers_do_not_follow_the_locale(plan):
    before = schemes_table(plan)
    old = locale.setlocale(locale.LC_NUMERIC)
    usable = []
    for name in ("de_DE.UTF-8", "fr_FR.UTF-8", "C.UTF-8", "C"):
        try:
            locale.setlocale(locale.LC_NUMERIC, name)
        except locale.Error:
            continue
        usable.append(name)
        assert schemes_table(plan) == before
    locale.setlocale(locale.LC_NUMERIC, old)
    assert usable


def test_awkward_names_survive(plan):
    best = plan.schemes[0]
    name = 'PE "315", SDR 17;\nlong'
    odd = replace(plan, schemes=(replace(best, pipe=replace(best.pipe, name=name)),))
    assert rows(schemes_table(odd))[0]["pipe"] == name


def test_sections(plan):
    found = rows(sections_table(plan))
    first = [row for row in found if row["route"] == "R1"]
    route = plan.schemes[0].route
    assert len(first) == len(route.chainage_m)
    assert {row["scheme"] for row in first} == {"1"}
    assert {row["scheme"] for row in found if row["route"] == "R2"} == {"3"}
    assert [float(row["ground_m"]) for row in first] == pytest.approx(route.ground_m, abs=6e-4)
    assert [float(row["x"]) for row in first] == pytest.approx(route.x, abs=6e-4)
    assert all(float(row["crown_m"]) < float(row["ceiling_m"]) for row in first)


def test_sections_in_degrees_keep_the_place(make):
    found = rows(sections_table(make.plan(make.degrees())))
    assert all(len(row["x"].split(".")[1]) == 8 for row in found)


def test_ceiling_is_the_level_at_which_pressure_meets_the_reserve(make, plan):
    """By the energy balance: a crown raised to the ceiling has exactly vapour pressure plus reserve."""
    scheme, setting = plan.schemes[1], plan.setting
    gamma = setting.water.density_kgm3 * setting.limits.gravity_ms2
    ceiling = ceiling_m(plan, scheme)
    raised = scheme.appraisal.crown_pressure_pa - gamma * (ceiling - scheme.appraisal.profile_crown_m)
    assert raised == pytest.approx(setting.water.vapour_pressure_pa + 2.5 * gamma)
    left = ceiling - scheme.appraisal.profile_crown_m
    assert left.min() == pytest.approx(scheme.appraisal.reserve_left_m)
    # falls with chainage, as losses mount
    assert (np.diff(ceiling) < 0).all()


def test_ceiling_is_capped_by_the_highest_lift(plan):
    limits = replace(plan.setting.limits, highest_lift_m=4.0)
    capped = replace(plan, setting=replace(plan.setting, limits=limits))
    assert ceiling_m(capped, plan.schemes[0]).max() == 104.0


def test_appraisal_that_does_not_fit_its_route_is_a_fault(plan):
    best = plan.schemes[0]
    short = replace(best, appraisal=replace(best.appraisal, profile_crown_m=best.appraisal.profile_crown_m[:-1]))
    with pytest.raises(OvercrestError, match="40 crown levels, 41 pressures"):
        sections_table(replace(plan, schemes=(short,)))


def test_checks(plan):
    found = rows(checks_table(plan))
    assert len(found) == 12
    assert [row["grade"] for row in found[:3]] == ["fit", "fit", "not made"]
    assert [row["governs"] for row in found[:3]] == ["true", "false", "false"]
    assert found[1]["figure"] == "4.1"
    assert found[2]["figure"] == found[2]["limit"] == found[2]["reserve"] == ""


def test_costs_add_up(plan):
    found = rows(costs_table(plan))
    for scheme in plan.schemes:
        amounts = [float(row["amount"]) for row in found if row["scheme"] == str(scheme.rank)]
        assert sum(amounts) == pytest.approx(scheme.cost.total, abs=0.01)
    assert {row["prices_invented"] for row in found} == {"true"}


def test_crossings(make):
    found = rows(crossings_table(make.beside()))
    assert [row["crossing"] for row in found] == ["C1", "C2", "C3"]
    assert [(row["scheme"], row["schemes"]) for row in found] == [("1", "2"), ("3", "2"), ("", "0")]
    assert [row["used"] for row in found] == ["true", "true", "false"]
    assert found[2]["note"] == "no way on from it keeps to the limits"
    assert (found[1]["level_m"], found[1]["length_m"], found[1]["lift_m"]) == ("103.500", "305.70", "3.500")


def test_schemes_name_crossings_of_the_table(make):
    plan = make.beside()
    names = {row["crossing"] for row in rows(crossings_table(plan))}
    assert [row["crossing"] for row in rows(schemes_table(plan))] == ["C1", "C1", "C2", "C2"]
    assert {row["crossing"] for row in rows(schemes_table(plan))} <= names
    assert {row["crossing"] for row in rows(schemes_table(make.plan()))} == {""}


def test_samples(make):
    plan = make.beside()
    found = rows(samples_table(plan))
    assert [(row["weight"], row["route"], row["same_as"]) for row in found] == [
        ("0.000", "R3", ""), ("1.000", "R1", "R1"), ("10.000", "R4", ""),
    ]  # fmt: skip
    assert [row["missing_m"] for row in found] == ["1.000", "0.000", "0.000"]
    assert found[0]["reserve_left_m"] == "-1.000"
    assert "needs 1.00 m of trench, level or reserve" in found[0]["governing"]
    same = plan.samples[1]
    assert float(found[1]["length_m"]) == pytest.approx(same.route.length_m, abs=0.006)
    assert float(found[1]["crest_m"]) == pytest.approx(same.route.ground_m.max(), abs=6e-4)
    assert float(found[1]["lift_m"]) == pytest.approx(103.4 + 0.315 - 100.0)


def test_fields_table_lists_every_column():
    found = rows(fields_table())
    assert [(row["file"], row["name"]) for row in found] == [(f, n) for f, fields in TABLES.items() for n in fields]
    assert all(row["sense"] for row in found)
