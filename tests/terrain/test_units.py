"""Units of height."""

from pathlib import Path

import pytest

from routing.errors import TerrainError
from routing.terrain.telling import Teller
from routing.terrain.units import METRES_PER_UNIT, UnitSaid, read_unit_text, settle_unit, unit_of_size

TELLER = Teller(Path("dem.tif"), Path("site.toml"), {"terrain.vertical_unit": 7})


@pytest.mark.parametrize(
    ("text", "unit", "exact"),
    [
        ("m", "m", True),
        ("Metre", "m", True),
        ("meters", "m", True),
        ("ft", "ft", False),
        ("Feet", "ft", False),
        ("foot (International)", "ft", True),
        ("US survey foot", "us-ft", True),
        ("U.S. Survey Feet", "us-ft", True),
        ("ftUS", "us-ft", True),
        ("us-ft", "us-ft", True),
        ("foot_us", "us-ft", True),
        ("cm", "cm", True),
    ],
)
def test_units_in_words(text, unit, exact):
    said = read_unit_text(text, "the band")
    assert (said.unit, said.exact) == (unit, exact)


@pytest.mark.parametrize("text", [None, "", "degree", "elevation", "kelvin"])
def test_words_that_are_no_unit_of_height(text):
    assert read_unit_text(text, "the band") is None


def test_sizes_of_the_feet():
    # NIST Special Publication 811, appendix B.8 (from memory): 1 ft = 0.3048 m exactly; 1 US survey ft = 0.3048006 m.
    assert METRES_PER_UNIT["ft"] == 0.3048
    assert METRES_PER_UNIT["us-ft"] == pytest.approx(0.304800609601, rel=1e-11)


def test_unit_of_size_names_the_usual_ones_and_keeps_others():
    assert unit_of_size(1200 / 3937, "foot", "axis").unit == "us-ft"
    assert unit_of_size(0.3047972654, "Clarke's foot", "axis").unit == "Clarke's foot"


def test_agreement_takes_the_one_that_says_which_foot():
    band, axis = read_unit_text("ft", "band"), unit_of_size(1200 / 3937, "US survey foot", "axis")
    unit = settle_unit([band, axis], TELLER)
    assert unit.unit == "us-ft"
    assert "band" in unit.source
    assert "axis" in unit.source
    assert unit.assumptions == ()


def test_bare_feet_are_told():
    unit = settle_unit([read_unit_text("feet", "band")], TELLER)
    assert unit.metres == 0.3048
    assert "2 ppm" in unit.assumptions[0]


@pytest.mark.parametrize(
    "said",
    [
        [read_unit_text("ft", "band"), UnitSaid("m", 1.0, "the CRS")],
        [read_unit_text("us-ft", "band"), UnitSaid("ft", 0.3048, "the CRS")],
    ],
)
def test_contradiction_names_both(said):
    with pytest.raises(TerrainError) as caught:
        settle_unit(said, TELLER)
    problem = caught.value.problems[0]
    assert "band" in problem.found
    assert "the CRS" in problem.found
    assert (problem.file, problem.key, problem.line) == ("site.toml", "terrain.vertical_unit", 7)


def test_unknown_unit_is_an_error_only_where_needed():
    with pytest.raises(TerrainError, match=r"set terrain\.vertical_unit"):
        settle_unit([], TELLER)
    assert settle_unit([], TELLER, needed=False).unit == "unknown"
