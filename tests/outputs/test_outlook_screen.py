import io
from dataclasses import replace

import pytest
from rich.console import Console

from routing.outputs.outlook_screen import outlook_summary


def shown(outlook):
    console = Console(file=io.StringIO(), width=100)
    console.print(outlook_summary(outlook))
    text = console.file.getvalue()
    assert max(len(line.rstrip()) for line in text.splitlines()) <= 100
    return " ".join(text.split())


def test_everything_understood_is_told(make):
    found = shown(make.outlook())
    for text in (
        "80 x 60 cells; read: all of it",
        "5.00 x 5.00 m",
        "WGS 84 / UTM zone 32N (unit: metre)",
        "unit: metre (said by the site file)",
        "EVRF2007",
        "0.25 m (90 %)",
        "bare ground",
        "1.2 % of the cells read",
        "91.00 to 103.40 m",
        "at 102.00 m",
        "23,800 m2, a part only: the DEM ends in the water",
        "8 enclosed cells without data counted as water",
        "103.10 m at x 500152, y 5299980; a lower way outside the ground read is not ruled out",
        "103.02 m at x 500152, y 5299940",
        "3.02 m from the lowest level to the ground",
        "7.17 m in still water, less when it flows: air 96.0 kPa (standard atmosphere at 250 m), reserve 2.50 m",
        "4.15 m to spare",
        "the lake reaches the edge of the DEM",
    ):
        assert text in found
    assert all(assumption in found for assumption in make.outlook().assumptions)


def test_what_was_not_said_is_told_as_such(make):
    outlook = make.outlook()
    facts = replace(
        outlook.terrain.facts, vertical_datum="", vertical_error_m=None, surface="unknown", datum_offset_m=-0.45
    )
    found = shown(replace(outlook, terrain=replace(outlook.terrain, facts=facts), assumptions=(), warnings=()))
    assert "datum not said, -0.450 m added" in found
    assert "vertical error not said" in found
    assert "surface not said" in found
    assert "Assumptions none" in found
    assert "Warnings" not in found


def test_a_window_is_told(make):
    outlook = make.outlook()
    window = replace(outlook.terrain.window, dem_rows=8000, dem_cols=9000)
    facts = replace(outlook.terrain.facts, rows=8000, cols=9000)
    found = shown(replace(outlook, terrain=replace(outlook.terrain, window=window, facts=facts)))
    assert "9,000 x 8,000 cells; read: 80 x 60 of them" in found
    body = replace(outlook.water_body, touches_edge=False, touches_open_border=True)
    assert "23,800 m2, a part only: the window read ends in the water;" in shown(replace(outlook, water_body=body))


def test_a_crest_that_is_too_high(make):
    crest = replace(make.outlook().lowest_crest, level_m=108.0)
    assert "0.83 m too high, before losses" in shown(make.outlook(lowest_crest=crest))


def test_no_crest_no_spill_no_flat_water(make):
    outlook = make.outlook(lowest_crest=None, flat_water_level_m=None)
    body = replace(
        outlook.water_body, spill=None, touches_edge=False, void_cells=0, source="polygon", area_m2=123_456.0
    )
    found = shown(replace(outlook, water_body=body))
    assert "none: no ground with data joins water and outlet" in found
    assert "spills at not known" in found
    assert "flat water found none at the intake" in found
    assert "12.3 ha; given as a polygon" in found
    assert "to spare" not in found


def test_a_highest_lift_of_the_users_is_named(make):
    outlook = make.outlook()
    limits = replace(outlook.setting.limits, highest_lift_m=5.5)
    found = shown(replace(outlook, setting=replace(outlook.setting, limits=limits)))
    assert "5.50 m in still water, less when it flows: the highest lift set in the site file" in found


@pytest.mark.parametrize(("place", "text"), [("degrees", "x 9.00169, y 47.79978"), ("feet", "x 985500, y 199934")])
def test_places_suit_the_map_unit(make, place, text):
    assert text in shown(make.outlook(getattr(make, place)()))
