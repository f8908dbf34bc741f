"""Where a problem stands."""

from pathlib import Path

from routing.errors import InputError
from routing.terrain.telling import Teller


def test_with_a_site_file_key_and_line_are_named():
    error = Teller(Path("dem.tif"), Path("site.toml"), {"terrain.file": 4}).error("terrain.file", "Wrong.")
    assert isinstance(error, InputError)
    assert error.problems[0].where == "site.toml:4 [terrain.file]"


def test_without_one_the_dem_is_named():
    assert Teller(Path("dem.tif")).error("terrain.file", "Wrong.").problems[0].where == "dem.tif"
