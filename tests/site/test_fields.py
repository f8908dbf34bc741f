"""What messages and the reference page say of a key."""

from __future__ import annotations

import pytest

from routing.site.fields import (
    allowed_text,
    bounds_of,
    choices_of,
    default_of,
    number_text,
    otherwise_of,
    range_text,
    unit_of,
    value_text,
)
from routing.site.models import SECTIONS, LimitsModel, PipeModel, SearchModel, TerrainModel


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (True, "true"),
        ("a", '"a"'),
        (1.5, "1.5"),
        (3.0, "3"),
        (100000.0, "100000"),
        (1e20, "1e+20"),
        ([1, "b"], '[1, "b"]'),
        ({"x": 1.0}, "{ x = 1 }"),
        (7, "7"),
    ],
)
def test_values_are_told_as_the_file_would_write_them(value, text):
    assert value_text(value) == text


def test_long_values_are_cut():
    assert len(value_text("x" * 1000)) < 200


def test_numbers_keep_the_digits_of_a_map():
    assert number_text(6149750.125) == "6149750.125"


@pytest.mark.parametrize(
    ("model", "name", "text"),
    [
        (LimitsModel, "reserve_m", "a number, from 0 to 9 m of water"),
        (PipeModel, "wall_mm", "a number, above 0, at most 300 mm"),
        (PipeModel, "poisson_ratio", "a number, at least 0, below 0.5"),
        (TerrainModel, "band", "a whole number, from 1 to 1000"),
        (TerrainModel, "file", 'text in quotes, "..."'),
        (SearchModel, "neighbours", "8 or 16 or 32"),
        (TerrainModel, "vertical_unit", '"m" or "ft" or "us-ft"'),
    ],
)
def test_what_is_allowed(model, name, text):
    assert allowed_text(model.model_fields[name]) == text


def test_parts_of_a_key():
    lift = LimitsModel.model_fields["highest_lift_m"]
    assert bounds_of(lift) == {"gt": 0, "le": 10.5}
    assert (unit_of(lift), default_of(lift), otherwise_of(lift)) == ("m", None, "set by the pressure alone")
    assert range_text(lift) == "above 0, at most 10.5 m"
    assert choices_of(lift) == ()
    assert default_of(TerrainModel.model_fields["file"]) is None


#: Unit at the end of a key, and the unit that must then be told.
SUFFIXES = {
    "_m3s": "m³/s",
    "_ms2": "m/s²",
    "_mm": "mm",
    "_mpa": "MPa",
    "_pa": "Pa",
    "_c": "°C",
    "_pct": "%",
    "_hours": "h",
    "_m": "m",
}


def test_every_key_with_a_unit_at_its_end_tells_that_unit():
    for section, model in SECTIONS.items():
        for name, info in model.model_fields.items():
            suffix = next((end for end in SUFFIXES if name.endswith(end)), None)
            priced = name.endswith("per_m")
            if suffix and not priced:
                assert unit_of(info).startswith(SUFFIXES[suffix]), f"{section}.{name}"
            if info.annotation in {float, float | None} and suffix is None:
                assert unit_of(info) in {"", "°", "currency", "currency/m", "unit of the CRS", "1/km", "m"}, name


def test_every_key_has_a_meaning_and_every_number_a_bound():
    for section, model in SECTIONS.items():
        for name, info in model.model_fields.items():
            assert info.description, f"{section}.{name}"
            if info.annotation in {float, int, float | None, int | None}:
                assert bounds_of(info), f"{section}.{name}"
            if not info.is_required() and default_of(info) is None:
                paired = name in {"x", "y", "lon", "lat", "file", "sdr", "wall_mm"}
                assert otherwise_of(info) or paired, f"{section}.{name}"
