"""Across keys and the disk: every check that needs no DEM, each refusal whole."""

from __future__ import annotations

import pytest


@pytest.mark.parametrize(
    ("replacements", "key", "what", "found", "allowed", "remedy"),
    [
        (
            [('"dem.tif"', '"den.tif"')],
            "terrain.file",
            "no such file",
            "den.tif",
            "relative",
            "did you mean 'dem.tif'?",
        ),
        ([('"dem.tif"', '"none/x.tif"')], "terrain.file", "no such file", "none/x.tif", "relative", "correct the path"),
        ([('"dem.tif"', '"."')], "terrain.file", "folder", '"."', "a file", "name the file"),
        ([('"dem.tif"', "'.\\dem.tif'")], "terrain.file", "no such file", "dem.tif", "relative", "forward slashes"),
        (
            [("[intake]", 'polygon_file = "lake.gpkg"\n[intake]')],
            "water.polygon_file",
            "no such file",
            "lake.gpkg",
            "relative",
            "put the file there",
        ),
        (
            [("lowest_level_m = 98.8", "lowest_level_m = 101.3")],
            "water.lowest_level_m",
            "above the present level",
            "101.3 m",
            "at most 101.2 m",
            "lower lowest_level_m",
        ),
        (
            [("mouth_level_m = 98.0", "mouth_level_m = 98.6")],
            "intake.mouth_level_m",
            "too high",
            "98.6 m",
            "at most 98.5 m",
            "set the mouth lower",
        ),
        (
            [("mouth_level_m = 98.0\n", "")],
            "intake.mouth_level_m",
            "not given",
            'water_shown = "surface"',
            "below the lowest",
            'terrain.water_shown = "bed"',
        ),
        ([("93.3", "98.8")], "outlet.level_m", "not below", "98.8 m", "below 98.8 m", "lower outlet"),
        (
            [("level_m = 93.3", "level_m = 93.3\ntailwater_level_m = 99")],
            "outlet.tailwater_level_m",
            "not below",
            "99 m",
            "below 98.8 m",
            "lower outlet",
        ),
        (
            [("level_m = 93.3", "level_m = 93.3\nheight_above_ground_m = 0.3")],
            "outlet.height_above_ground_m",
            "twice",
            "level_m = 93.3",
            "one of",
            "remove one",
        ),
        (
            [("altitude_m = 105.0", "altitude_m = 105.0\npressure_pa = 100000")],
            "air.altitude_m",
            "both",
            "pressure_pa = 100000",
            "one of",
            "remove altitude_m",
        ),
        (
            [("lowest_level_m = 98.8", 'lowest_level_m = 98.8\npolygon_layer = "lake"')],
            "water.polygon_layer",
            "no file",
            '"lake"',
            "polygon_file",
            "add 'polygon_file",
        ),
        ([("y = 6149750.0", 'y = 6149750.0\nlayer = "in"')], "intake.layer", "no file", '"in"', "file", "remove layer"),
        (
            [("= 0.3", "= 0.3\nbudget = 10")],
            "demand.budget",
            "no pipe has a price",
            "10",
            "prices",
            "supply_per_m",
        ),
    ],
)
def test_one_fault_one_problem(one, replacements, key, what, found, allowed, remedy):
    problem, line = one(*replacements)
    assert problem.key == key
    assert what in problem.what
    assert found in problem.found
    assert allowed in problem.allowed
    assert remedy in problem.remedy
    assert key.rpartition(".")[2] in line or line == "[intake]"


def test_a_pipe_without_price_among_priced_ones_would_look_cheapest(refuse):
    problems = refuse(
        ("sdr = 17.0", "sdr = 17.0\nsupply_per_m = 50"), ("wall_mm = 6.3", "wall_mm = 6.3\n# supply_per_m = 2")
    )
    assert set(problems) == {"pipes[2].supply_per_m", "pipes[3].supply_per_m"}
    assert "take away the '#' in line 39" in problems["pipes[2].supply_per_m"].remedy
    assert problems["pipes[3].supply_per_m"].line == 41


def test_the_bed_needs_no_mouth_level(make):
    from routing.site import load_site

    site = load_site(make(("mouth_level_m = 98.0\n", ""), ('"dem.tif"', '"dem.tif"\nwater_shown = "bed"')))
    assert site.intake.mouth_level_m is None


def test_levels_at_the_edge_of_the_allowed_pass(make):
    from routing.site import load_site

    site = load_site(
        make(("lowest_level_m = 98.8", "lowest_level_m = 101.2"), ("mouth_level_m = 98.0", "mouth_level_m = 100.9"))
    )
    assert site.water.lowest_level_m == site.water.present_level_m


def test_a_wrong_key_does_not_hide_faults_of_the_others(refuse):
    problems = refuse(
        ("reserve_m = 2.5", "reserve_m = -2"),
        ("present_level_m = 101.2", "present_level_m = 90\ntemperature_c = 99"),
        ("level_m = 93.3", "level_m = 98.9"),
    )
    assert set(problems) == {"limits.reserve_m", "water.temperature_c", "water.lowest_level_m", "outlet.level_m"}


def test_what_rests_on_a_wrong_key_is_not_told_twice(refuse):
    assert set(refuse(("lowest_level_m = 98.8", "lowest_level_m = '98.8'"))) == {"water.lowest_level_m"}
    assert set(refuse(("mouth_level_m = 98.0", "mouth_level_m = 'deep'"))) == {"intake.mouth_level_m"}
