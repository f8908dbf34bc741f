"""Single keys: each kind of fault names file, key, line, what was found, what is allowed and what to do."""

from __future__ import annotations

import pytest


@pytest.mark.parametrize(
    ("old", "new", "key", "found", "allowed", "remedy"),
    [
        # kinds of value
        ("98.8", '"98.8"', "water.lowest_level_m", '"98.8"', "a number, from -500 to 9000 m", "without quotes"),
        ("98.8", '"98,8"', "water.lowest_level_m", '"98,8"', "a number", "98.8"),
        ("98.8", '"low"', "water.lowest_level_m", '"low"', "a number", "number in m"),
        ("98.8", "true", "water.lowest_level_m", "true", "a number", "correct"),
        ("98.8", "nan", "water.lowest_level_m", "nan", "a number", "finite"),
        ("= 105.0", "= inf", "air.altitude_m", "inf", "from -430 to 6500 m", "finite"),
        ("98.8", "[98.8]", "water.lowest_level_m", "[98.8]", "a number", "correct"),
        ('"dem.tif"', "7", "terrain.file", "7", "text in quotes", "quotes"),
        ('"dem.tif"', '"dem.tif"\nband = 1.5', "terrain.band", "1.5", "a whole number, from 1 to 1000", "correct"),
        ('"dem.tif"', '"dem.tif"\nband = "1"', "terrain.band", '"1"', "whole number", "without quotes"),
        ('"dem.tif"', '"dem.tif"\nband = true', "terrain.band", "true", "whole number", "correct"),
        ('"dem.tif"', '""', "terrain.file", '""', "text", "correct"),
        ("[air]", '[prices]\ninvented = "yes"\n[air]', "prices.invented", '"yes"', "true or false", "small letters"),
        # ranges
        ("= 2.5", "= 9.1", "limits.reserve_m", "9.1", "from 0 to 9 m of water", "m of water"),
        ("= 2.5", "= -0.1", "limits.reserve_m", "-0.1", "from 0 to 9", "m of water"),
        ("= 105.0", "= -431", "air.altitude_m", "-431", "from -430 to 6500 m", "unit is m"),
        ("= 105.0", "= 6501", "air.altitude_m", "6501", "from -430 to 6500 m", "m"),
        ("altitude_m = 105.0", "pressure_pa = 39999", "air.pressure_pa", "39999", "from 40000 to 110000 Pa", "Pa"),
        ("altitude_m = 105.0", "pressure_pa = 110001", "air.pressure_pa", "110001", "from 40000 to 110000", "Pa"),
        ("altitude_m = 105.0", "pressure_pa = 1003", "air.pressure_pa", "1003", "Pa", "100300"),
        ("altitude_m = 105.0", "pressure_pa = 100.3", "air.pressure_pa", "100.3", "Pa", "kilopascals"),
        ("[intake]", "temperature_c = 41\n[intake]", "water.temperature_c", "41", "from 0 to 40 °C", "Fahrenheit"),
        ("[intake]", "temperature_c = -1\n[intake]", "water.temperature_c", "-1", "from 0 to 40 °C", "°C"),
        (
            "[intake]",
            "temperature_c = 283\n[intake]",
            "water.temperature_c",
            "283",
            "°C",
            "kelvins? In °C it would be 9.85",
        ),
        ("= 0.3", "= 0", "demand.discharge_m3s", "0", "above 0, at most 1000 m³/s", "m³/s"),
        ("= 0.3", "= 30000", "demand.discharge_m3s", "30000", "m³/s", "litres a second"),
        (
            "315.0",
            "0.315",
            "pipes[1].outside_diameter_mm",
            "0.315",
            "from 10 to 4000 mm",
            "metres? In mm it would be 315",
        ),
        ("sdr = 17.0", "sdr = 17.0\nsupply_per_m = -1", "pipes[1].supply_per_m", "-1", "at least 0", "currency/m"),
        ("sdr = 17.0", "sdr = 17.0\nlaying_per_m = -0.5", "pipes[1].laying_per_m", "-0.5", "at least 0", "currency/m"),
        ("sdr = 17.0", "sdr = 17.0\nfixed_each = -1", "pipes[1].fixed_each", "-1", "at least 0", "currency"),
        ("[air]", "[prices]\nfixed_per_scheme = -1\n[air]", "prices.fixed_per_scheme", "-1", "at least 0", "currency"),
        ("= 0.3", "= 0.3\nbudget = 0", "demand.budget", "0", "above 0", "currency"),
        ("= 0.3", "= 0.3\nmost_pipes = 0", "demand.most_pipes", "0", "from 1 to 50", "correct"),
        ("= 0.5", "= 0.5\novality_pct = 11", "pipes[3].ovality_pct", "11", "from 0 to 10 %", "%"),
        ("= 0.5", "= 0.5\npoisson_ratio = 0.5", "pipes[3].poisson_ratio", "0.5", "at least 0, below 0.5", "correct"),
        ("= 2.5", "= 2.5\ncollapse_safety = 0.9", "limits.collapse_safety", "0.9", "from 1 to 10", "correct"),
        ("= 2.5", "= 2.5\ngravity_ms2 = 32.2", "limits.gravity_ms2", "32.2", "from 9.76 to 9.84 m/s²", "m/s²"),
        ("= 2.5", "= 2.5\npipe_load_hours = 0", "limits.pipe_load_hours", "0", "from 0.1 to 438300 h", "h"),
        ("[air]", "[losses]\nentrance = -0.5\n[air]", "losses.entrance", "-0.5", "from 0 to 20", "correct"),
        ("x = 480300.0", "x = 5e7", "intake.x", "50000000", "from -41000000 to 41000000", "unit of the CRS"),
        # choices
        ('"dem.tif"', '"dem.tif"\nsurface = "grund"', "terrain.surface", '"grund"', '"ground" or "canopy"', '"ground"'),
        (
            '"dem.tif"',
            '"dem.tif"\nvertical_unit = "feet"',
            "terrain.vertical_unit",
            '"feet"',
            '"m" or "ft" or "us-ft"',
            "",
        ),
        ("[air]", "[search]\nneighbours = 12\n[air]", "search.neighbours", "12", "8 or 16 or 32", "one of the choices"),
        ('"ISO 4427"', '"ISO 4437"', "pipes[1].table", '"ISO 4437"', '"ISO 4427" or "EN 10220"', '"ISO 4427"'),
        # unknown keys
        ("reserve_m", "reserv_m", "limits.reserv_m", "reserv_m = 2.5", "reserve_m", "did you mean 'reserve_m'?"),
        ("reserve_m", "reserve", "limits.reserve", "reserve = 2.5", "reserve_m", "did you mean 'reserve_m'?"),
        ("sdr = 17.0", "sdr = 17.0\nwall = 5", "pipes[1].wall", "wall = 5", "wall_mm", "did you mean 'wall_mm'?"),
        ("reserve_m = 2.5", "budget = 5", "limits.budget", "budget = 5", "reserve_m", "belongs under [demand]"),
        ("[air]", "[foo]\na = 1\n[air]", "foo", "foo", "terrain, water, intake", "remove it"),
        ("[limits]", "[limit]", "limit", "limit", "limits", "did you mean 'limits'?"),
        ('title = "Test site"', 'titles = "x"', "titles", 'titles = "x"', "title", "did you mean 'title'?"),
        ("reserve_m = 2.5", "zzz = 5", "limits.zzz", "zzz = 5", "reserve_m", "remove it"),
        # missing
        ("lowest_level_m = 98.8\n", "", "water.lowest_level_m", "", "a number", "add 'lowest_level_m"),
        (
            "lowest_level_m = 98.8",
            "# lowest_level_m = 98.8",
            "water.lowest_level_m",
            "",
            "a number",
            "take away the '#' in line 8",
        ),
        ("outside_diameter_mm = 273.0\n", "", "pipes[2].outside_diameter_mm", "", "mm", "in [[pipes]]"),
        ('file = "dem.tif"\n', "", "terrain.file", "", "text", "under [terrain]"),
    ],
)
def test_one_fault_one_problem(one, old, new, key, found, allowed, remedy):
    problem, line = one((old, new))
    assert problem.key == key
    assert problem.found == found
    assert allowed in problem.allowed
    assert remedy in problem.remedy
    named = key.rpartition(".")[2]
    missing = not found
    assert named in line or (missing and line.startswith(("[", "#")))


@pytest.mark.parametrize("section", ["terrain", "water", "intake", "outlet", "pipes"])
def test_a_missing_table_is_named(refuse, section):
    text = "".join(
        f"[{name}]\n{body}\n" if name != "pipes" else f"[[pipes]]\n{body}\n"
        for name, body in {
            "terrain": 'file = "dem.tif"',
            "water": "lowest_level_m = 9.0",
            "intake": "x = 1.0\ny = 1.0\nmouth_level_m = 8.0",
            "outlet": "x = 2.0\ny = 2.0",
            "pipes": 'table = "ISO 4427"\noutside_diameter_mm = 315.0\nsdr = 17.0',
        }.items()
        if name != section
    )
    problem = refuse(text=text)[section]
    assert "missing" in problem.what
    assert f"[{section}]" in problem.remedy
    assert problem.line is None


def test_a_missing_table_that_stands_commented_out_is_found(refuse):
    problems = refuse(
        ("[outlet]", "# [outlet]"), ("x = 480411.0", "# x = 480411.0"), ("y = 6149761.0\nlevel_m = 93.3", "")
    )
    assert problems["outlet"].line == 15
    assert "line 15" in problems["outlet"].remedy


@pytest.mark.parametrize(
    ("text", "key", "found"),
    [
        ("water = 3\n", "water", "3"),
        ('air = "thin"\n', "air", '"thin"'),
        ("pipes = 3\n", "pipes", "3"),
        ("pipes = []\n", "pipes", "[]"),
        ("pipes = [3]\n", "pipes[1]", "3"),
    ],
)
def test_what_should_be_a_table_and_is_not(refuse, text, key, found):
    problem = refuse(text=text)[key]
    assert problem.found == found
    assert problem.line == 1
    assert "table" in problem.allowed


def test_one_pipes_head_with_single_brackets(refuse):
    problem = refuse(text="[pipes]\nsdr = 11.0\n")["pipes"]
    assert "[[pipes]]" in problem.remedy


def test_too_many_pipes(refuse):
    entry = '[[pipes]]\ntable = "ISO 4427"\noutside_diameter_mm = 315.0\nsdr = 17.0\nname = "{}"\n'
    problem = refuse(text="".join(entry.format(n) for n in range(201)))["pipes"]
    assert "201" in problem.found
    assert "1 to 200" in problem.allowed


def test_numbers_beyond_a_float_are_refused(one):
    problem, _ = one(("98.8", "1" + "0" * 400))
    assert problem.key == "water.lowest_level_m"
