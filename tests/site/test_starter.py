"""The starter: sound TOML, refused by name and line until what only the user knows is filled in."""

from __future__ import annotations

import dataclasses
import re
import tomllib
from pathlib import Path

import pytest

from routing.errors import SiteError
from routing.records import TerrainFacts
from routing.site import load_site, starter

FACTS = TerrainFacts(
    file="dem.tif",
    sha256="",
    driver="GTiff",
    dtype="float32",
    rows=240,
    cols=320,
    transform=(2.0, 0.0, 480000.0, 0.0, -2.0, 6150000.0),
    crs_wkt="",
    crs_name="WGS 84 / UTM zone 31N",
    horizontal_unit="metre",
    vertical_unit="m",
    vertical_unit_source="the band's unit text ('m')",
    vertical_datum="not stated",
    metres_per_vertical_unit=1.0,
    datum_offset_m=0.0,
    nodata=None,
    vertical_error_m=None,
    surface="unknown",
    water_shown="surface",
)


@pytest.fixture
def begin(tmp_path):
    """Write the starter for a DEM beside it and return its path."""

    def write(facts=FACTS, name="dem.tif"):
        dem = tmp_path / name
        dem.touch()
        path = tmp_path / "site.toml"
        path.write_text(starter(facts, dem_path=dem, folder=tmp_path), encoding="utf-8")
        return path

    return write


def fill(path, **values):
    """Take the '#' away from the commented keys of a text and write values, in the order of the file."""
    text = path.read_text(encoding="utf-8")
    for name, value in values.items():
        text, count = re.subn(rf"^# ({name.rstrip('_')}) = \S+", rf"\1 = {value}", text, count=1, flags=re.MULTILINE)
        assert count == 1, name
    path.write_text(text, encoding="utf-8")


def test_it_is_refused_with_the_lines_to_fill_in(begin):
    path = begin()
    with pytest.raises(SiteError) as caught:
        load_site(path)
    problems = {problem.key: problem for problem in caught.value.problems}
    assert set(problems) == {"water.lowest_level_m", "intake.x", "intake.mouth_level_m", "outlet.x"}
    lines = path.read_text(encoding="utf-8").split("\n")
    for key, problem in problems.items():
        assert lines[problem.line - 1].startswith(f"# {key.rpartition('.')[2]} = ")
        assert f"'#' in line{'s' if key.endswith('.x') else ''} {problem.line}" in problem.remedy


def test_filled_in_it_loads(begin):
    path = begin()
    fill(path, lowest_level_m=98.8, x=480300.0, y=6149750.0, mouth_level_m=98.0, x_=480411.0, y_=6149761.0)
    site = load_site(path)
    assert site.terrain.file == path.parent / "dem.tif"
    assert len(site.pipes) == 2
    assert site.limits.pipe_load_hours == 8760.0


def test_uncommented_but_left_as_it_was_it_is_still_refused(begin):
    path = begin()
    fill(path, lowest_level_m=98.8, x=480320.0, y=6149760.0, mouth_level_m=98.0, x_=480320.0, y_=6149760.0)
    with pytest.raises(SiteError, match="same place"):
        load_site(path)


def test_every_commented_key_is_one_that_may_be_used(begin):
    text = begin().read_text(encoding="utf-8")
    text = re.sub(r"^# ([a-z][a-z0-9_]* = |\[\[[a-z]+\]\]$)", r"\1", text, flags=re.MULTILINE)
    text = text.replace("pressure_pa = 98000.0\n", "").replace("height_above_ground_m = 0.3 ", "# ")
    text = text.replace("x = 480320.0", "x = 480330.0", 1)
    tomllib.loads(text)
    path = begin()
    path.write_text(text, encoding="utf-8")
    (path.parent / "bank.geojson").touch()
    assert load_site(path).prices.currency == "EUR"
    assert load_site(path).zones[0].kind == "barred"


def test_the_middle_of_the_dem_and_its_extent_are_shown(begin):
    text = begin().read_text(encoding="utf-8")
    assert text.count("# x = 480320.0\n# y = 6149760.0\n") == 2
    assert "320 x 240 cells, x 480000.0 to 480640.0, y 6149520.0 to 6150000.0" in text
    assert "WGS 84 / UTM zone 31N, in metre" in text


def test_degrees_are_shown_with_six_decimals():
    facts = dataclasses.replace(
        FACTS, transform=(1e-5, 0, 2.7, 0, -1e-5, 55.5), horizontal_unit="degree", crs_name="WGS 84"
    )
    assert "# x = 2.701600\n# y = 55.498800\n" in starter(facts, dem_path="dem.tif", folder=".")


def test_an_unknown_unit_is_marked_as_required():
    facts = dataclasses.replace(FACTS, vertical_unit="unknown", vertical_unit_source="stated by neither")
    text = starter(facts, dem_path="dem.tif", folder=".")
    assert "# REQUIRED: the DEM does not say in what unit" in text
    assert '# vertical_unit = "m"            # as the DEM says (the band' in starter(FACTS, dem_path="d", folder=".")


def test_an_altitude_is_marked_as_required_where_the_dem_names_no_datum():
    unnamed = dataclasses.replace(FACTS, vertical_datum="not stated")
    named = dataclasses.replace(FACTS, vertical_datum="EGM2008 height")
    assert "# REQUIRED, since the DEM names no datum: altitude" in starter(unnamed, dem_path="d", folder=".")
    assert "names no datum" not in starter(named, dem_path="d", folder=".")


def test_comments_stand_below_each_other_once_the_signs_are_taken_away():
    unnamed = dataclasses.replace(FACTS, vertical_datum="not stated")
    lines = starter(unnamed, dem_path="d", folder=".").replace("\n# ", "\n").splitlines()
    for name in ("vertical_unit", "vertical_datum", "surface", "water_shown", "datum_offset_m", "temperature_c"):
        (line,) = [line for line in lines if line.startswith(f"{name} = ")]
        assert line.index(" # ") == 30, line


def test_a_datum_that_the_dem_names_is_shown():
    facts = dataclasses.replace(FACTS, vertical_datum="EGM2008 height")
    assert '# vertical_datum = "EGM2008 height"  # as the DEM says' in starter(facts, dem_path="d", folder=".")


@pytest.mark.parametrize("name", ['we "quote".tif', "Mühle.tif", "back\\slash.tif", "{brace}.tif"])
def test_odd_file_names_stay_what_they_are(begin, name):
    path = begin(name=name)
    read = tomllib.loads(path.read_text(encoding="utf-8"))
    assert read["terrain"]["file"] == name


def test_the_dem_is_named_relative_to_the_folder(tmp_path):
    text = starter(FACTS, dem_path=tmp_path / "data" / "dem.tif", folder=tmp_path / "jobs" / "one")
    assert tomllib.loads(text)["terrain"]["file"] == "../../data/dem.tif"


def test_texts_of_the_dem_cannot_break_the_file():
    facts = dataclasses.replace(FACTS, crs_name="a\nfile = 'b'", vertical_unit_source='x\n"y"', vertical_unit='m"\n')
    assert tomllib.loads(starter(facts, dem_path=Path("d.tif"), folder=".").replace("d.tif", "d"))["terrain"]["file"]
