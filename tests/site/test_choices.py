"""Ends left open: which keys go together, and what is said where they do not."""

from __future__ import annotations

import pytest

from routing.site import load_site

INTAKE = "x = 480300.0\ny = 6149750.0\nmouth_level_m = 98.0"
PLACE = "x = 480411.0\ny = 6149761.0\n"
POINT = "x = 480300.0\ny = 6149750.0"
BED = ('file = "dem.tif"', 'file = "dem.tif"\nwater_shown = "bed"')


def shore(*keys):
    """Replace the intake by one anywhere along the shore."""
    return INTAKE, "\n".join(['kind = "shore"', POINT, *keys])


def outlet(*keys):
    """Replace the place of the outlet by other keys."""
    return PLACE, "\n".join(keys) + "\n"


@pytest.fixture
def shapes(tmp_path):
    """A file that exists; it is not opened here."""
    (tmp_path / "stream.geojson").write_text("{}", encoding="utf-8")


def test_ends_are_points_unless_said_otherwise(make):
    site = load_site(make())
    assert (site.intake.kind, site.intake.underwater_length_m) == ("point", None)
    assert (site.outlet.kind, site.outlet.beyond_toe_m) == ("point", 0.0)
    assert not [text for text in site.assumptions if "shore" in text]


def test_a_shore_with_its_underwater_length(make):
    site = load_site(make(shore("underwater_length_m = 12.5")))
    assert (site.intake.kind, site.intake.underwater_length_m, site.intake.mouth_level_m) == ("shore", 12.5, None)
    assert (site.intake.at.x, site.intake.at.key) == (480300.0, "intake.x")
    told = " ".join(site.assumptions)
    assert "The shore of the water that the DEM shows stands for the shore at the lowest level" in told
    assert "one outside diameter below the lowest level" in told


def test_a_mouth_level_that_is_given_is_not_assumed(make):
    site = load_site(make(BED, shore("underwater_length_m = 0", "mouth_level_m = 97.5")))
    assert site.intake.mouth_level_m == 97.5
    assert not [text for text in site.assumptions if "shore" in text or "diameter below" in text]


def test_on_a_bed_the_underwater_length_may_be_measured(make):
    assert load_site(make(BED, shore())).intake.underwater_length_m is None


def test_a_water_surface_hides_the_underwater_length(one):
    problem, _ = one(shore())
    assert problem.key == "intake.underwater_length_m"
    assert "cannot be measured" in problem.what
    assert 'water_shown = "surface"' in problem.found
    assert "underwater_length_m = ..." in problem.remedy


def test_a_point_has_no_underwater_length(one):
    problem, line = one((INTAKE, INTAKE + "\nunderwater_length_m = 10.0"))
    assert problem.key == "intake.underwater_length_m"
    assert line == "underwater_length_m = 10.0"
    assert "no kind is given" in problem.found
    assert 'kind = "shore"' in problem.remedy


def test_a_shore_needs_its_point(one):
    problem, _ = one((INTAKE, 'kind = "shore"\nunderwater_length_m = 5.0'))
    assert problem.what == "the intake has no place"


@pytest.mark.parametrize("kind", ["line", "polygon"])
def test_an_outlet_on_shapes(make, shapes, kind):
    site = load_site(make(outlet(f'kind = "{kind}"', 'file = "stream.geojson"', 'layer = "a"')))
    assert (site.outlet.kind, site.outlet.at.key, site.outlet.at.layer) == (kind, "outlet.file", "a")
    assert site.outlet.at.file.name == "stream.geojson"


def test_an_outlet_anywhere(make):
    path = make(outlet('kind = "anywhere"', "beyond_toe_m = 40"))
    site = load_site(path)
    assert (site.outlet.kind, site.outlet.beyond_toe_m, site.outlet.at.x) == ("anywhere", 40.0, None)
    assert site.outlet.at.key == "outlet.kind"
    assert path.read_text().splitlines()[site.outlet.at.line - 1] == 'kind = "anywhere"'


@pytest.mark.parametrize(("kind", "shapes_word"), [("line", "lines"), ("polygon", "polygons")])
def test_shapes_without_a_file(one, kind, shapes_word):
    problem, _ = one(outlet(f'kind = "{kind}"'))
    assert problem.key == "outlet.file"
    assert problem.found == f'kind = "{kind}" without file'
    assert shapes_word in problem.allowed


def test_shapes_and_a_point(refuse, shapes):
    problems = refuse(outlet('kind = "line"', 'file = "stream.geojson"', "x = 480411.0", "y = 6149761.0"))
    assert list(problems) == ["outlet.x"]
    assert problems["outlet.x"].found == "x, y"
    assert problems["outlet.x"].remedy == 'remove x and y, or set kind = "point"'


def test_anywhere_and_a_place(one, shapes):
    problem, line = one(outlet('kind = "anywhere"', 'file = "stream.geojson"'))
    assert problem.key == "outlet.file"
    assert line == 'file = "stream.geojson"'
    assert problem.allowed == "no place: every place is tried"


def test_a_file_that_is_not_there(one):
    problem, _ = one(outlet('kind = "line"', 'file = "stream.gpkg"'))
    assert problem.what == "there is no such file"


@pytest.mark.parametrize("keys", [("beyond_toe_m = 40.0", *PLACE.split("\n")[:2])])
def test_a_toe_distance_for_a_point(one, keys):
    problem, line = one(outlet(*keys))
    assert problem.key == "outlet.beyond_toe_m"
    assert line == "beyond_toe_m = 40.0"
    assert 'kind = "anywhere"' in problem.remedy


def test_a_kind_that_does_not_exist_is_told_once(one):
    problem, _ = one(outlet('kind = "anywere"'))
    assert problem.key == "outlet.kind"
    assert problem.remedy == 'did you mean "anywhere"?'
