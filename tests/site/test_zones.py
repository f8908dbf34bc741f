"""The zones of a site file: read in full, and each slip refused by name and line."""

from __future__ import annotations

import pytest

from routing.errors import SiteError
from routing.site import load_site

ZONES = """
[[zones]]
name = "bank"
file = "dem.tif"

[[zones]]
name = "bog"
file = "dem.tif"
layer = "wet"
kind = "cost"
cost_factor = 2.5
"""
# Any file serves: what is in it is read later.
LAST = "roughness_mm = 0.5\n"


@pytest.fixture
def refuse_zones(make):
    """Load a site file with zones spoilt, and return the one problem with the text of its line."""

    def load(*replacements):
        zones = ZONES
        for old, new in replacements:
            assert old in zones
            zones = zones.replace(old, new, 1)
        path = make((LAST, LAST + zones))
        with pytest.raises(SiteError) as caught:
            load_site(path)
        (problem,) = caught.value.problems
        assert problem.found
        assert problem.allowed
        assert problem.remedy
        return problem, path.read_text(encoding="utf-8").split("\n")[problem.line - 1]

    return load


def test_zones_are_read_with_key_and_line(make):
    path = make((LAST, LAST + ZONES))
    site = load_site(path)
    bank, bog = site.zones
    assert (bank.name, bank.kind, bank.layer, bank.cost_factor, bank.key) == (
        "bank",
        "barred",
        None,
        1.0,
        "zones[1].file",
    )
    assert (bog.name, bog.kind, bog.layer, bog.cost_factor, bog.key) == ("bog", "cost", "wet", 2.5, "zones[2].file")
    lines = path.read_text(encoding="utf-8").split("\n")
    assert all(lines[zone.line - 1] == 'file = "dem.tif"' for zone in site.zones)
    assert bank.line < bog.line
    assert bank.file == path.parent.resolve() / "dem.tif"
    assert "zone 1: barred as drawn, with no distance kept from the edge (zones.file)." in site.assumptions
    assert "No pipe has a price of laying, so cost zones change nothing (pipes.laying_per_m)." in site.assumptions


def test_a_file_without_zones_has_none(make):
    site = load_site(make())
    assert site.zones == ()
    assert not any("zone" in sentence for sentence in site.assumptions)


@pytest.mark.parametrize(
    ("old", "new", "key", "what", "line"),
    [
        ("cost_factor = 2.5", "cost_factor = 0.05", "zones[2].cost_factor", "out of range", "cost_factor = 0.05"),
        ("cost_factor = 2.5", "cost_factor = 101", "zones[2].cost_factor", "out of range", "cost_factor = 101"),
        ("cost_factor = 2.5", "", "zones[2].cost_factor", "not by how much", "[[zones]]"),
        ('kind = "cost"', "", "zones[2].cost_factor", "the zone is barred", "cost_factor = 2.5"),
        ('kind = "cost"', 'kind = "barred"', "zones[2].cost_factor", "the zone is barred", "cost_factor = 2.5"),
        ('kind = "cost"', 'kind = "bared"', "zones[2].kind", "not one of the choices", 'kind = "bared"'),
        ('name = "bog"', 'name = "bank"', "zones[2].name", "two zones have the same name", 'name = "bank"'),
        ('name = "bog"', 'name = ""', "zones[2].name", "must not be empty", 'name = ""'),
        ('file = "dem.tif"', 'file = "den.tif"', "zones[1].file", "there is no such file", 'file = "den.tif"'),
        ("layer", "layers", "zones[2].layers", "unknown key", 'layers = "wet"'),
    ],
)
def test_slips_are_refused_by_key_and_line(refuse_zones, old, new, key, what, line):
    problem, text = refuse_zones((old, new))
    assert problem.key == key
    assert what in problem.what
    assert text == line


def test_a_missing_name_and_file_are_told(make):
    path = make((LAST, LAST + '\n[[zones]]\nkind = "barred"\n'))
    with pytest.raises(SiteError) as caught:
        load_site(path)
    assert {problem.key for problem in caught.value.problems} == {"zones[1].name", "zones[1].file"}
    assert all("in [[zones]]" in problem.remedy for problem in caught.value.problems)


@pytest.mark.parametrize(
    ("text", "key", "what"),
    [
        ("[zones]\n", "zones", "zones must be a table"),
        ("[zones]\nname = 'a'\n", "zones", "zones must be a table"),
    ],
)
def test_a_single_table_is_refused(make, text, key, what):
    path = make((LAST, LAST + text))
    with pytest.raises(SiteError) as caught:
        load_site(path)
    (problem,) = caught.value.problems
    assert (problem.key, problem.what) == (key, what)
    assert problem.remedy == "write each zone as a table of its own, headed [[zones]]"
