"""The two ends: exactly one way of giving each, nothing swapped, not both at one place."""

from __future__ import annotations

import pytest

from routing.site import load_site

INTAKE = "x = 480300.0\ny = 6149750.0"
OUTLET = "x = 480411.0\ny = 6149761.0"


def test_more_than_one_way(one):
    problem, line = one((INTAKE, f"{INTAKE}\nlon = 2.7"))
    assert problem.key == "intake"
    assert line == "[intake]"
    assert problem.found == "x, y, lon"
    assert "one of the three ways" in problem.allowed
    assert "keep x and y" in problem.remedy


@pytest.mark.parametrize("section", ["intake", "outlet"])
def test_no_way(one, section):
    problem, line = one(({"intake": INTAKE, "outlet": OUTLET}[section] + "\n", ""))
    assert problem.key == section
    assert line == f"[{section}]"
    assert "no place" in problem.what
    assert f"under [{section}]" in problem.remedy


def test_no_way_but_commented_out(one):
    problem, line = one((INTAKE, "# x = 1.0\n# y = 2.0"))
    assert problem.key == "intake.x"
    assert line == "# x = 1.0"
    assert "lines 11 and 12" in problem.remedy


@pytest.mark.parametrize(
    ("new", "missing", "there"),
    [("x = 1.0", "y", "x"), ("y = 1.0", "x", "y"), ("lon = 1.0", "lat", "lon"), ("lat = 1.0", "lon", "lat")],
)
def test_half_a_point(one, new, missing, there):
    problem, line = one((OUTLET, new))
    assert problem.key == f"outlet.{missing}"
    assert line == "[outlet]"
    assert problem.what == f"{there} is given without {missing}"
    assert problem.found == f"{there} alone"
    assert f"add '{missing} = ...'" in problem.remedy


@pytest.mark.parametrize(
    ("lon", "lat", "key", "hint"),
    [
        ("55.5", "102.7", "lat", "swapped"),
        ("480300.0", "55.5", "lon", "x and y"),
        ("2.7", "6149750.0", "lat", "x and y"),
        ("181.0", "55.5", "lon", "unit is °"),
    ],
)
def test_ranges_of_lon_and_lat_with_a_hint(one, lon, lat, key, hint):
    problem, line = one((INTAKE, f"lon = {lon}\nlat = {lat}"))
    assert problem.key == f"intake.{key}"
    assert line.startswith(key)
    assert "°" in problem.allowed
    assert hint in problem.remedy


def test_swapped_in_one_of_the_two_ends(one):
    problem, line = one((INTAKE, "lon = 2.71\nlat = 55.49"), (OUTLET, "lon = 55.49\nlat = 2.712"))
    assert problem.key == "outlet.lon"
    assert line == "lon = 55.49"
    assert "swapped" in problem.remedy
    assert "at most 2°" in problem.allowed


def test_far_apart_without_being_swapped(one):
    problem, _ = one((INTAKE, "lon = 2.71\nlat = 55.49"), (OUTLET, "lon = 7.71\nlat = 55.49"))
    assert problem.found == "5° apart"
    assert "check both" in problem.remedy


def test_both_ends_at_one_place(one):
    problem, line = one((OUTLET, INTAKE))
    assert problem.key == "outlet.x"
    assert "same place" in problem.what
    assert line == "x = 480300.0"


def test_both_sides_of_the_180th_meridian_are_near(make):
    site = load_site(make((INTAKE, "lon = 179.9995\nlat = -17"), (OUTLET, "lon = -179.9995\nlat = -17")))
    assert site.intake.at.lon == 179.9995
    assert site.outlet.at.key == "outlet.lon"


def test_a_point_from_a_file(make, one):
    path = make((INTAKE, 'file = "dem.tif"\nlayer = "in"'))
    at = load_site(path).intake.at
    assert (at.x, at.lon, at.layer) == (None, None, "in")
    assert at.file == path.parent / "dem.tif"
    assert (at.key, at.line) == ("intake.file", 11)
    problem, line = one((INTAKE, 'file = "points.gpkg"'))
    assert problem.key == "intake.file"
    assert "no such file" in problem.what
    assert "points.gpkg" in line
