"""The keys of the site file against what they are turned into: defaults, units, ranges and choices cannot drift apart."""

from __future__ import annotations

import dataclasses
import datetime as dt
import re
from typing import get_args

import pytest
from pydantic import ValidationError

from routing.errors import InputError
from routing.hydraulics import standard_pressure_pa, water_at
from routing.records import (
    AirAsk,
    DemandAsk,
    GroundRule,
    LimitsAsk,
    Losses,
    OutletAsk,
    PointAsk,
    PriceList,
    SearchAsk,
    SurfaceKind,
    TerrainAsk,
    WaterAsk,
    WaterShown,
    ZoneAsk,
    ZoneKind,
)
from routing.search import move_list
from routing.site import models
from routing.site.fields import bounds_of, choices_of, unit_of
from routing.site.models import REPEATED, SECTIONS, PricesModel, SiteModel

KEYS = [(section, name, info) for section, model in SECTIONS.items() for name, info in model.model_fields.items()]
IDS = [f"{section}.{name}" for section, name, _ in KEYS]

#: Ends of key names, and the unit that each of them means.
UNITS = {
    "_m3s": "m³/s",
    "_m": "m",
    "_mm": "mm",
    "_pa": "Pa",
    "_mpa": "MPa",
    "_c": "°C",
    "_pct": "%",
    "_hours": "h",
    "_ms2": "m/s²",
    "_cells": "cells",
    "_per_m": "currency/m",
    "_per_km": "1/km",
}


@pytest.mark.parametrize(
    ("section", "record"),
    [
        ("air", AirAsk),
        ("limits", LimitsAsk),
        ("demand", DemandAsk),
        ("prices", PriceList),
        ("search", SearchAsk),
        ("losses", Losses),
        ("terrain", TerrainAsk),
        ("water", WaterAsk),
        ("outlet", OutletAsk),
        ("intake", PointAsk),
        ("zones", ZoneAsk),
    ],
)
def test_a_key_and_the_record_that_it_fills_have_one_default(section, record):
    fields = {field.name: field.default for field in dataclasses.fields(record)}
    shared = {name: info.default for name, info in SECTIONS[section].model_fields.items() if name in fields}
    shared = {
        name: default for name, default in shared.items() if not SECTIONS[section].model_fields[name].is_required()
    }
    assert shared
    for name, default in shared.items():
        if (section, name) == ("outlet", "height_above_ground_m"):
            assert (default, fields[name]) == (None, 0.0)  # told apart from a height of 0 that was given
        elif (section, name) == ("zones", "cost_factor"):
            assert (default, fields[name]) == (None, 1.0)  # told apart from a factor of 1 that was given
        else:
            assert default == fields[name], name


def test_the_tables_are_those_of_the_whole_file():
    assert set(SECTIONS) | {"title"} == set(SiteModel.model_fields)
    for name, model in SECTIONS.items():
        assert model is getattr(models, f"{name.title().removesuffix('s') if name in REPEATED else name.title()}Model")


@pytest.mark.parametrize(("section", "name", "info"), KEYS, ids=IDS)
def test_the_unit_in_the_name_is_the_unit_told(section, name, info):
    ends = [end for end in UNITS if name.endswith(end) and info.annotation is not str]
    if ends:
        end = max(ends, key=len)
        told = unit_of(info)
        assert told == UNITS[end] or told.startswith(f"{UNITS[end]} of ")
    elif not name.startswith(("x", "y", "lon", "lat", "budget", "fixed")):
        assert unit_of(info) == ""


@pytest.mark.parametrize(("section", "name", "info"), KEYS, ids=IDS)
def test_every_key_says_what_it_means_and_its_default_is_within_its_range(section, name, info):
    assert info.description
    default, bounds = info.default, bounds_of(info)
    if isinstance(default, (int, float)) and not isinstance(default, bool):
        assert bounds or choices_of(info), "a number needs a range"
        assert default >= bounds.get("ge", default)
        assert default <= bounds.get("le", default)
        assert "gt" not in bounds or default > bounds["gt"]
    if choices_of(info) and not info.is_required() and default is not None:
        assert default in choices_of(info)


@pytest.mark.parametrize(
    ("section", "name", "kind"),
    [
        ("terrain", "surface", SurfaceKind),
        ("terrain", "water_shown", WaterShown),
        ("search", "ground_rule", GroundRule),
        ("zones", "kind", ZoneKind),
    ],
)
def test_choices_are_those_of_the_records(section, name, kind):
    assert set(choices_of(SECTIONS[section].model_fields[name])) == set(get_args(kind))


def test_every_move_set_offered_exists():
    for neighbours in choices_of(SECTIONS["search"].model_fields["neighbours"]):
        assert len(move_list(neighbours)) == neighbours


@pytest.mark.parametrize(
    ("section", "name", "use"),
    [("air", "altitude_m", standard_pressure_pa), ("water", "temperature_c", water_at)],
)
def test_what_the_file_may_say_the_hydraulics_can_use(section, name, use):
    """Both ends of the range are taken; beyond them, at the latest somewhat further, they would not be."""
    bounds = bounds_of(SECTIONS[section].model_fields[name])
    for value in (bounds["ge"], bounds["le"]):
        use(value)
    with pytest.raises(InputError):
        use(bounds["le"] + 4500.0)


@pytest.mark.parametrize("model", [*SECTIONS.values(), SiteModel], ids=lambda model: model.__name__)
def test_unknown_keys_are_refused_in_every_table(model):
    with pytest.raises(ValidationError) as caught:
        model.model_validate({"no_such_key": 1})
    assert "extra_forbidden" in {error["type"] for error in caught.value.errors()}


@pytest.mark.parametrize(
    ("given", "kept"),
    [
        (dt.date(2026, 3, 1), "2026-03-01"),
        ("spring 2026", "spring 2026"),
        (dt.datetime(2026, 3, 1, 12, 0, tzinfo=dt.UTC), "2026-03-01T12:00:00+00:00"),
    ],
)
def test_a_date_without_quotes_is_kept_as_text(given, kept):
    assert PricesModel.model_validate({"date": given}).date == kept


def test_a_number_is_no_date():
    with pytest.raises(ValidationError):
        PricesModel.model_validate({"date": 2026})


def test_keys_are_lower_case_words():
    assert all(re.fullmatch(r"[a-z][a-z0-9]*(_[a-z0-9]+)*", name) for _, name, _ in KEYS)
